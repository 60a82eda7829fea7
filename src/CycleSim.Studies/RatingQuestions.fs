namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// A limit of a rating and what a wanted thrust would need of it.
type RequiredLimit = {
    /// The limit as the rating has it (SI; speeds relative to design).
    Limit: Limit
    /// Its quantity at the wanted thrust.
    Needed: float
    /// Whether the rating holds the thrust back here.
    Exceeded: bool
}

/// What a rating would have to be for a thrust to be had at an airport.
type RequiredRating = {
    Engine: string
    Rating: string
    PressureAltitude: float<m>
    Mach: float
    OutsideTemperature: float<K>
    Wanted: float<N>
    /// What the rating gives there now, and which limit ("flat" or its name) holds it.
    Rated: float<N>
    Governing: string
    /// The point that gives the wanted thrust, whatever the limits.
    Point: OperatingPoint
    Limits: IReadOnlyList<RequiredLimit>
    /// Flat thrust now at this altitude and Mach number; the wanted thrust may lie above it.
    FlatThrust: float<N>
    /// Hottest outside temperature at which the rating gives the wanted thrust now; NaN where it never does.
    HottestNow: float<K>
    /// Why there is no such temperature; empty where there is.
    HottestReason: string
    /// Offset from ISA that the rating is flat to now, and the one that would give the wanted thrust here with the same sea-level
    /// thrust; NaN where none does, and FlatToReason says why.
    FlatToNow: float<K>
    FlatToNeeded: float<K>
    FlatToReason: string
    /// Sea-level static flat thrust that the needed limits would allow at the flat-to temperature of now.
    SeaLevelThrustNow: float<N>
    SeaLevelThrustNeeded: float<N>
}

/// One altitude and Mach number of a rating.
type RatingMapPoint = {
    PressureAltitude: float<m>
    Mach: float
    /// NaN where there is no point; see Reason.
    FlatThrust: float<N>
    BreakTemperature: float<K>
    BreakIsaOffset: float<K>
    /// The limit that is met at the break.
    Governing: string
    /// Loss of the flat thrust per kelvin over the first ten kelvin beyond the break.
    LapsePerKelvin: float</ K>
    Reason: string
}

/// A rating over altitude and Mach number.
type RatingMap = {
    Engine: string
    Rating: string
    Points: IReadOnlyList<RatingMapPoint>
} with

    /// A row for each altitude and Mach number.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rows = Seq.toArray result.Points

        let numbers name unit value =
            TableColumn.Of(name, unit, rows |> Array.map value)

        StudyTable.Of(
            $"Rating {result.Rating} of {result.Engine} over altitude and Mach number",
            provenance,
            [|
                numbers "pressure_altitude_m" "m" (fun r -> float r.PressureAltitude)
                numbers "mach" "" _.Mach
                numbers "flat_thrust_N" "N" (fun r -> float r.FlatThrust)
                numbers "break_temperature_K" "K" (fun r -> float r.BreakTemperature)
                numbers "break_isa_offset_K" "K" (fun r -> float r.BreakIsaOffset)
                TableColumn.OfText("governing", rows |> Array.map _.Governing)
                numbers "lapse_fraction_per_K" "1/K" (fun r -> float r.LapsePerKelvin)
                TableColumn.OfText("reason", rows |> Array.map _.Reason)
            |]
        )

/// What one load, or the damp, does to the break.
type BreakEffect = {
    Load: string
    BreakTemperature: float<K>
    /// Against dry air with the definition's own bleeds and offtakes.
    Shift: float<K>
    /// Thrust at the break of dry air with the definition's own loads.
    ThrustThere: float<N>
}

