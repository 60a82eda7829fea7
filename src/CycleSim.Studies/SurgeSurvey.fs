namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// One thing that eats surge margin, as a share of the working line's pressure ratio.
type MarginAllowance = {
    Name: string
    Allowance: float
    /// Random, engine to engine: combines with the others of its kind by root of the sum of squares.
    Random: bool
}

/// Condition of the survey at which a compressor is nearest to surge.
type ThinnestPoint = {
    PressureAltitude: float<m>
    Mach: float
    IsaOffset: float<K>
    /// Net thrust over that of the rating at this condition.
    ThrustShare: float
    /// (PRs/PR) - 1 at constant corrected flow; NaN where the surge line of that flow is off the map.
    MarginConstantFlow: float
    /// (PRs/Ws)/(PR/W) - 1 at constant corrected speed.
    MarginConstantSpeed: float
    RelativeCorrectedSpeed: float
}

/// What a compressor needs against what it has.
type MarginBudget = {
    Compressor: string
    Allowances: IReadOnlyList<MarginAllowance>
    /// Sum of the systematic allowances and the root of the sum of squares of the random ones.
    Required: float
    Thinnest: ThinnestPoint
    /// Available less required, constant-flow definition.
    Slack: float
}

/// Surge margins over an envelope of flight conditions and powers.
type SurgeSurveyResult = {
    Engine: string
    Rating: string
    /// Points solved, and points without solution with their reasons.
    Points: int
    WithoutSolution: IReadOnlyList<string>
    Budgets: IReadOnlyList<MarginBudget>
} with

    /// A row a compressor.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let budgets = Seq.toArray result.Budgets

        let number name unit (value: MarginBudget -> float) =
            TableColumn.Of(name, unit, budgets |> Array.map value)

        StudyTable.Of(
            $"Surge margins of {result.Engine}, from rating {result.Rating} down",
            [|
                yield! provenance
                KeyValuePair("points_solved", string result.Points)
                KeyValuePair("points_without_solution", string result.WithoutSolution.Count)
            |],
            [|
                TableColumn.OfText("compressor", budgets |> Array.map _.Compressor)
                number "surge_margin_constant_flow" "" _.Thinnest.MarginConstantFlow
                number "surge_margin_constant_speed" "" _.Thinnest.MarginConstantSpeed
                number "margin_required" "" _.Required
                number "margin_slack" "" _.Slack
                number "pressure_altitude_m" "m" (fun b -> float b.Thinnest.PressureAltitude)
                number "mach" "" _.Thinnest.Mach
                number "isa_offset_K" "K" (fun b -> float b.Thinnest.IsaOffset)
                number "thrust_share" "" _.Thinnest.ThrustShare
                number "relative_corrected_speed" "" _.Thinnest.RelativeCorrectedSpeed
            |]
        )

