namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// What one worn part costs of the EGT margin.
type EgtShare = {
    Part: WornPart
    /// Change of the margin from the exact derivative, and from the part's wear alone solved in full; NaN where that has no point.
    FirstOrder: float<K>
    Alone: float<K>
}

/// EGT margin of an engine, new and as it is.
type EgtMarginResult = {
    Engine: string
    Rating: string
    PressureAltitude: float<m>
    Mach: float
    /// Limit of the gas temperature behind the first turbine (station 45).
    Limit: float<K>
    /// Outside temperature at which the margin is taken: the corner of the flat rating.
    Corner: float<K>
    /// Flat thrust, held by new and worn engine alike.
    Thrust: float<N>
    New: OperatingPoint
    Worn: OperatingPoint
    NewMargin: float<K>
    WornMargin: float<K>
    Shares: IReadOnlyList<EgtShare>
    /// Outside temperatures at which new and worn engine reach the limit with the flat thrust; NaN where they never do.
    NewOutsideLimit: float<K>
    WornOutsideLimit: float<K>
} with

    /// A row for each worn part, the margins in the provenance.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let shares = Seq.toArray result.Shares


        StudyTable.Of(
            $"EGT margin of {result.Engine}, rating {result.Rating}",
            [|
                yield! provenance
                StudyTable.Entry("T45_limit_K", float result.Limit)
                StudyTable.Entry("margin_new_K", float result.NewMargin)
                StudyTable.Entry("margin_worn_K", float result.WornMargin)
            |],
            [|
                TableColumn.OfText("part", shares |> Array.map _.Part.Name)
                TableColumn.Of("change", "", shares |> Array.map _.Part.Change)
                TableColumn.Of("margin_change_first_order_K", "K", shares |> Array.map (fun s -> float s.FirstOrder))
                TableColumn.Of("margin_change_alone_K", "K", shares |> Array.map (fun s -> float s.Alone))
            |]
        )

/// EGT margin: what is left of the limit of the gas temperature at full rated thrust at the corner of the flat rating.
[<AbstractClass; Sealed>]
type EgtMargin private () =

    static member private LimitOf(rating: Rating, given: float<K>) : float<K> =
        if given > 0.0<K> then
            given
        else
            match rating.Limits |> Seq.tryFind (fun l -> l.Quantity = Quantity.T45) with
            | Some limit -> limit.Value * 1.0<K>
            | None ->
                raise (
                    WearException $"rating '{rating.Definition.Name}' has no limit on T45 (EGT); say what the limit is."
                )

    /// Outside temperature (K) at which the limit is met with a thrust; NaN where it never is.
    static member private OutsideLimit(model: EngineModel, inputs: float[], thrust: float, limit: float) : float =
        let matcher = Matcher model.Engine
        inputs.CopyTo(matcher.Inputs, 0)

        let problem =
            MatchingProblem.Break(
                InputLayout.Temperature,
                Limit(Quantity.NetThrust, thrust),
                ReadOnlySpan [| Limit(Quantity.T45, limit) |]
            )

        if (matcher.Solve problem).Solved then
            matcher.Inputs[InputLayout.Temperature]
        else
            nan

    /// <summary>
    /// EGT margin of a new and of a worn engine, what each worn part costs of it, and the outside temperature at which nothing is
    /// left. Both engines give the flat thrust, whatever the rating's other limits say.
    /// </summary>
    /// <param name="altitude">pressure altitude</param>
    /// <param name="worn">what has changed against new; empty for the new engine alone</param>
    /// <param name="egtLimit">limit of T45; that of the rating where 0</param>
    /// <exception cref="T:CycleSim.Studies.WearException">No limit on T45, or no such part.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The worn engine cannot give the flat thrust.</exception>
    static member Run
        (
            model: EngineModel,
            ratingName: string,
            altitude: float<m>,
            mach: float,
            worn: IReadOnlyList<WornPart>,
            [<Optional; DefaultParameterValue(0.0<K>)>] egtLimit: float<K>
        ) : EgtMarginResult =
        let rating = model.Rating ratingName
        let limit = EgtMargin.LimitOf(rating, egtLimit)
        let thrust = rating.FlatThrust(float altitude, mach)
        let corner = FlightCondition.AtIsaOffset(float altitude, mach, rating.FlatTo)

        let inputsWith (parts: IReadOnlyList<WornPart>) =
            let inputs = model.Inputs &corner
            Wear.Apply(model.Engine, parts, inputs)
            inputs

        let at parts =
            model.At(&corner, Quantity.NetThrust, thrust, inputsWith parts)

        let fresh = at [||]
        let influence = model.InfluenceOfLastPoint()

        let share (part: WornPart) = {
            Part = part
            FirstOrder =
                -influence.Of("T45_K", influence.Inputs[Wear.Input(model.Engine, part.Name)])
                * part.Change
                * 1.0<K>
            Alone =
                try
                    (fresh.T45 - (at [| part |]).T45) * 1.0<K>
                with :? NoSolutionException ->
                    nan * 1.0<K>
        }

        let shares = worn |> Seq.map share |> Seq.toArray
        let tired = at worn

        let outside parts =
            EgtMargin.OutsideLimit(model, inputsWith parts, thrust, float limit) * 1.0<K>

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            PressureAltitude = altitude
            Mach = mach
            Limit = limit
            Corner = corner.StaticTemperature * 1.0<K>
            Thrust = thrust * 1.0<N>
            New = fresh
            Worn = tired
            NewMargin = limit - fresh.T45 * 1.0<K>
            WornMargin = limit - tired.T45 * 1.0<K>
            Shares = shares
            NewOutsideLimit = outside [||]
            WornOutsideLimit = outside worn
        }
