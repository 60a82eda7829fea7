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

/// How fast a table's engine flies, at every altitude.
type FlightSpeed =
    | Mach of float
    | Calibrated of float<m / s>

    /// Mach number at a pressure altitude.
    member speed.MachAt(altitude: float<m>) : float =
        match speed with
        | Mach mach -> mach
        | Calibrated speed -> Airspeed.MachFromCalibrated(float speed, StandardAtmosphere.Pressure(float altitude))

/// The temperatures of a table's rows.
type TemperatureAxis =
    /// Outside air temperatures.
    | Outside of float<K>[]
    /// Offsets from the standard temperature of each altitude.
    | IsaOffsets of float<K>[]

/// What a load does to a cell of a power-setting table; NaN where there is no point with it.
type PowerCorrection = {
    Load: string
    /// Change of relative N1.
    N1: float
    Epr: float
    /// Relative change of thrust.
    NetThrust: float
}

/// A cell of a power-setting table: what to set, or why there is nothing to set.
type PowerCell = {
    PressureAltitude: float<m>
    OutsideTemperature: float<K>
    IsaOffset: float<K>
    Mach: float
    CalibratedAirspeed: float<m / s>
    /// "flat", or the name of the limit that governs; empty where there is no point.
    Governing: string
    /// The rated point; null where there is none.
    Point: OperatingPoint | null
    /// Why there is no point; empty where there is one.
    Reason: string
    /// In the order of the loads.
    Corrections: IReadOnlyList<PowerCorrection>
} with

    /// Relative speed of the first spool; NaN where there is no point.
    member cell.N1 =
        match cell.Point with
        | null -> nan
        | point -> point.Spools[0].RelativeSpeed

    /// NaN where the definition gives no speed, or where there is no point.
    member cell.N1Rpm: float<rpm> =
        match cell.Point with
        | null -> nan * 1.0<rpm>
        | point -> point.Spools[0].Rpm * 1.0<rpm>

    member cell.Epr =
        match cell.Point with
        | null -> nan
        | point -> point.EnginePressureRatio

    member cell.NetThrust: float<N> =
        match cell.Point with
        | null -> nan * 1.0<N>
        | point -> point.NetThrust * 1.0<N>

/// Range of a load's corrections over the cells of a table that are governed alike without it.
type CorrectionRange = {
    Load: string
    /// "flat" or the name of the limit.
    Governing: string
    Cells: int
    LeastN1: float
    MostN1: float
    LeastEpr: float
    MostEpr: float
}

/// Power settings of one rating.
type PowerTable = {
    Rating: string
    Limits: IReadOnlyList<Limit>
    Altitudes: IReadOnlyList<float<m>>
    /// One row a temperature, one cell an altitude.
    Rows: IReadOnlyList<IReadOnlyList<PowerCell>>
    Corrections: IReadOnlyList<CorrectionRange>
} with

    member table.Cells: seq<PowerCell> = table.Rows |> Seq.collect id

    /// Cells that have a point and stand at the coldest or hottest such temperature of the first or last altitude.
    member table.Corners: IReadOnlyList<PowerCell> =
        let ends (cells: PowerCell[]) =
            if cells.Length < 2 then
                cells
            else
                [| cells[0]; cells[cells.Length - 1] |]

        [|
            for altitude in Seq.distinct [ Seq.head table.Altitudes; Seq.last table.Altitudes ] do
                yield!
                    table.Cells
                    |> Seq.filter (fun c -> c.PressureAltitude = altitude && not (isNull c.Point))
                    |> Seq.sortBy _.OutsideTemperature
                    |> Seq.toArray
                    |> ends
        |]

