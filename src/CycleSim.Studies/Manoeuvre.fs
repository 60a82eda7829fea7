namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// A condition that a manoeuvre passes through, and what sets the power there (SI; speeds relative to design).
type Waypoint = {
    PressureAltitude: float<m>
    Mach: float
    IsaOffset: float<K>
    Setting: Limit
}

/// A compressor at one place of a manoeuvre.
type ManoeuvreMargin = {
    Compressor: string
    /// (PRs/PR) - 1 at constant corrected flow, settled; NaN where the surge line of that flow is off the map.
    Settled: float
    /// The same just after the fuel step; NaN where there is no such point.
    AfterStep: float
}

/// One place along a manoeuvre.
type ManoeuvrePoint = {
    /// Place in waypoints: 0 at the first, 1 at the second, with fractions between.
    Place: float
    PressureAltitude: float<m>
    Mach: float
    IsaOffset: float<K>
    /// The settled point; null where there is none.
    Point: OperatingPoint | null
    /// Why there is no settled point, or none after the step; empty where there is.
    Reason: string
    Margins: IReadOnlyList<ManoeuvreMargin>
    /// Fuel flow over the settled one, stepped at held speeds, at which the first compressor meets its surge line (or the point
    /// ceases to exist for another reason, which SurgeReason says); NaN above 3.
    FuelRatioToSurge: float
    SurgeReason: string
}

/// Surge margins along a manoeuvre.
type ManoeuvreResult = {
    Engine: string
    /// Fuel flow just after the step over the settled one.
    FuelRatio: float
    Points: IReadOnlyList<ManoeuvrePoint>
} with

    /// The place at which a compressor is nearest to surge, and its margin there; just after the step where there is one.
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No place of the manoeuvre has a margin of this compressor.</exception>
    member result.Thinnest(compressor: string) : struct (ManoeuvrePoint * float) =
        let margin (point: ManoeuvrePoint) =
            point.Margins
            |> Seq.tryFind (fun m -> m.Compressor = compressor)
            |> Option.map (fun m -> if result.FuelRatio <> 1.0 then m.AfterStep else m.Settled)
            |> Option.filter Double.IsFinite

        let found =
            result.Points
            |> Seq.choose (fun p -> margin p |> Option.map (fun m -> struct (p, m)))
            |> Seq.toArray

        if found.Length = 0 then
            raise (NoSolutionException $"no place of the manoeuvre has a surge margin of '{compressor}'")

        found |> Array.minBy (fun struct (_, m) -> m)

    /// A row for each place and compressor.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rows = [|
            for point in result.Points do
                if point.Margins.Count = 0 then
                    point,
                    {
                        Compressor = ""
                        Settled = nan
                        AfterStep = nan
                    }

                for margin in point.Margins do
                    point, margin
        |]

        let numbers name unit (value: ManoeuvrePoint * ManoeuvreMargin -> float) =
            TableColumn.Of(name, unit, rows |> Array.map value)

        StudyTable.Of(
            $"Surge margins of {result.Engine} along a manoeuvre",
            [| yield! provenance; StudyTable.Entry("fuel_ratio", result.FuelRatio) |],
            [|
                numbers "place" "" (fun (p, _) -> p.Place)
                numbers "pressure_altitude_m" "m" (fun (p, _) -> float p.PressureAltitude)
                numbers "mach" "" (fun (p, _) -> p.Mach)
                numbers "isa_offset_K" "K" (fun (p, _) -> float p.IsaOffset)
                numbers "net_thrust_N" "N" (fun (p, _) ->
                    match p.Point with
                    | null -> nan
                    | point -> point.NetThrust)
                TableColumn.OfText("compressor", rows |> Array.map (fun (_, m) -> m.Compressor))
                numbers "surge_margin_settled" "" (fun (_, m) -> m.Settled)
                numbers "surge_margin_after_step" "" (fun (_, m) -> m.AfterStep)
                numbers "fuel_ratio_to_surge" "" (fun (p, _) -> p.FuelRatioToSurge)
                TableColumn.OfText("surge_reason", rows |> Array.map (fun (p, _) -> p.SurgeReason))
                TableColumn.OfText("reason", rows |> Array.map (fun (p, _) -> p.Reason))
            |]
        )

