namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// One point of a throttle loop, or of a search over altitude.
type ThrottleRow = {
    PressureAltitude: float<m>
    /// Thrust asked for; NaN where the rating has none here.
    NetThrust: float<N>
    /// The operating point; null where there is none.
    Point: OperatingPoint | null
    /// Why there is no point; empty where there is one.
    Reason: string
}

/// Where the specific fuel consumption is least.
type LeastConsumption = {
    /// "inside" the range, at its "lowest" or "highest" end, or at the "tropopause", where the slope jumps.
    Where: string
    Point: OperatingPoint
    /// Slope of the consumption there: over thrust for a loop (kg/(N s) per N), over altitude (per m) for an altitude.
    Slope: float
    /// How closely the place is known: newtons for a loop, metres for an altitude.
    Tolerance: float
}

/// Specific fuel consumption against thrust at one condition, and the bottom of its bucket.
type ThrottleLoop = {
    Engine: string
    Rating: string
    PressureAltitude: float<m>
    Mach: float
    IsaOffset: float<K>
    /// Thrust of the rating here, the highest of the loop.
    RatedThrust: float<N>
    Rows: IReadOnlyList<ThrottleRow>
    Least: LeastConsumption
}

/// Specific fuel consumption over altitude at one Mach number and thrust, and where it is least.
type BestAltitude = {
    Engine: string
    Mach: float
    IsaOffset: float<K>
    Rows: IReadOnlyList<ThrottleRow>
    Least: LeastConsumption
}

module internal ThrottleTable =
    let columns (rows: IReadOnlyList<ThrottleRow>) : TableColumn[] =
        let numbers name unit (value: OperatingPoint -> float) =
            let number (row: ThrottleRow) =
                match row.Point with
                | null -> nan
                | point -> value point

            TableColumn.Of(name, unit, rows |> Seq.map number |> Seq.toArray)

        let spools =
            rows
            |> Seq.tryPick (fun r ->
                match r.Point with
                | null -> None
                | point -> Some point.Spools.Count)
            |> Option.defaultValue 0

        [|
            TableColumn.Of("pressure_altitude_m", "m", [| for r in rows -> float r.PressureAltitude |])
            TableColumn.Of("net_thrust_N", "N", [| for r in rows -> float r.NetThrust |])
            numbers "fuel_flow_kg_per_s" "kg/s" _.FuelFlow
            numbers "sfc_kg_per_N_s" "kg/(N s)" _.Sfc
            for spool in 0 .. spools - 1 do
                numbers $"N{spool + 1}_relative_speed" "" (fun p -> p.Spools[spool].RelativeSpeed)
            numbers "engine_pressure_ratio" "" _.EnginePressureRatio
            numbers "T41_K" "K" _.T41
            numbers "T45_K" "K" _.T45
            numbers "overall_efficiency" "" _.OverallEfficiency
            TableColumn.OfText("reason", [| for r in rows -> r.Reason |])
        |]


    let least (found: LeastConsumption) = [|
        KeyValuePair("least_sfc_where", found.Where)
        StudyTable.Entry("least_sfc_kg_per_N_s", found.Point.Sfc)
        StudyTable.Entry("least_sfc_net_thrust_N", found.Point.NetThrust)
        StudyTable.Entry("least_sfc_pressure_altitude_m", found.Point.Flight.PressureAltitude)
    |]

type ThrottleLoop with

    /// The rows, and the bottom of the bucket in the provenance.
    member loop.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        StudyTable.Of(
            $"Throttle loop of {loop.Engine}",
            [|
                yield! provenance
                StudyTable.Entry("mach", loop.Mach)
                StudyTable.Entry("isa_offset_K", float loop.IsaOffset)
                yield! ThrottleTable.least loop.Least
            |],
            ThrottleTable.columns loop.Rows
        )

type BestAltitude with

    /// The rows, and the best altitude in the provenance.
    member best.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        StudyTable.Of(
            $"Altitude for least consumption of {best.Engine}",
            [|
                yield! provenance
                StudyTable.Entry("mach", best.Mach)
                StudyTable.Entry("isa_offset_K", float best.IsaOffset)
                yield! ThrottleTable.least best.Least
            |],
            ThrottleTable.columns best.Rows
        )