/// Power-setting tables of ratings.
type PowerTablesResult = {
    Engine: string
    Speed: FlightSpeed
    Loads: IReadOnlyList<string>
    Tables: IReadOnlyList<PowerTable>
} with

    /// A row a cell.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let cells = [|
            for table in result.Tables do
                for cell in table.Cells -> table.Rating, cell
        |]

        let number name unit (value: PowerCell -> float) =
            TableColumn.Of(name, unit, cells |> Array.map (snd >> value))

        let ofPoint (value: OperatingPoint -> float) (cell: PowerCell) =
            match cell.Point with
            | null -> nan
            | point -> value point

        StudyTable.Of(
            $"Power settings of {result.Engine}",
            provenance,
            [|
                TableColumn.OfText("rating", cells |> Array.map fst)
                number "pressure_altitude_m" "m" (fun c -> float c.PressureAltitude)
                number "outside_temperature_K" "K" (fun c -> float c.OutsideTemperature)
                number "isa_offset_K" "K" (fun c -> float c.IsaOffset)
                number "mach" "" _.Mach
                number "calibrated_airspeed_m_per_s" "m/s" (fun c -> float c.CalibratedAirspeed)
                TableColumn.OfText("governing", cells |> Array.map (snd >> _.Governing))
                number "N1_relative_speed" "" _.N1
                number "N1_rpm" "1/min" (fun c -> float c.N1Rpm)
                number "fan_rpm" "1/min" (ofPoint _.FanRpm)
                number "engine_pressure_ratio" "" _.Epr
                number "net_thrust_N" "N" (fun c -> float c.NetThrust)
                number "fuel_flow_kg_per_s" "kg/s" (ofPoint _.FuelFlow)
                number "T41_K" "K" (ofPoint _.T41)
                number "T45_K" "K" (ofPoint _.T45)
                for index in 0 .. result.Loads.Count - 1 do
                    let correction pick (cell: PowerCell) = pick cell.Corrections[index]
                    number $"N1_change ({result.Loads[index]})" "" (correction _.N1)
                    number $"engine_pressure_ratio_change ({result.Loads[index]})" "" (correction _.Epr)
                    number $"net_thrust_change ({result.Loads[index]})" "" (correction _.NetThrust)
                TableColumn.OfText("reason", cells |> Array.map (snd >> _.Reason))
            |]
        )

/// One airspeed of a take-off run with N1 held.
type TakeOffRunRow = {
    CalibratedAirspeed: float<m / s>
    Mach: float
    /// The point with N1 held; null where there is none.
    Held: OperatingPoint | null
    /// The point that the rating allows at this speed; null where there is none.
    Rated: OperatingPoint | null
    /// Limits of the rating that the held point is beyond.
    Beyond: IReadOnlyList<LimitMargin>
    Reason: string
}

/// N1 set at an airspeed of the take-off run and held: how thrust moves on.
type TakeOffRunResult = {
    Engine: string
    Rating: string
    PressureAltitude: float<m>
    OutsideTemperature: float<K>
    /// Airspeed by which N1 is to be reached.
    SetAt: float<m / s>
    /// The rated point at that airspeed: its N1 is held.
    Setting: OperatingPoint
    /// "flat", or the name of the limit that governs the setting.
    Governing: string
    Rows: IReadOnlyList<TakeOffRunRow>
} with

    /// A row an airspeed.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rows = Seq.toArray result.Rows

        let number name unit pick (value: OperatingPoint -> float) =
            let read (row: TakeOffRunRow) =
                match pick row: OperatingPoint | null with
                | null -> nan
                | point -> value point

            TableColumn.Of(name, unit, rows |> Array.map read)

        let all value = Array.create rows.Length (float value)

        StudyTable.Of(
            $"Take-off run of {result.Engine}, rating {result.Rating}, N1 held",
            provenance,
            [|
                TableColumn.Of("pressure_altitude_m", "m", all (float result.PressureAltitude))
                TableColumn.Of("outside_temperature_K", "K", all (float result.OutsideTemperature))
                TableColumn.Of("set_at_m_per_s", "m/s", all (float result.SetAt))
                TableColumn.Of(
                    "calibrated_airspeed_m_per_s",
                    "m/s",
                    rows |> Array.map (fun r -> float r.CalibratedAirspeed)
                )
                TableColumn.Of("mach", "", rows |> Array.map _.Mach)
                number "N1_relative_speed" "" _.Held (fun p -> p.Spools[0].RelativeSpeed)
                number "net_thrust_N" "N" _.Held _.NetThrust
                number "engine_pressure_ratio" "" _.Held _.EnginePressureRatio
                number "fuel_flow_kg_per_s" "kg/s" _.Held _.FuelFlow
                number "T41_K" "K" _.Held _.T41
                number "T45_K" "K" _.Held _.T45
                number "rated_N1_relative_speed" "" _.Rated (fun p -> p.Spools[0].RelativeSpeed)
                number "rated_net_thrust_N" "N" _.Rated _.NetThrust
                TableColumn.OfText(
                    "limits_exceeded",
                    rows
                    |> Array.map (fun r ->
                        r.Beyond
                        |> Seq.map (fun m -> QuantityText.Name m.Limit.Quantity)
                        |> String.concat " ")
                )
                TableColumn.OfText("reason", rows |> Array.map _.Reason)
            |]
        )