/// Distance to the surge line along a manoeuvre: settled points from waypoint to waypoint, and what a step of fuel does
/// before the spools have moved.
[<AbstractClass; Sealed>]
type Manoeuvre private () =

    static member private Between(a: Waypoint, b: Waypoint, share: float) : Waypoint =
        let mean (x: float<'u>) (y: float<'u>) = x + share * (y - x)

        {
            PressureAltitude = mean a.PressureAltitude b.PressureAltitude
            Mach = mean a.Mach b.Mach
            IsaOffset = mean a.IsaOffset b.IsaOffset
            Setting = Limit(a.Setting.Quantity, mean a.Setting.Value b.Setting.Value)
        }

    static member private Margins
        (point: OperatingPoint, after: OperatingPoint | null)
        : IReadOnlyList<ManoeuvreMargin> =
        point.Compressors
        |> Seq.mapi (fun k c -> {
            Compressor = c.Name
            Settled = c.SurgeMarginConstantFlow
            AfterStep =
                match after with
                | null -> nan
                | stepped -> stepped.Compressors[k].SurgeMarginConstantFlow
        })
        |> Seq.toArray
        :> _

    /// Largest step of fuel that has a point, by halving; and why there is none beyond.
    static member private ToSurge(model: EngineModel, point: OperatingPoint, inputs: float[]) : float * string =
        let attempt ratio =
            try
                model.AfterFuelStep(point, ratio, inputs) |> ignore
                None
            with :? NoSolutionException as none ->
                Some none.Message

        let rec grow good =
            let next = min 3.0 (good * 1.1)

            match attempt next with
            | Some reason -> Some(good, next, reason)
            | None when next >= 3.0 -> None
            | None -> grow next

        let rec halve good bad reason rounds =
            if rounds = 0 then
                good, reason
            else
                let middle = 0.5 * (good + bad)

                match attempt middle with
                | None -> halve middle bad reason (rounds - 1)
                | Some said -> halve good middle said (rounds - 1)

        match grow 1.0 with
        | None -> nan, ""
        | Some(good, bad, reason) -> halve good bad reason 14

    /// <summary>
    /// Surge margins along straight lines (in altitude, Mach number, ISA offset and power) between waypoints. At each place the
    /// settled point; with <paramref name="fuelRatio"/> other than 1 also the point just after the fuel flow has been stepped, while
    /// every spool still turns as it did, the worst moment of an acceleration; and the step that reaches the surge line.
    /// </summary>
    /// <param name="waypoints">at least two; neighbours set the power by the same quantity</param>
    /// <param name="places">places on each leg, its end included: 1 to 500</param>
    /// <param name="fuelRatio">fuel flow just after the step over the settled one, 0.5 to 2</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <param name="cancellation">ends the manoeuvre between two places</param>
    /// <exception cref="T:System.ArgumentException">Waypoints that make no line, or a number out of range.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No place of the manoeuvre has a solution.</exception>
    static member Run
        (
            model: EngineModel,
            waypoints: IReadOnlyList<Waypoint>,
            [<Optional; DefaultParameterValue(10)>] places: int,
            [<Optional; DefaultParameterValue(1.0)>] fuelRatio: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional>] cancellation: Threading.CancellationToken
        ) : ManoeuvreResult =
        if waypoints.Count < 2 then
            invalidArg (nameof waypoints) $"a manoeuvre needs at least two waypoints; {waypoints.Count} given"

        if places < 1 || places > 500 then
            invalidArg (nameof places) $"{places} places on a leg; expected 1 to 500"

        if not (fuelRatio >= 0.5 && fuelRatio <= 2.0) then
            invalidArg (nameof fuelRatio) $"a fuel ratio of {fuelRatio}; expected 0.5 to 2"

        for k in 1 .. waypoints.Count - 1 do
            if waypoints[k].Setting.Quantity <> waypoints[k - 1].Setting.Quantity then
                invalidArg
                    (nameof waypoints)
                    $"waypoint {k} sets {QuantityText.Name waypoints[k - 1].Setting.Quantity}, waypoint {k + 1} {QuantityText.Name waypoints[k].Setting.Quantity}; a line between them needs the same quantity"

        let at place (waypoint: Waypoint) =
            cancellation.ThrowIfCancellationRequested()

            let flight =
                FlightCondition.AtIsaOffset(float waypoint.PressureAltitude, waypoint.Mach, float waypoint.IsaOffset)

            let empty = {
                Place = place
                PressureAltitude = waypoint.PressureAltitude
                Mach = waypoint.Mach
                IsaOffset = waypoint.IsaOffset
                Point = null
                Reason = ""
                Margins = [||]
                FuelRatioToSurge = nan
                SurgeReason = ""
            }

            try
                let inputs = StudyPoints.inputs model flight loads

                let point =
                    model.At(&flight, waypoint.Setting.Quantity, waypoint.Setting.Value, inputs)

                let toSurge, surgeReason = Manoeuvre.ToSurge(model, point, inputs)

                let (after: OperatingPoint | null), reason =
                    if fuelRatio = 1.0 then
                        null, ""
                    else
                        try
                            model.AfterFuelStep(point, fuelRatio, inputs), ""
                        with :? NoSolutionException as none ->
                            null, none.Message

                {
                    empty with
                        Point = point
                        Reason = reason
                        Margins = Manoeuvre.Margins(point, after)
                        FuelRatioToSurge = toSurge
                        SurgeReason = surgeReason
                }
            with :? NoSolutionException as none -> { empty with Reason = none.Message }

        let points = [|
            at 0.0 waypoints[0]

            for leg in 0 .. waypoints.Count - 2 do
                for k in 1..places do
                    let share = float k / float places
                    at (float leg + share) (Manoeuvre.Between(waypoints[leg], waypoints[leg + 1], share))
        |]

        if points |> Array.forall (fun p -> isNull p.Point) then
            raise (NoSolutionException $"no place of the manoeuvre has a solution; the first: {points[0].Reason}")

        {
            Engine = model.Engine.Definition.Name
            FuelRatio = fuelRatio
            Points = points
        }
