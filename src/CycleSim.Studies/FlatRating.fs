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

/// One outside temperature of a flat rating: the point, or the reason why there is none.
type FlatRatingRow = {
    /// Outside air temperature.
    OutsideTemperature: float<K>
    /// Offset from the standard temperature at this altitude.
    IsaOffset: float<K>
    /// What ends the thrust here: "flat" or the name of the governing limit.
    Governing: string
    /// The operating point with its stations; null where there is none.
    Point: OperatingPoint | null
    /// Why there is no point; empty where there is one.
    Reason: string
}

/// Thrust of a rating over the outside temperature at one altitude and Mach number, and where its flat part breaks.
type FlatRatingResult = {
    Engine: string
    Rating: string
    PressureAltitude: float<m>
    Mach: float
    /// Thrust up to the break.
    FlatThrust: float<N>
    /// Every limit of the rating, the implied one included.
    Limits: IReadOnlyList<Limit>
    /// The limit that thrust and flat-to temperature amount to, where the definition gives both.
    ImpliedLimit: Nullable<Limit>
    /// Offset from ISA that the rating is flat to with the definition's own bleeds and offtakes.
    FlatTo: float<K>
    /// Outside temperature at which the first limit is reached with the flat thrust.
    BreakTemperature: float<K>
    BreakIsaOffset: float<K>
    /// The limit that is reached there.
    BreakLimit: Limit
    /// Iterations and largest relative imbalance of the direct solution for the break.
    BreakIterations: int
    BreakResidual: float
    /// Loss of thrust per kelvin beyond the break, as a share of the flat thrust, over the first ten kelvin.
    LapsePerKelvin: float</ K>
    Rows: IReadOnlyList<FlatRatingRow>
} with

    /// The rows with thrust, power setting and temperatures, and the break in the provenance.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rows = Seq.toArray result.Rows

        let numbers name unit (value: OperatingPoint -> float) =
            let number (row: FlatRatingRow) =
                match row.Point with
                | null -> nan
                | point -> value point

            TableColumn.Of(name, unit, rows |> Array.map number)

        let spools =
            rows
            |> Array.tryPick (fun r ->
                match r.Point with
                | null -> None
                | point -> Some point.Spools.Count)
            |> Option.defaultValue 0


        StudyTable.Of(
            $"Flat rating {result.Rating} of {result.Engine}",
            [|
                yield! provenance
                StudyTable.Entry("pressure_altitude_m", float result.PressureAltitude)
                StudyTable.Entry("mach", result.Mach)
                StudyTable.Entry("flat_thrust_N", float result.FlatThrust)
                StudyTable.Entry("break_temperature_K", float result.BreakTemperature)
            |],
            [|
                TableColumn.Of("outside_temperature_K", "K", rows |> Array.map (fun r -> float r.OutsideTemperature))
                TableColumn.Of("isa_offset_K", "K", rows |> Array.map (fun r -> float r.IsaOffset))
                TableColumn.OfText("governing", rows |> Array.map _.Governing)
                numbers "net_thrust_N" "N" _.NetThrust
                numbers "fuel_flow_kg_per_s" "kg/s" _.FuelFlow
                numbers "sfc_kg_per_N_s" "kg/(N s)" _.Sfc
                for spool in 0 .. spools - 1 do
                    numbers $"N{spool + 1}_relative_speed" "" (fun p -> p.Spools[spool].RelativeSpeed)
                numbers "engine_pressure_ratio" "" _.EnginePressureRatio
                numbers "T41_K" "K" _.T41
                numbers "T45_K" "K" _.T45
                TableColumn.OfText("reason", rows |> Array.map _.Reason)
            |]
        )

