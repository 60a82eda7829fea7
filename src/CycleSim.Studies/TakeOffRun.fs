namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

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

/// N1 set at an airspeed of the take-off run and held.
[<AbstractClass; Sealed>]
type TakeOffRun private () =

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
    static member Run
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
            let mach = Airspeed.MachFromCalibrated(float calibrated, pressure)
            StudyPoints.flight altitude mach temperature relativeHumidity

        let rated (flight: FlightCondition) =
            model.AtRating(&flight, rating, (StudyPoints.inputs model flight taken))

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
                attempt (fun flight -> model.At(&flight, Quantity.N1, n1, (StudyPoints.inputs model flight taken)))

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
            Governing = StudyPoints.governing setting
            Rows = speeds |> Array.map row
        }