/// What to set: N1 and EPR of ratings against outside temperature and pressure altitude.
[<AbstractClass; Sealed>]
type PowerTables private () =

    static member private Flight(altitude: float<m>, mach: float, temperature: float<K>, humidity: float) =
        let flight = FlightCondition.AtTemperature(float altitude, mach, float temperature)

        if humidity > 0.0 then
            flight.WithRelativeHumidity humidity
        else
            flight

    static member private Inputs(model: EngineModel, flight: FlightCondition, taken: Action<float[]> | null) =
        let inputs = model.Inputs(&flight)

        match taken with
        | null -> ()
        | act -> act.Invoke inputs

        inputs

    static member private Governing(point: OperatingPoint) =
        if point.Setting.Quantity = Quantity.NetThrust then
            "flat"
        else
            QuantityText.Name point.Setting.Quantity

    static member private Ranges(loads: NamedLoad[], cells: PowerCell[]) : CorrectionRange[] = [|
        for index in 0 .. loads.Length - 1 do
            for governing, alike in cells |> Array.groupBy _.Governing do
                let corrections =
                    alike
                    |> Array.filter (fun c -> governing <> "" && not (Double.IsNaN c.Corrections[index].N1))
                    |> Array.map _.Corrections[index]

                if corrections.Length > 0 then
                    {
                        Load = loads[index].Name
                        Governing = governing
                        Cells = corrections.Length
                        LeastN1 = corrections |> Seq.map _.N1 |> Seq.min
                        MostN1 = corrections |> Seq.map _.N1 |> Seq.max
                        LeastEpr = corrections |> Seq.map _.Epr |> Seq.min
                        MostEpr = corrections |> Seq.map _.Epr |> Seq.max
                    }
    |]

    /// <summary>
    /// Power settings of ratings: at each pressure altitude and temperature the point that the rating allows, and by how much
    /// each load changes it. A definition declares no range of altitude for its ratings, so a rating is worked out wherever
    /// the table goes.
    /// </summary>
    /// <param name="altitudes">pressure altitudes, -2 000 to 32 000 m</param>
    /// <param name="temperatures">rows of the table</param>
    /// <param name="coldest">offset from ISA below which cells stay empty</param>
    /// <param name="hottest">offset from ISA above which cells stay empty</param>
    /// <param name="relativeHumidity">0 to 1</param>
    /// <param name="loads">loads whose corrections are wanted; none where null</param>
    /// <param name="taken">changes bleeds, offtakes or health in every cell; nothing where null</param>
    /// <param name="cancellation">ends the study between two cells</param>
    /// <exception cref="T:CycleSim.Studies.LoadException">A load of nothing, or from a port or spool that is not there.</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or one that cannot be worked out.</exception>
    /// <exception cref="T:System.ArgumentException">No rating, altitude or temperature, or a value outside its range.</exception>
    static member Run
        (
            model: EngineModel,
            ratingNames: IReadOnlyList<string>,
            altitudes: float<m>[],
            temperatures: TemperatureAxis,
            speed: FlightSpeed,
            [<Optional; DefaultParameterValue(-60.0<K>)>] coldest: float<K>,
            [<Optional; DefaultParameterValue(40.0<K>)>] hottest: float<K>,
            [<Optional; DefaultParameterValue(0.0)>] relativeHumidity: float,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<NamedLoad> | null)>] loads:
                IReadOnlyList<NamedLoad> | null,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null,
            [<Optional>] cancellation: Threading.CancellationToken
        ) : PowerTablesResult =
        let loads =
            match loads with
            | null -> [||]
            | given -> Seq.toArray given

        Loads.checkNames loads
        let moves = loads |> Array.map (Loads.moves model.Engine)

        let rows, isOffset =
            match temperatures with
            | Outside values -> values, false
            | IsaOffsets values -> values, true

        if ratingNames.Count = 0 || altitudes.Length = 0 || rows.Length = 0 then
            invalidArg (nameof temperatures) "a table needs a rating, an altitude and a temperature"

        let corrections (flight: FlightCondition) (rating: Rating) (point: OperatingPoint) =
            Array.map2
                (fun (load: NamedLoad) moves ->
                    let inputs = PowerTables.Inputs(model, flight, taken)
                    Loads.add moves inputs

                    try
                        let loaded = model.AtRating(&flight, rating, inputs)

                        {
                            Load = load.Name
                            N1 = loaded.Spools[0].RelativeSpeed - point.Spools[0].RelativeSpeed
                            Epr = loaded.EnginePressureRatio - point.EnginePressureRatio
                            NetThrust = loaded.NetThrust / point.NetThrust - 1.0
                        }
                    with :? NoSolutionException -> {
                        Load = load.Name
                        N1 = nan
                        Epr = nan
                        NetThrust = nan
                    })
                loads
                moves

        let none =
            loads
            |> Array.map (fun load -> {
                Load = load.Name
                N1 = nan
                Epr = nan
                NetThrust = nan
            })

        let outsideEnvelope =
            String.Format(
                CultureInfo.InvariantCulture,
                "outside ISA {0:+0.#;-0.#;+0} to {1:+0.#;-0.#;+0} K",
                float coldest,
                float hottest
            )

        let cell (rating: Rating) temperature altitude =
            cancellation.ThrowIfCancellationRequested()
            let standard = StandardAtmosphere.Temperature(float altitude) * 1.0<K>
            let outside = if isOffset then standard + temperature else temperature
            let offset = outside - standard
            let mach = speed.MachAt altitude

            let empty reason = {
                PressureAltitude = altitude
                OutsideTemperature = outside
                IsaOffset = offset
                Mach = mach
                CalibratedAirspeed =
                    Airspeed.CalibratedFromMach(mach, StandardAtmosphere.Pressure(float altitude))
                    * 1.0<m / s>
                Governing = ""
                Point = null
                Reason = reason
                Corrections = none
            }

            // A kelvin read from degrees and back is not exact.
            if offset < coldest - 1e-9<K> || offset > hottest + 1e-9<K> then
                empty outsideEnvelope
            else
                try
                    let flight = PowerTables.Flight(altitude, mach, outside, relativeHumidity)

                    let point =
                        model.AtRating(&flight, rating, PowerTables.Inputs(model, flight, taken))

                    {
                        empty "" with
                            Governing = PowerTables.Governing point
                            Point = point
                            Corrections = corrections flight rating point
                    }
                with :? NoSolutionException as noPoint ->
                    empty noPoint.Message

        let table name =
            let rating = model.Rating name

            let cells =
                rows
                |> Array.map (fun temperature -> altitudes |> Array.map (cell rating temperature))

            {
                Rating = rating.Definition.Name
                Limits = rating.Limits
                Altitudes = altitudes
                Rows = cells |> Array.map (fun row -> row :> IReadOnlyList<PowerCell>)
                Corrections = PowerTables.Ranges(loads, Array.concat cells)
            }

        {
            Engine = model.Engine.Definition.Name
            Speed = speed
            Loads = loads |> Array.map _.Name
            Tables = ratingNames |> Seq.map table |> Seq.toArray
        }

    /// <summary>
    /// The take-off run: N1 of the rating at the airspeed by which it is to be set, held from standstill on to another airspeed;
    /// thrust and temperatures with it, and what the rating itself would allow at each speed.
    /// </summary>
    /// <param name="altitude">pressure altitude of the runway</param>
    /// <param name="temperature">outside air temperature, 170 to 340 K</param>
    /// <param name="setAt">calibrated airspeed at which N1 is taken from the rating; 0: static</param>
    /// <param name="holdTo">calibrated airspeed at which the run ends, rotation for instance; above zero, not below <paramref name="setAt"/></param>
    /// <param name="step">step of calibrated airspeed, above zero</param>
    /// <exception cref="T:System.ArgumentException">Speeds out of order, or a step that leaves more than 1000 rows.</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or one that cannot be worked out.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The rating has no point at the set speed.</exception>
    static member TakeOffRun
        (
            model: EngineModel,
            ratingName: string,
            altitude: float<m>,
            temperature: float<K>,
            setAt: float<m / s>,
            holdTo: float<m / s>,
            step: float<m / s>,
            [<Optional; DefaultParameterValue(0.0)>] relativeHumidity: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : TakeOffRunResult =
        if not (setAt >= 0.0<m / s> && holdTo > 0.0<m / s> && holdTo >= setAt) then
            invalidArg
                (nameof holdTo)
                "N1 is held from standstill past the airspeed at which it is set: 0 <= set <= held to"

        if not (step > 0.0<m / s> && holdTo / step <= 1000.0) then
            invalidArg (nameof step) "the step must be above zero and leave at most 1000 rows"

        let rating = model.Rating ratingName
        let pressure = StandardAtmosphere.Pressure(float altitude)

        let flightAt (calibrated: float<m / s>) =
            PowerTables.Flight(
                altitude,
                Airspeed.MachFromCalibrated(float calibrated, pressure),
                temperature,
                relativeHumidity
            )

        let rated (flight: FlightCondition) =
            model.AtRating(&flight, rating, PowerTables.Inputs(model, flight, taken))

        let setting = rated (flightAt setAt)
        let n1 = setting.Spools[0].RelativeSpeed

        let row calibrated =
            let flight = flightAt calibrated

            let attempt (solve: FlightCondition -> OperatingPoint) : (OperatingPoint | null) * string =
                try
                    solve flight, ""
                with :? NoSolutionException as none ->
                    null, none.Message

            let held, reason =
                attempt (fun flight -> model.At(&flight, Quantity.N1, n1, PowerTables.Inputs(model, flight, taken)))

            let allowed, _ = attempt rated

            {
                CalibratedAirspeed = calibrated
                Mach = flight.Mach
                Held = held
                Rated = allowed
                Beyond =
                    match held with
                    | null -> [||]
                    | point ->
                        LimitMargin.Of(point, rating)
                        |> Seq.filter (fun m -> m.Left < -1e-8 * m.Limit.Value)
                        |> Seq.toArray
                Reason = reason
            }

        let speeds =
            [| for n in 0 .. int (Math.Floor(holdTo / step + 1e-9)) -> step * float n |]
            |> Array.append [| setAt; holdTo |]
            |> Array.sort
            |> Array.distinct

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            PressureAltitude = altitude
            OutsideTemperature = temperature
            SetAt = setAt
            Setting = setting
            Governing = PowerTables.Governing setting
            Rows = speeds |> Array.map row
        }
