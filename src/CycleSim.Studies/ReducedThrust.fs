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

/// A reduced setting: the thrust that the rating would give at an assumed temperature, had at the outside temperature.
type ReducedSetting = {
    AssumedTemperature: float<K>
    /// Thrust set: that of the rating at the assumed temperature, less the derate.
    NetThrust: float<N>
    /// Share by which it lies below the rating, or below the derate where there is one, at the outside temperature.
    ReductionFromBasis: float
    /// Share by which it lies below the full rating at the outside temperature.
    ReductionFromRated: float
    /// The point at the assumed temperature that the thrust is taken from.
    AtAssumed: OperatingPoint
    /// What to set: the point at the outside temperature that gives the thrust.
    Setting: OperatingPoint
    /// The point at the outside temperature with the corrected N1 of the assumed temperature: N1 converted by the root of
    /// the temperatures.
    SameCorrectedSpeed: OperatingPoint
} with

    /// Thrust with N1 converted over the thrust set, less one: what the colder gas and the power taken from it make of the
    /// same corrected speed.
    member setting.ConversionExcess: float =
        setting.SameCorrectedSpeed.NetThrust / setting.Setting.NetThrust - 1.0

/// Reduced-thrust take-off at one runway and outside temperature.
type ReducedThrustResult = {
    Engine: string
    Rating: string
    /// The full rating at the outside temperature.
    Rated: OperatingPoint
    /// "flat", or the name of the limit that governs it.
    Governing: string
    /// Outside temperature above which the rating's thrust falls: no assumed temperature below it reduces anything.
    BreakTemperature: float<K>
    /// Derate as a share of the rated thrust; 0 without.
    Derate: float
    /// What reductions are counted from: the rating less the derate, at the outside temperature.
    Basis: OperatingPoint
    /// The most that an assumed temperature may reduce here.
    Largest: ReducedSetting
    /// What ends it.
    LargestEndedBy: string
    /// The settings asked for; none where only the derate was.
    Settings: IReadOnlyList<ReducedSetting>
} with

    /// The full rating, the derate, then the settings asked for: a row each.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rated = result.Rated.NetThrust

        let rows = [|
            yield "rated", nan, result.Rated, nan

            if result.Derate > 0.0 then
                yield "derated", nan, result.Basis, nan

            for s in result.Settings do
                yield "assumed temperature", float s.AssumedTemperature, s.Setting, s.ConversionExcess
        |]

        let number name unit (value: OperatingPoint -> float) =
            TableColumn.Of(name, unit, rows |> Array.map (fun (_, _, point, _) -> value point))


        StudyTable.Of(
            $"Reduced thrust of {result.Engine}, rating {result.Rating}",
            [|
                yield! provenance
                StudyTable.Entry("pressure_altitude_m", result.Rated.Flight.PressureAltitude)
                StudyTable.Entry("mach", result.Rated.Flight.Mach)
                StudyTable.Entry("outside_temperature_K", result.Rated.Flight.StaticTemperature)
                StudyTable.Entry("break_temperature_K", float result.BreakTemperature)
                StudyTable.Entry("derate", result.Derate)
                StudyTable.Entry("largest_assumed_temperature_K", float result.Largest.AssumedTemperature)
            |],
            [|
                TableColumn.OfText("kind", rows |> Array.map (fun (kind, _, _, _) -> kind))
                TableColumn.Of("assumed_temperature_K", "K", rows |> Array.map (fun (_, assumed, _, _) -> assumed))
                number "net_thrust_N" "N" _.NetThrust
                number "reduction_from_basis" "" (fun p -> 1.0 - p.NetThrust / result.Basis.NetThrust)
                number "reduction_from_rated" "" (fun p -> 1.0 - p.NetThrust / rated)
                number "N1_relative_speed" "" (fun p -> p.Spools[0].RelativeSpeed)
                number "N1_rpm" "1/min" (fun p -> p.Spools[0].Rpm)
                number "engine_pressure_ratio" "" _.EnginePressureRatio
                number "fuel_flow_kg_per_s" "kg/s" _.FuelFlow
                number "T41_K" "K" _.T41
                number "T45_K" "K" _.T45
                for spool in 1 .. result.Rated.Spools.Count - 1 do
                    number $"N{spool + 1}_relative_speed" "" (fun p -> p.Spools[spool].RelativeSpeed)
                TableColumn.Of("conversion_excess", "", rows |> Array.map (fun (_, _, _, excess) -> excess))
            |]
        )

/// What every question begins with.
type private Runway = {
    Model: EngineModel
    Flight: FlightCondition
    RatingUsed: Rating
    InputsAt: FlightCondition -> float[]
    Rated: OperatingPoint
    Break: float
    Derate: float
    Basis: OperatingPoint
} with

    member runway.At(temperature: float) =
        StudyPoints.atTemperature runway.Flight temperature

    /// Nothing is reduced up to here.
    member runway.Start = max runway.Break runway.Flight.StaticTemperature

