namespace CycleSim.Studies

open System
open System.Globalization
open CycleSim.Engine

/// A sweep that cannot be run as it was asked for; the message says what was wrong and what to do.
type SweepException(message: string) =
    inherit QuestionException(message)

type internal InputKind =
    | Altitude
    | Mach
    | CalibratedAirspeed
    | IsaOffset
    | OutsideTemperature
    | RelativeHumidity
    | Power of Quantity
    | ShareOf of rating: string
    | Ratings of names: string[]
    | Load of name: string

/// Something a sweep can vary or hold: a condition of flight, a power setting, or an input of the engine (air taken, power
/// taken, health). Values are in SI, shares as ratios; `Low` and `High` bound them.
[<Sealed>]
type SweepInput internal (kind: InputKind, name: string, unit: string, low: float, high: float) =
    static let flight kind name unit low high = SweepInput(kind, name, unit, low, high)

    static let engineInput (name: string) =
        let unit, low, high =
            if name.EndsWith "_W" then "W", 0.0, 1e8
            elif name.EndsWith "_kg_per_s" then "kg/s", 0.0, 1e3
            elif name.EndsWith "_fraction" then "", 0.0, 0.9
            else "", 0.5, 1.5

        SweepInput(Load name, name, unit, low, high)

    member internal _.Kind = kind

    /// Its column in the result.
    member _.Name = name

    /// SI unit; empty for shares and ratios.
    member _.Unit = unit
    member _.Low = low
    member _.High = high

    /// Whether it sets the power; a sweep has exactly one such input.
    member _.SetsPower =
        match kind with
        | Power _
        | ShareOf _
        | Ratings _ -> true
        | _ -> false

    /// Pressure altitude, -2 000 to 32 000 m.
    static member Altitude = flight Altitude "pressure_altitude_m" "m" -2000.0 32000.0

    /// Flight Mach number, 0 to 3.
    static member Mach = flight Mach "mach" "" 0.0 3.0

    /// Calibrated airspeed in the place of Mach, m/s.
    static member CalibratedAirspeed =
        flight CalibratedAirspeed "calibrated_airspeed_m_per_s" "m/s" 0.0 1000.0

    /// Offset from the standard temperature, K.
    static member IsaOffset = flight IsaOffset "isa_offset_K" "K" -150.0 150.0

    /// Outside air temperature in the place of the offset, 170 to 340 K.
    static member OutsideTemperature =
        flight OutsideTemperature "outside_temperature_K" "K" 170.0 340.0

    /// Relative humidity, 0 to 1.
    static member RelativeHumidity = flight RelativeHumidity "relative_humidity" "" 0.0 1.0

    /// The power at which an output takes a value (SI, speeds relative to design, lever 0 idle to 1 full).
    static member Power(quantity: Quantity) =
        let name, unit =
            match quantity with
            | Quantity.NetThrust -> "set_net_thrust_N", "N"
            | Quantity.InstalledThrust -> "set_installed_thrust_N", "N"
            | Quantity.FuelFlow -> "set_fuel_flow_kg_per_s", "kg/s"
            | Quantity.T3
            | Quantity.T4
            | Quantity.T41
            | Quantity.T45
            | Quantity.T5 -> $"set_{quantity}_K", "K"
            | Quantity.P3 -> "set_P3_Pa", "Pa"
            | Quantity.N1
            | Quantity.N2
            | Quantity.N3 -> $"set_{quantity}_relative_speed", ""
            | Quantity.Epr -> "set_engine_pressure_ratio", ""
            | Quantity.CorrectedN1 -> "set_corrected_N1_relative_speed", ""
            | Quantity.Lever -> "set_lever_position", ""
            | other -> raise (ArgumentOutOfRangeException(nameof quantity, other, "no output that can set the power"))

        let low, high =
            match quantity with
            | Quantity.Lever -> 0.0, 1.0
            | Quantity.N1
            | Quantity.N2
            | Quantity.N3
            | Quantity.CorrectedN1 -> 1e-3, 2.0
            | _ -> 1e-9, 1e12

        SweepInput(InputKind.Power quantity, name, unit, low, high)

    /// A share of the thrust that a rating gives at the same condition: 1 is the rating itself.
    static member ShareOf(rating: string) =
        SweepInput(ShareOf rating, "share_of_" + rating.Replace(' ', '_'), "", 1e-3, 1.5)

    /// Ratings by their names; the values are the places in this list, 0 for the first.
    static member Ratings([<ParamArray>] names: string[]) =
        if names.Length = 0 then
            raise (SweepException "name at least one rating")

        SweepInput(Ratings names, "rating", "", 0.0, float (names.Length - 1))

    /// <summary>An input of the engine by its name in <see cref="P:CycleSim.Engine.InputLayout.Names"/>: bleed ("air_..._fraction",
    /// "air_..._kg_per_s"), shaft power ("power_offtake_..._W") or health ("efficiency_factor_...", "flow_factor_...").</summary>
    /// <exception cref="T:CycleSim.Studies.SweepException">The engine has no such input, or it is a condition of flight.</exception>
    static member Load(engine: SizedEngine, name: string) =
        let known = engine.Layout.Names |> Seq.skip 4 |> Seq.toArray

        if Array.contains name known then
            engineInput name
        else
            let names = String.concat ", " known
            raise (SweepException $"'{name}' is not an input of {engine.Definition.Name}; it has {names}.")

    member internal _.Check(value: float) =
        if not (value >= low && value <= high) then
            let text (v: float) =
                v.ToString("G6", CultureInfo.InvariantCulture)

            raise (
                SweepException(
                    $"{name} = {text value} is outside its range, {text low} to {text high} {unit}".TrimEnd()
                    + "."
                )
            )