/// The questions asked of a rating the other way round, and over the envelope.
[<AbstractClass; Sealed>]
type RatingQuestions private () =

    static member private IsTemperature(quantity: Quantity) =
        match quantity with
        | Quantity.T4
        | Quantity.T41
        | Quantity.T45
        | Quantity.T5 -> true
        | _ -> false

    // The limits with those that the wanted thrust exceeds raised to what it needs.
    static member private Raised(limits: RequiredLimit seq) : Limit[] =
        limits
        |> Seq.map (fun l -> Limit(l.Limit.Quantity, max l.Limit.Value l.Needed))
        |> Seq.toArray

    /// <summary>
    /// What a rating would have to be for a thrust at an airport: each limit that it needs, the flat-to temperature or the
    /// sea-level thrust that amounts to, and the hottest temperature at which the rating gives it as it is.
    /// </summary>
    /// <param name="wanted">net thrust, above 0</param>
    /// <param name="temperature">outside temperature, 170 to 340 K</param>
    /// <param name="relativeHumidity">0 to 1</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or the engine has no solution at its corner.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The engine never gives this thrust here; the message says why.</exception>
    static member Required
        (
            model: EngineModel,
            ratingName: string,
            altitude: float<m>,
            mach: float,
            temperature: float<K>,
            wanted: float<N>,
            [<Optional; DefaultParameterValue(0.0)>] relativeHumidity: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : RequiredRating =
        let rating = model.Rating ratingName
        let flat = rating.FlatThrust(float altitude, mach)

        let here = StudyPoints.flight altitude mach temperature relativeHumidity
        let inputs = StudyPoints.inputs model here loads
        let now = model.AtRating(&here, rating, inputs)
        let point = model.At(&here, Quantity.NetThrust, float wanted, inputs)

        let limits =
            rating.Limits
            |> Seq.map (fun limit ->
                let needed = point.Value limit.Quantity

                {
                    Limit = limit
                    Needed = needed
                    Exceeded = needed > limit.Value * (1.0 + 1e-9)
                })
            |> Seq.toArray

        // The hottest temperature with the limits as they are: the break at the wanted thrust.
        let hottest, hottestReason =
            if float wanted > flat * (1.0 + 1e-9) then
                nan,
                $"the flat thrust at this altitude and Mach number is {flat / 1000.0:F2} kN; colder air does not give more"
            else
                let mutable outside = 0.0
                let mutable governing = -1
                let outcome = rating.Break(inputs, float wanted, &outside, &governing)

                if outcome.Solved && outside > FlightCondition.HighestTemperature then
                    nan,
                    $"it is had up to {FlightCondition.HighestTemperature} K, the hottest air considered, and beyond"
                elif outcome.Solved then
                    outside, ""
                else
                    nan, Diagnosis.Of(model.Engine, rating.Matcher, outcome)

        // With the limits raised as needed: the same sea-level thrust up to a hotter day, or more of it up to the same day.
        let raised = RatingQuestions.Raised limits

        let amended thrust flatTo =
            Rating(
                model.Engine,
                RatingDefinition(Name = rating.Definition.Name, Thrust = thrust, FlatTo = flatTo, Limits = raised)
            )

        let seaLevel = rating.FlatThrust(0.0, 0.0)

        let hasTemperature =
            raised |> Array.exists (fun l -> RatingQuestions.IsTemperature l.Quantity)

        // An answer counts only if the amended rating gives the wanted thrust: raised far enough, the limits may lie beyond what
        // the engine reaches at sea level, or the flat thrust here may be less than what is wanted.
        let answer thrust flatTo (value: Rating -> float) =
            if not hasTemperature then
                nan, "the rating has no gas temperature limit that a flat-to temperature would raise"
            else
                try
                    let rating = amended thrust flatTo
                    let given = model.AtRating(&here, rating, inputs).NetThrust

                    if given >= float wanted * (1.0 - 1e-7) then
                        value rating, ""
                    else
                        nan, $"the flat thrust here would then be {given / 1000.0:F2} kN"
                with
                | :? RatingException
                | :? NoSolutionException as none -> nan, none.Message

        let flatToNeeded, flatToReason = answer seaLevel nan _.FlatTo
        let seaLevelNeeded, _ = answer 0.0 rating.FlatTo (fun r -> r.FlatThrust(0.0, 0.0))

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            PressureAltitude = altitude
            Mach = mach
            OutsideTemperature = temperature
            Wanted = wanted
            Rated = now.NetThrust * 1.0<N>
            Governing = StudyPoints.governing now
            Point = point
            Limits = limits
            FlatThrust = flat * 1.0<N>
            HottestNow = hottest * 1.0<K>
            HottestReason = hottestReason
            FlatToNow = rating.FlatTo * 1.0<K>
            FlatToNeeded = flatToNeeded * 1.0<K>
            FlatToReason = flatToReason
            SeaLevelThrustNow = seaLevel * 1.0<N>
            SeaLevelThrustNeeded = seaLevelNeeded * 1.0<N>
        }

    /// <summary>
    /// Flat thrust, break temperature, governing limit and lapse over altitude and Mach number; a place without a point keeps its
    /// reason.
    /// </summary>
    /// <param name="altitudes">pressure altitudes, -2 000 to 32 000 m, at least one</param>
    /// <param name="machs">Mach numbers, at least one</param>
    /// <param name="relativeHumidity">0 to 1</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <param name="cancellation">ends the map between two places</param>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating.</exception>
    /// <exception cref="T:System.ArgumentException">No altitude, or no Mach number.</exception>
    static member Map
        (
            model: EngineModel,
            ratingName: string,
            altitudes: IReadOnlyList<float<m>>,
            machs: IReadOnlyList<float>,
            [<Optional; DefaultParameterValue(0.0)>] relativeHumidity: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional>] cancellation: Threading.CancellationToken
        ) : RatingMap =
        if altitudes.Count = 0 || machs.Count = 0 then
            invalidArg (nameof altitudes) "a map needs at least one altitude and one Mach number"

        let rating = model.Rating ratingName

        let place altitude mach =
            cancellation.ThrowIfCancellationRequested()

            try
                let found =
                    FlatRating.Run(model, ratingName, altitude, mach, [||], relativeHumidity, loads)

                {
                    PressureAltitude = altitude
                    Mach = mach
                    FlatThrust = found.FlatThrust
                    BreakTemperature = found.BreakTemperature
                    BreakIsaOffset = found.BreakIsaOffset
                    Governing = QuantityText.Name found.BreakLimit.Quantity
                    LapsePerKelvin = found.LapsePerKelvin
                    Reason = ""
                }
            with
            | :? NoSolutionException
            | :? RatingException as none -> {
                PressureAltitude = altitude
                Mach = mach
                FlatThrust = nan * 1.0<N>
                BreakTemperature = nan * 1.0<K>
                BreakIsaOffset = nan * 1.0<K>
                Governing = ""
                LapsePerKelvin = nan * 1.0< / K>
                Reason = none.Message
              }

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            Points = [|
                for altitude in altitudes do
                    for mach in machs do
                        place altitude mach
            |]
        }

    /// <summary>
    /// What moves the break: damp air (60 and 100 % relative humidity), one per cent of the flow from each port that leads
    /// overboard, 100 kW from each spool; each alone, the flat thrust held.
    /// </summary>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or the engine has no solution at its corner.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">Flat thrust and limits meet at no temperature with one of the loads.</exception>
    static member BreakEffects
        (model: EngineModel, ratingName: string, altitude: float<m>, mach: float)
        : IReadOnlyList<BreakEffect> =
        let run humidity (loads: Action<float[]> | null) =
            FlatRating.Run(model, ratingName, altitude, mach, [||], humidity, loads)

        let plain = run 0.0 null
        let rating = model.Rating ratingName

        let effect name humidity (loads: Action<float[]> | null) =
            let found = run humidity loads

            let flight = StudyPoints.flight altitude mach plain.BreakTemperature humidity
            let inputs = StudyPoints.inputs model flight loads

            {
                Load = name
                BreakTemperature = found.BreakTemperature
                Shift = found.BreakTemperature - plain.BreakTemperature
                ThrustThere = model.AtRating(&flight, rating, inputs).NetThrust * 1.0<N>
            }

        let add index amount =
            Action<float[]>(fun inputs -> inputs[index] <- inputs[index] + amount)

        [|
            effect "none" 0.0 null

            if model.Engine.Definition.Gas.CarriesHumidity then
                effect "60 % relative humidity" 0.6 null
                effect "100 % relative humidity" 1.0 null

            for k in 0 .. model.Engine.Ports.Length - 1 do
                let port = model.Engine.Ports[k].Port

                if port.To = AirDestination.Overboard && not port.Scheduled then
                    effect
                        $"1 %% of the flow from {port.Name} ({port.From})"
                        0.0
                        (add (model.Layout.PortFraction k) 0.01)

            for k in 0 .. model.Engine.Spools.Length - 1 do
                effect $"100 kW from spool {model.Engine.Spools[k].Name}" 0.0 (add (model.Layout.PowerOfftake k) 1e5)
        |]