/// <summary>
/// Reduced-thrust take-off: the assumed-temperature method, a fixed derate, or both. The thrust is that which the rating gives
/// at an assumed temperature above both the outside temperature and the break; at the outside temperature it takes less N1.
/// </summary>
/// <remarks>
/// What is allowed: FAA AC 25-13, Reduced and Derated Takeoff Thrust (Power) Procedures, 1988, from memory. Assumed
/// temperatures are those of the program, up to 340 K; the air's water content stays that of the outside air.
/// </remarks>
[<AbstractClass; Sealed>]
type ReducedThrust private () =

    // Thrusts are solved to 1e-10.
    static let slack = 1e-9

    static let kelvin (temperature: float) =
        String.Format(CultureInfo.InvariantCulture, "{0:F1} K ({1:F1} °C)", temperature, temperature - 273.15)

    static let percent (share: float) =
        String.Format(CultureInfo.InvariantCulture, "{0:F2} %", share * 100.0)

    static let newtons (thrust: float) =
        String.Format(CultureInfo.InvariantCulture, "{0:F2} kN", thrust / 1000.0)

    /// Largest reduction below the thrust for the ambient conditions: AC 25-13, from memory.
    static member MostReduction = 0.25

    /// Where and how reduced thrust may not be used: AC 25-13, from memory; read the document itself and the approved manual.
    static member Conditions: IReadOnlyList<string> = [|
        "not on runways contaminated with standing water, snow, slush or ice (a derate may be, where its approved data say so)"
        "not on a wet runway unless the approved data account for it"
        "not with anti-skid inoperative, or other failures that cost performance, unless the approved data account for them"
        "not where windshear is reported or suspected, nor where the operator's procedures ask for full thrust"
        "thrust at most 25 % below the take-off thrust, or the derated one it is counted from, for the ambient conditions"
        "the operator checks periodically that full take-off thrust can be had"
        "an assumed-temperature setting is no limit: full thrust may be set at any time; a derate is a limit of the take-off"
    |]

    static member private Open
        (model: EngineModel, ratingName: string, flight: FlightCondition, derate: float, taken: Action<float[]> | null)
        : Runway =
        if not (derate >= 0.0 && derate < 1.0) then
            raise (
                ArgumentOutOfRangeException(
                    nameof derate,
                    $"A derate is a share of the rated thrust, from 0 to below 100 %%; {percent derate} was given."
                )
            )

        let rating = model.Rating ratingName

        let inputsAt flight = StudyPoints.inputs model flight taken
        let rated = model.AtRating(&flight, rating, inputsAt flight)
        let flat = rating.FlatThrust(flight.PressureAltitude, flight.Mach)
        let mutable temperature = 0.0
        let mutable governing = -1
        let outcome = rating.Break(inputsAt flight, flat, &temperature, &governing)

        if not outcome.Solved then
            raise (
                NoSolutionException(
                    $"rating '{ratingName}': flat thrust and limits meet at no outside temperature: "
                    + Diagnosis.Of(model.Engine, rating.Matcher, outcome)
                )
            )

        if max temperature flight.StaticTemperature >= FlightCondition.HighestTemperature then
            raise (
                NoSolutionException(
                    $"rating '{ratingName}': thrust falls only above {kelvin (max temperature flight.StaticTemperature)}; "
                    + $"assumed temperatures end at {kelvin FlightCondition.HighestTemperature}, so none reduces anything."
                )
            )

        {
            Model = model
            Flight = flight
            RatingUsed = rating
            InputsAt = inputsAt
            Rated = rated
            Break = temperature
            Derate = derate
            Basis =
                if derate = 0.0 then
                    rated
                else
                    model.At(&flight, Quantity.NetThrust, (1.0 - derate) * rated.NetThrust, inputsAt flight)
        }

    static member private SettingAt(runway: Runway, assumed: float) : ReducedSetting =
        let model = runway.Model
        let hot = runway.At assumed
        let rated = model.AtRating(&hot, runway.RatingUsed, runway.InputsAt hot)
        let thrust = (1.0 - runway.Derate) * rated.NetThrust

        let atAssumed =
            if runway.Derate = 0.0 then
                rated
            else
                model.At(&hot, Quantity.NetThrust, thrust, runway.InputsAt hot)

        let flight = runway.Flight

        let outside quantity value =
            model.At(&flight, quantity, value, runway.InputsAt flight)

        {
            AssumedTemperature = assumed * 1.0<K>
            NetThrust = thrust * 1.0<N>
            ReductionFromBasis = 1.0 - thrust / runway.Basis.NetThrust
            ReductionFromRated = 1.0 - thrust / runway.Rated.NetThrust
            AtAssumed = atAssumed
            Setting = outside Quantity.NetThrust thrust
            SameCorrectedSpeed = outside Quantity.CorrectedN1 (atAssumed.Value Quantity.CorrectedN1)
        }

    /// The temperature at which the rating, less the derate, gives a thrust: the limits met with that thrust.
    static member private TemperatureFor(runway: Runway, thrust: float) : float =
        let mutable temperature = 0.0
        let mutable governing = -1
        let inputs = runway.InputsAt(runway.At runway.Start)

        let outcome =
            runway.RatingUsed.Break(inputs, thrust / (1.0 - runway.Derate), &temperature, &governing)

        if outcome.Solved then temperature else nan

    static member private LargestOf(runway: Runway) : ReducedSetting * string =
        let least = (1.0 - ReducedThrust.MostReduction) * runway.Basis.NetThrust
        let temperature = ReducedThrust.TemperatureFor(runway, least)

        if temperature <= FlightCondition.HighestTemperature then
            ReducedThrust.SettingAt(runway, temperature),
            $"{percent ReducedThrust.MostReduction} below the thrust for the ambient conditions (AC 25-13, from memory)"
        else
            ReducedThrust.SettingAt(runway, FlightCondition.HighestTemperature),
            $"the highest temperature that the program works at, {kelvin FlightCondition.HighestTemperature}"

    static member private Refuse(reason: string, largest: ReducedSetting, endedBy: string) =
        raise (
            NoSolutionException(
                $"{reason} The largest reduction allowed here is {percent largest.ReductionFromBasis}, to "
                + $"{newtons (float largest.NetThrust)}, with an assumed temperature of "
                + $"{kelvin (float largest.AssumedTemperature)}; what ends it: {endedBy}. "
                + "Engineering study; not for dispatch or flight: the approved manual decides."
            )
        )

    static member private Answer(runway: Runway, ask: ReducedSetting * string -> ReducedSetting[]) =
        let largest = ReducedThrust.LargestOf runway

        {
            Engine = runway.Model.Engine.Definition.Name
            Rating = runway.RatingUsed.Definition.Name
            Rated = runway.Rated
            Governing = StudyPoints.governing runway.Rated
            BreakTemperature = runway.Break * 1.0<K>
            Derate = runway.Derate
            Basis = runway.Basis
            Largest = fst largest
            LargestEndedBy = snd largest
            Settings = ask largest
        }

    /// Refuses what is below the thrust that may be set.
    static member private Allowed(setting: ReducedSetting, largest: ReducedSetting, endedBy: string) =
        if setting.ReductionFromBasis > ReducedThrust.MostReduction + slack then
            ReducedThrust.Refuse(
                $"No setting: an assumed temperature of {kelvin (float setting.AssumedTemperature)} would take "
                + $"{percent setting.ReductionFromBasis} off the thrust for the ambient conditions, to "
                + $"{newtons (float setting.NetThrust)}; more than {percent ReducedThrust.MostReduction} is not allowed "
                + "under AC 25-13 (from memory).",
                largest,
                endedBy
            )

        setting

    static member private WithThrust(runway: Runway, thrust: float, largest: ReducedSetting, endedBy: string) =
        let basis = runway.Basis.NetThrust

        let refuse reason =
            ReducedThrust.Refuse(reason, largest, endedBy)

        let from =
            if runway.Derate > 0.0 then
                "the derated rating"
            else
                "the rating"

        if not (thrust > 0.0) then
            refuse $"No setting: a thrust must be above zero; {newtons thrust} was asked for."
        elif thrust > basis * (1.0 + slack) then
            refuse
                $"No setting: {newtons thrust} is more than {from} gives at the outside temperature, {newtons basis}."
        elif thrust > basis * (1.0 - slack) then
            refuse $"No setting: {newtons thrust} is what {from} gives at the outside temperature; nothing is reduced."
        elif thrust < (1.0 - ReducedThrust.MostReduction) * basis * (1.0 - slack) then
            refuse (
                $"No setting: {newtons thrust} lies {percent (1.0 - thrust / basis)} below what {from} gives for the ambient "
                + $"conditions, {newtons basis}; more than {percent ReducedThrust.MostReduction} is not allowed under "
                + "AC 25-13 (from memory)."
            )

        let temperature = ReducedThrust.TemperatureFor(runway, thrust)

        if not (temperature <= FlightCondition.HighestTemperature) then
            refuse $"No setting: {newtons thrust} needs a higher assumed temperature than there is."

        ReducedThrust.SettingAt(runway, temperature)

    /// <summary>The setting for an assumed temperature.</summary>
    /// <param name="flight">runway, speed and outside temperature; static at take-off as a rule</param>
    /// <param name="assumed">assumed temperature, above the outside temperature and the break, up to 340 K</param>
    /// <param name="derate">fixed derate as a share of the rated thrust, 0 to below 1</param>
    /// <param name="taken">changes bleeds, offtakes or health; nothing where null</param>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">Nothing is reduced, or more than is allowed; the message gives the largest reduction.</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or one that cannot be worked out.</exception>
    /// <exception cref="T:System.ArgumentOutOfRangeException">The derate is no share.</exception>
    static member ForAssumedTemperature
        (
            model: EngineModel,
            ratingName: string,
            flight: FlightCondition,
            assumed: float<K>,
            [<Optional; DefaultParameterValue(0.0)>] derate: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : ReducedThrustResult =
        let runway = ReducedThrust.Open(model, ratingName, flight, derate, taken)
        let assumed = float assumed

        ReducedThrust.Answer(
            runway,
            fun (largest, endedBy) ->
                let refuse reason =
                    ReducedThrust.Refuse(reason, largest, endedBy)

                if not (assumed > flight.StaticTemperature) then
                    refuse
                        $"No setting: an assumed temperature of {kelvin assumed} is not above the outside temperature, {kelvin flight.StaticTemperature}."
                elif assumed <= runway.Break then
                    refuse
                        $"No setting: the rating is flat up to {kelvin runway.Break}, so an assumed temperature of {kelvin assumed} reduces nothing."
                elif not (assumed <= FlightCondition.HighestTemperature) then
                    refuse
                        $"No setting: assumed temperatures end at {kelvin FlightCondition.HighestTemperature}; {kelvin assumed} was asked for."

                [|
                    ReducedThrust.Allowed(ReducedThrust.SettingAt(runway, assumed), largest, endedBy)
                |]
        )

    /// <summary>The assumed temperature and setting for a wanted thrust, N.</summary>
    /// <remarks>Parameters and errors as for <see cref="M:CycleSim.Studies.ReducedThrust.ForAssumedTemperature"/>.</remarks>
    static member ForThrust
        (
            model: EngineModel,
            ratingName: string,
            flight: FlightCondition,
            thrust: float<N>,
            [<Optional; DefaultParameterValue(0.0)>] derate: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : ReducedThrustResult =
        let runway = ReducedThrust.Open(model, ratingName, flight, derate, taken)

        ReducedThrust.Answer(
            runway,
            fun (largest, endedBy) -> [| ReducedThrust.WithThrust(runway, float thrust, largest, endedBy) |]
        )

    /// <summary>
    /// The assumed temperature and setting for a wanted reduction, a share of what the rating, or the derate where there is
    /// one, gives at the outside temperature.
    /// </summary>
    /// <remarks>Parameters and errors as for <see cref="M:CycleSim.Studies.ReducedThrust.ForAssumedTemperature"/>.</remarks>
    static member ForReduction
        (
            model: EngineModel,
            ratingName: string,
            flight: FlightCondition,
            reduction: float,
            [<Optional; DefaultParameterValue(0.0)>] derate: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : ReducedThrustResult =
        let runway = ReducedThrust.Open(model, ratingName, flight, derate, taken)
        let thrust = (1.0 - reduction) * runway.Basis.NetThrust

        ReducedThrust.Answer(
            runway,
            fun (largest, endedBy) -> [| ReducedThrust.WithThrust(runway, thrust, largest, endedBy) |]
        )

    /// <summary>
    /// Settings for assumed temperatures from the first that reduces to the largest allowed, at whole steps of the Celsius
    /// scale and at the last; the derate's own setting is the basis of the result.
    /// </summary>
    /// <param name="step">above zero, and leaving at most 500 settings</param>
    /// <remarks>Other parameters and errors as for <see cref="M:CycleSim.Studies.ReducedThrust.ForAssumedTemperature"/>.</remarks>
    static member Schedule
        (
            model: EngineModel,
            ratingName: string,
            flight: FlightCondition,
            step: float<K>,
            [<Optional; DefaultParameterValue(0.0)>] derate: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : ReducedThrustResult =
        let runway = ReducedThrust.Open(model, ratingName, flight, derate, taken)

        ReducedThrust.Answer(
            runway,
            fun (largest, _) ->
                let last = float largest.AssumedTemperature
                let step = float step

                if not (step > 0.0 && (last - runway.Start) / step <= 500.0) then
                    raise (
                        ArgumentOutOfRangeException(
                            nameof step,
                            "The step must be above zero and leave at most 500 settings."
                        )
                    )

                let whole celsius = Math.Ceiling(celsius / step) * step

                let first = whole (runway.Start + 1e-6 - 273.15) + 273.15

                [|
                    for n in 0 .. int (Math.Floor((last - first) / step)) do
                        ReducedThrust.SettingAt(runway, first + float n * step)
                    largest
                |]
        )