/// Values along an axis.
[<AbstractClass; Sealed>]
type SweepValues private () =
    static let most = 1_000_000

    static let finite (value: float) =
        if not (Double.IsFinite value) then
            raise (SweepException "an axis needs finite numbers.")

    /// From one value in steps as far as another, which is met where the steps lead there. A step down is negative.
    /// <exception cref="T:CycleSim.Studies.SweepException">A step of zero or away from the end, or more than a million values.</exception>
    static member Steps(first: float, last: float, step: float) : float[] =
        Seq.iter finite [ first; last; step ]

        if step = 0.0 then
            raise (SweepException "the step of an axis must not be zero.")

        let steps = (last - first) / step

        if steps < 0.0 then
            raise (SweepException "the step of an axis leads away from its end; change its sign.")

        if steps >= float most then
            raise (SweepException $"an axis has at most {most} values; take a larger step.")

        Array.init (int (floor (steps + 1e-9)) + 1) (fun i -> first + float i * step)

    /// A number of values, evenly spaced, both ends included.
    /// <exception cref="T:CycleSim.Studies.SweepException">Fewer than two values, or more than a million.</exception>
    static member Count(first: float, last: float, count: int) : float[] =
        Seq.iter finite [ first; last ]

        if count < 2 || count > most then
            raise (SweepException $"an axis counted out has 2 to {most} values; {count} was given.")

        Array.init count (fun i ->
            if i = count - 1 then
                last
            else
                first + (last - first) * float i / float (count - 1))

/// One level of the nested loops of a sweep: an input with its values, or several inputs that take their values together.
[<Sealed>]
type SweepLevel private (inputs: SweepInput[], values: float[][]) =
    member _.Inputs = inputs

    /// Values by input, then by place.
    member _.Values = values
    member _.Length = values[0].Length

    /// One input over its values.
    /// <exception cref="T:CycleSim.Studies.SweepException">No values, or one outside the input's range.</exception>
    static member Over(input: SweepInput, values: float[]) =
        SweepLevel.Paired([| input |], [| values |])

    /// Several inputs that take their first values together, then their second ones, and so on.
    /// <exception cref="T:CycleSim.Studies.SweepException">Unequal numbers of values, none, or one outside its range.</exception>
    static member Paired(inputs: SweepInput[], values: float[][]) : SweepLevel =
        if inputs.Length = 0 || inputs.Length <> values.Length then
            raise (SweepException "a level of a sweep needs an input, and values for each.")

        for input, own in Array.zip inputs values do
            if own.Length <> values[0].Length then
                raise (
                    SweepException
                        $"paired axes must have the same number of values: {inputs[0].Name} has {values[0].Length}, {input.Name} has {own.Length}."
                )

            if own.Length = 0 then
                raise (SweepException $"{input.Name} has no values.")

            Array.iter input.Check own

        SweepLevel(inputs, values)
