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

/// What to set: N1 and EPR of ratings against outside temperature and pressure altitude.
[<AbstractClass; Sealed>]
type PowerTables private () =

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
                    let inputs = (StudyPoints.inputs model flight taken)
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
                    let flight = StudyPoints.flight altitude mach outside relativeHumidity

                    let point = model.AtRating(&flight, rating, (StudyPoints.inputs model flight taken))

                    {
                        empty "" with
                            Governing = StudyPoints.governing point
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