/// Specific fuel consumption against thrust and altitude.
[<AbstractClass; Sealed>]
type Throttle private () =
    static let sfc = "sfc_kg_per_N_s"
    static let tropopause = 11000.0

    static member private At(model: EngineModel, flight: FlightCondition, thrust: float, loads) : OperatingPoint =
        model.At(&flight, Quantity.NetThrust, thrust, StudyPoints.inputs model flight loads)

    static member private Row(altitude: float, thrust: float, point: unit -> OperatingPoint) : ThrottleRow =
        let row thrust (point: OperatingPoint | null) reason = {
            PressureAltitude = altitude * 1.0<m>
            NetThrust = thrust * 1.0<N>
            Point = point
            Reason = reason
        }

        try
            let found = point ()
            row found.NetThrust found ""
        with
        | :? NoSolutionException as none -> row thrust null none.Message
        | :? RatingException as none -> row thrust null none.Message

    /// A root of a slope that falls below and rises above it, by false position with halving of the stale end (Illinois);
    /// no more than 60 steps. The slope must be below zero at the lower end and above zero at the upper.
    static member private Root(slope: float -> float, low: float, high: float, tolerance: float) : float =
        let rec search low slopeLow high slopeHigh kept steps =
            if high - low <= tolerance || steps = 0 then
                0.5 * (low + high)
            else
                let raw = high - slopeHigh * (high - low) / (slopeHigh - slopeLow)
                // Never closer to an end than half the tolerance, so that both ends close in.
                let next = Math.Clamp(raw, low + 0.5 * tolerance, high - 0.5 * tolerance)
                let there = slope next

                if there < 0.0 then
                    search next there high (if kept = 1 then 0.5 * slopeHigh else slopeHigh) 1 (steps - 1)
                else
                    search low (if kept = -1 then 0.5 * slopeLow else slopeLow) next there -1 (steps - 1)

        search low (slope low) high (slope high) 0 60

    static member private Fewest(rows: ThrottleRow[]) : int =
        let consumption (row: ThrottleRow) =
            match row.Point with
            | null -> infinity
            | point -> point.Sfc

        let least = Seq.init rows.Length id |> Seq.minBy (fun k -> consumption rows[k])

        match rows[least].Point with
        | null -> raise (NoSolutionException $"no point has a solution; the first one: {rows[0].Reason}")
        | _ -> least

    static member private Solved(row: ThrottleRow) =
        match row.Point with
        | null -> false
        | _ -> true

    /// <summary>
    /// A throttle loop: thrusts from a share of a rating's thrust up to it, evenly spaced, and the thrust at which the
    /// consumption is least. That is the root of the exact derivative of consumption over thrust (implicit-function theorem
    /// on the converged Jacobian), to a millionth of the rated thrust; where the slope does not change sign, an end of the loop.
    /// </summary>
    /// <param name="lowest">lowest thrust over the rating's, 0.02 to 0.95</param>
    /// <param name="count">number of points, 5 to 1000</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:System.ArgumentOutOfRangeException">lowest or count outside its range</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or none at this condition.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The rating has no point here.</exception>
    static member Loop
        (
            model: EngineModel,
            flight: FlightCondition,
            rating: string,
            [<Optional; DefaultParameterValue(0.2)>] lowest: float,
            [<Optional; DefaultParameterValue(17)>] count: int,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : ThrottleLoop =
        if not (lowest >= 0.02 && lowest <= 0.95) then
            raise (
                ArgumentOutOfRangeException(
                    nameof lowest,
                    $"The lowest thrust must lie between 0.02 and 0.95 of the rating's; {lowest} was given."
                )
            )

        if count < 5 || count > 1000 then
            raise (ArgumentOutOfRangeException(nameof count, $"A loop has 5 to 1000 points; {count} was given."))

        let rated =
            model.AtRating(&flight, model.Rating rating, StudyPoints.inputs model flight loads).NetThrust

        let rows =
            SweepValues.Count(lowest * rated, rated, count)
            |> Array.map (fun thrust ->
                Throttle.Row(flight.PressureAltitude, thrust, fun () -> Throttle.At(model, flight, thrust, loads)))

        let slope thrust =
            Throttle.At(model, flight, thrust, loads) |> ignore
            let influence = model.InfluenceOfLastPoint()
            influence.BySetting[Seq.findIndex ((=) sfc) influence.Outputs]

        let tolerance = 1e-6 * rated
        let least = Throttle.Fewest rows
        let thrust k = float rows[k].NetThrust

        let at where thrust =
            let slope = slope thrust

            {
                Where = where
                Point = Throttle.At(model, flight, thrust, loads)
                Slope = slope
                Tolerance = if where = "inside" then tolerance else 0.0
            }

        // The bottom may lie between the least row and either neighbour; at an end row, on its one side.
        let below =
            if least > 0 && Throttle.Solved rows[least - 1] then
                least - 1
            else
                least

        let above =
            if least < rows.Length - 1 && Throttle.Solved rows[least + 1] then
                least + 1
            else
                least

        let found =
            if slope (thrust below) >= 0.0 then
                at "lowest" (thrust below)
            elif slope (thrust above) <= 0.0 then
                at "highest" (thrust above)
            else
                at "inside" (Throttle.Root(slope, thrust below, thrust above, tolerance))

        {
            Engine = model.Engine.Definition.Name
            Rating = rating
            PressureAltitude = flight.PressureAltitude * 1.0<m>
            Mach = flight.Mach
            IsaOffset = flight.IsaOffset * 1.0<K>
            RatedThrust = rated * 1.0<N>
            Rows = rows
            Least = found
        }

    /// Slope of consumption over pressure altitude with thrust, Mach number and ISA offset held: the exact derivatives over
    /// pressure and temperature, with the hydrostatic equation and the layer's lapse. At the tropopause: of the layer above
    /// where `above`, else of that below.
    static member private AltitudeSlope(model: EngineModel, flight: FlightCondition, thrust, loads, above: bool) =
        Throttle.At(model, flight, thrust, loads) |> ignore
        let influence = model.InfluenceOfLastPoint()
        let altitude = flight.PressureAltitude
        let standard = StandardAtmosphere.Temperature altitude

        // Temperature is linear in each layer, so a difference inside it is exact.
        let lapse =
            if above then
                StandardAtmosphere.Temperature(altitude + 1.0) - standard
            else
                standard - StandardAtmosphere.Temperature(altitude - 1.0)

        let pressureSlope =
            -flight.StaticPressure * StandardAtmosphere.Gravity
            / (StandardAtmosphere.GasConstant * standard)

        influence.Of(sfc, "ambient_pressure_Pa") * pressureSlope
        + influence.Of(sfc, "ambient_temperature_K") * lapse

    /// <summary>
    /// The pressure altitude at which a thrust costs least at a Mach number: a root of the exact slope, to 0.01 m, or the
    /// tropopause, where the slope of the standard temperature jumps, or an end of the range.
    /// </summary>
    /// <param name="thrust">net thrust, N</param>
    /// <param name="lowest">lowest pressure altitude, at least -1 900 m</param>
    /// <param name="highest">highest pressure altitude, up to 19 900 m</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:System.ArgumentOutOfRangeException">a range outside that, or upside down</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No altitude of the range has a solution.</exception>
    static member AltitudeForThrust
        (
            model: EngineModel,
            mach: float,
            isaOffset: float<K>,
            thrust: float<N>,
            lowest: float<m>,
            highest: float<m>,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : BestAltitude =
        let flight altitude =
            FlightCondition.AtIsaOffset(altitude, mach, float isaOffset)

        let rows =
            Throttle.Heights(lowest, highest)
            |> Array.map (fun altitude ->
                Throttle.Row(
                    altitude,
                    float thrust,
                    fun () -> Throttle.At(model, flight altitude, float thrust, loads)
                ))

        let slope above altitude =
            Throttle.AltitudeSlope(model, flight altitude, float thrust, loads, above)

        let least = Throttle.Fewest rows
        let height k = float rows[k].PressureAltitude

        let at where tolerance altitude = {
            Where = where
            Slope = slope true altitude
            Point = Throttle.At(model, flight altitude, float thrust, loads)
            Tolerance = tolerance
        }

        let below =
            if least > 0 && Throttle.Solved rows[least - 1] then
                least - 1
            else
                least

        let above =
            if least < rows.Length - 1 && Throttle.Solved rows[least + 1] then
                least + 1
            else
                least

        let root low high =
            at "inside" 0.01 (Throttle.Root((fun h -> slope (h < high) h), low, high, 0.01))

        let here = height least
        let falling, rising = slope false here, slope true here

        let found =
            if rising < 0.0 then
                if above = least then
                    at "highest" 0.0 here
                else
                    root here (height above)
            elif falling > 0.0 then
                if below = least then
                    at "lowest" 0.0 here
                else
                    root (height below) here
            elif abs (here - tropopause) < 1e-6 then
                at "tropopause" 0.0 here
            else
                at "inside" 0.01 here

        {
            Engine = model.Engine.Definition.Name
            Mach = mach
            IsaOffset = isaOffset
            Rows = rows
            Least = found
        }

    /// Every 500 m, both ends and the tropopause.
    static member private Heights(lowest: float<m>, highest: float<m>) : float[] =
        let low, high = float lowest, float highest

        if not (low >= -1900.0 && high <= 19900.0 && low < high) then
            raise (
                ArgumentOutOfRangeException(
                    nameof lowest,
                    $"Altitudes must rise from at least -1900 m to at most 19900 m; {low} to {high} m was given."
                )
            )

        [|
            yield! SweepValues.Steps(low, high, 500.0)
            high
            if low < tropopause && tropopause < high then
                tropopause
        |]
        |> Array.distinct
        |> Array.sort

    /// <summary>
    /// The pressure altitude at which a share of a rating's thrust costs least for each newton at a Mach number. The rated
    /// thrust changes with altitude as its governing limit does, so the slope has no closed form: golden section, to 1 m.
    /// </summary>
    /// <param name="share">thrust over the rating's, 0.02 to 1</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:System.ArgumentOutOfRangeException">a share or range outside that</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No altitude of the range has a solution.</exception>
    static member AltitudeForShare
        (
            model: EngineModel,
            mach: float,
            isaOffset: float<K>,
            rating: string,
            share: float,
            lowest: float<m>,
            highest: float<m>,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : BestAltitude =
        if not (share >= 0.02 && share <= 1.0) then
            raise (
                ArgumentOutOfRangeException(
                    nameof share,
                    $"The share of the rating's thrust must lie between 0.02 and 1; {share} was given."
                )
            )

        let known = model.Rating rating

        let point altitude =
            let flight = FlightCondition.AtIsaOffset(altitude, mach, float isaOffset)
            let rated = model.AtRating(&flight, known, StudyPoints.inputs model flight loads)
            Throttle.At(model, flight, share * rated.NetThrust, loads)

        let rows =
            Throttle.Heights(lowest, highest)
            |> Array.map (fun altitude -> Throttle.Row(altitude, nan, fun () -> point altitude))

        let least = Throttle.Fewest rows
        let height k = float rows[k].PressureAltitude

        let below =
            if least > 0 && Throttle.Solved rows[least - 1] then
                least - 1
            else
                least

        let above =
            if least < rows.Length - 1 && Throttle.Solved rows[least + 1] then
                least + 1
            else
                least

        let golden = (sqrt 5.0 - 1.0) / 2.0

        let rec narrow low high =
            if high - low <= 1.0 then
                0.5 * (low + high)
            else
                let a, b = high - golden * (high - low), low + golden * (high - low)

                if (point a).Sfc < (point b).Sfc then
                    narrow low b
                else
                    narrow a high

        let altitude =
            if below = above then
                height least
            else
                narrow (height below) (height above)

        let first, last = height 0, height (rows.Length - 1)

        let where, place =
            if altitude - first <= 1.0 then
                "lowest", first
            elif last - altitude <= 1.0 then
                "highest", last
            elif abs (altitude - tropopause) <= 1.0 then
                "tropopause", tropopause
            else
                "inside", altitude

        {
            Engine = model.Engine.Definition.Name
            Mach = mach
            IsaOffset = isaOffset
            Rows = rows
            Least = {
                Where = where
                Point = point place
                Slope = nan
                Tolerance = 1.0
            }
        }