/// Flat rating: thrust against outside temperature.
[<AbstractClass; Sealed>]
type FlatRating private () =

    static member private Row
        (
            model: EngineModel,
            rating: Rating,
            altitude: float<m>,
            mach: float,
            temperature: float<K>,
            humidity: float,
            loads: Action<float[]> | null
        ) =
        let flight = StudyPoints.flight altitude mach temperature humidity
        let isa = flight.IsaOffset * 1.0<K>

        try
            let point = model.AtRating(&flight, rating, StudyPoints.inputs model flight loads)

            {
                OutsideTemperature = temperature
                IsaOffset = isa
                Governing = StudyPoints.governing point
                Point = point
                Reason = ""
            }
        with :? NoSolutionException as none -> {
            OutsideTemperature = temperature
            IsaOffset = isa
            Governing = ""
            Point = null
            Reason = none.Message
        }

    /// <summary>Outside temperatures from ISA - 40 K to ISA + 35 K in steps of 5 K.</summary>
    static member UsualTemperatures(altitude: float<m>) : float<K>[] =
        let standard = StandardAtmosphere.Temperature(float altitude) * 1.0<K>
        [| for step in -8 .. 7 -> standard + 5.0<K> * float step |]

    /// <summary>
    /// Works out a rating at a pressure altitude (-2 000 to 32 000 m) and Mach number over outside temperatures (170 to
    /// 340 K). The break is found directly, by freeing the temperature; see <see cref="T:CycleSim.Matching.Rating"/>.
    /// </summary>
    /// <param name="temperatures">outside temperatures; the usual ones where null</param>
    /// <param name="relativeHumidity">0 to 1</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or the engine has no solution at its corner.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The flat thrust and the limits meet at no temperature.</exception>
    static member Run
        (
            model: EngineModel,
            ratingName: string,
            altitude: float<m>,
            mach: float,
            [<Optional; DefaultParameterValue(null: float<K>[] | null)>] temperatures: float<K>[] | null,
            [<Optional; DefaultParameterValue(0.0)>] relativeHumidity: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : FlatRatingResult =
        let rating = model.Rating ratingName
        let flat = rating.FlatThrust(float altitude, mach)
        let standard = StandardAtmosphere.Temperature(float altitude)

        // Humidity goes with temperature: the break is found for the humidity of the temperature last guessed.
        let rec findBreak guess rounds =
            let corner = StudyPoints.flight altitude mach (guess * 1.0<K>) relativeHumidity
            let inputs = StudyPoints.inputs model corner loads
            let mutable temperature = 0.0
            let mutable governing = -1
            let outcome = rating.Break(inputs, flat, &temperature, &governing)

            if not outcome.Solved then
                raise (
                    NoSolutionException(
                        $"rating '{ratingName}': flat thrust and limits meet at no outside temperature: "
                        + Diagnosis.Of(model.Engine, rating.Matcher, outcome)
                    )
                )
            elif relativeHumidity = 0.0 || abs (temperature - guess) < 1e-7 || rounds = 0 then
                temperature, governing, outcome
            else
                findBreak temperature (rounds - 1)

        let breakTemperature, governing, outcome = findBreak (standard + rating.FlatTo) 20

        let row temperature =
            FlatRating.Row(model, rating, altitude, mach, temperature, relativeHumidity, loads)

        let beyond = 10.0<K>
        let hot = row (breakTemperature * 1.0<K> + beyond)

        let lapse =
            match hot.Point with
            | null -> nan * 1.0< / K>
            | point -> (1.0 - point.NetThrust / flat) / beyond

        let chosen =
            match temperatures with
            | null -> FlatRating.UsualTemperatures altitude
            | given -> given

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            PressureAltitude = altitude
            Mach = mach
            FlatThrust = flat * 1.0<N>
            Limits = rating.Limits
            ImpliedLimit = rating.ImpliedLimit
            FlatTo = rating.FlatTo * 1.0<K>
            BreakTemperature = breakTemperature * 1.0<K>
            BreakIsaOffset = (breakTemperature - standard) * 1.0<K>
            BreakLimit = rating.Limits[governing]
            BreakIterations = outcome.Iterations
            BreakResidual = outcome.Residual
            LapsePerKelvin = lapse
            Rows = chosen |> Array.map row
        }