/// Where each compressor is nearest to surge, and whether that is enough.
[<AbstractClass; Sealed>]
type SurgeSurvey private () =

    static let systematic name allowance = {
        Name = name
        Allowance = allowance
        Random = false
    }

    static let random name allowance = {
        Name = name
        Allowance = allowance
        Random = true
    }

    /// <summary>
    /// Allowances for a compressor by its place: the fan, the last compressor, or one between. Middle of the ranges of
    /// textbook practice, from memory; put your own in their place where you have them.
    /// </summary>
    static member UsualAllowances(isFan: bool, isLast: bool) : IReadOnlyList<MarginAllowance> =
        if isFan then
            [|
                random "engine-to-engine scatter" 0.025
                random "control tolerance" 0.015
                systematic "deterioration" 0.02
                systematic "inlet distortion" 0.05
                systematic "transient" 0.01
                systematic "Reynolds number" 0.01
                systematic "clearance" 0.01
            |]
        elif isLast then
            [|
                random "engine-to-engine scatter" 0.025
                random "control tolerance" 0.015
                systematic "deterioration" 0.04
                systematic "inlet distortion" 0.01
                systematic "transient" 0.10
                systematic "Reynolds number" 0.01
                systematic "clearance" 0.02
            |]
        else
            [|
                random "engine-to-engine scatter" 0.025
                random "control tolerance" 0.015
                systematic "deterioration" 0.02
                systematic "inlet distortion" 0.02
                systematic "transient" 0.08
                systematic "Reynolds number" 0.01
                systematic "clearance" 0.01
            |]

    /// Systematic allowances add up; random ones by root of the sum of squares.
    static member Required(allowances: IReadOnlyList<MarginAllowance>) : float =
        let chosen isRandom =
            allowances |> Seq.filter (fun a -> a.Random = isRandom) |> Seq.map _.Allowance

        (chosen false |> Seq.sum) + sqrt (chosen true |> Seq.sumBy (fun a -> a * a))

    /// Corridor of a transport: at most 350 kt calibrated and Mach 0.88, at least Mach 0.3 above 6 000 m.
    static member private Conditions() = [|
        for altitude in [ 0.0; 1500.0; 3000.0; 6000.0; 9000.0; 11000.0; 12500.0 ] do
            let pressure = StandardAtmosphere.Pressure altitude

            let fastest =
                min 0.88 (Airspeed.MachFromCalibrated(350.0 * 1852.0 / 3600.0, pressure))

            let slowest = if altitude > 5999.0 then 0.4 else 0.0

            for step in 0..3 do
                let mach = slowest + (fastest - slowest) * float step / 3.0

                for isa in [ -20.0; 0.0; 20.0 ] do
                    yield FlightCondition.AtIsaOffset(altitude, mach, isa)
    |]

    /// <summary>
    /// Surveys an engine from sea level to 12 500 m, over the usual speed corridor, ISA - 20 to + 20 K, and from the rating
    /// down to a tenth of its thrust.
    /// </summary>
    /// <param name="allowances">allowances by the compressor's name; the usual ones for names left out</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <param name="cancellation">ends the survey between two points</param>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No point of the survey has a solution.</exception>
    static member Run
        (
            model: EngineModel,
            ratingName: string,
            [<Optional; DefaultParameterValue(null: IReadOnlyDictionary<string, IReadOnlyList<MarginAllowance>> | null)>] allowances:
                IReadOnlyDictionary<string, IReadOnlyList<MarginAllowance>> | null,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional>] cancellation: Threading.CancellationToken
        ) : SurgeSurveyResult =
        let rating = model.Rating ratingName
        let without = List<string>()
        let points = List<OperatingPoint * float>()

        let inputsAt flight = StudyPoints.inputs model flight loads

        for flight in SurgeSurvey.Conditions() do
            try
                let full = model.AtRating(&flight, rating, inputsAt flight)
                points.Add(full, 1.0)

                for share in [ 0.8; 0.6; 0.4; 0.25; 0.1 ] do
                    cancellation.ThrowIfCancellationRequested()

                    try
                        let point =
                            model.At(&flight, Quantity.NetThrust, full.NetThrust * share, inputsAt flight)

                        points.Add(point, share)
                    with :? NoSolutionException as none ->
                        without.Add none.Message
            with :? NoSolutionException as none ->
                without.Add none.Message

        if points.Count = 0 then
            raise (NoSolutionException($"no point of the survey has a solution; the first: {without[0]}"))

        let compressors = (fst points[0]).Compressors

        let budget index =
            let name = compressors[index].Name

            let chosen =
                match allowances with
                | null -> SurgeSurvey.UsualAllowances((name = "fan"), (index = compressors.Count - 1))
                | given ->
                    match given.TryGetValue name with
                    | true, own -> own
                    | _ -> SurgeSurvey.UsualAllowances((name = "fan"), (index = compressors.Count - 1))

            // Where the constant-flow margin does not exist the constant-speed one decides which point is thinner.
            let size (point: OperatingPoint, _) =
                let c = point.Compressors[index]

                if Double.IsNaN c.SurgeMarginConstantFlow then
                    c.SurgeMarginConstantSpeed
                else
                    c.SurgeMarginConstantFlow

            let worst = points |> Seq.minBy size
            let point, share = worst
            let c = point.Compressors[index]
            let required = SurgeSurvey.Required chosen

            {
                Compressor = name
                Allowances = chosen
                Required = required
                Thinnest = {
                    PressureAltitude = point.Flight.PressureAltitude * 1.0<m>
                    Mach = point.Flight.Mach
                    IsaOffset = point.Flight.IsaOffset * 1.0<K>
                    ThrustShare = share
                    MarginConstantFlow = c.SurgeMarginConstantFlow
                    MarginConstantSpeed = c.SurgeMarginConstantSpeed
                    RelativeCorrectedSpeed = c.RelativeCorrectedSpeed
                }
                Slack = size worst - required
            }

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            Points = points.Count
            WithoutSolution = without
            Budgets = Array.init compressors.Count budget
        }
