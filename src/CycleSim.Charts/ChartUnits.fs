namespace CycleSim.Charts

open System
open System.Globalization
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

/// The units in which a chart shows its numbers; everything goes in in SI.
[<Sealed>]
type ChartUnits(us: bool, celsius: bool) =
    /// kN, g/(kN s), m, kg/s and °C.
    static member SI = ChartUnits(false, true)

    /// kN, g/(kN s), m, kg/s and K.
    static member Kelvin = ChartUnits(false, false)

    /// lbf, lb/(h lbf), ft, lb/h and °C.
    static member US = ChartUnits(true, true)

    member _.ThrustUnit = if us then "lbf" else "kN"

    member _.Thrust(newtons: float) =
        if us then
            float (Units.newtonsToPoundsForce (newtons * 1.0<N>))
        else
            newtons / 1000.0

    member _.SfcUnit = if us then "lb/(h lbf)" else "g/(kN s)"

    member _.Sfc(si: float) =
        if us then
            float (Units.specificFuelConsumptionFromSI (si * 1.0<kg / (N s)>))
        else
            si * 1e6

    member _.AltitudeUnit = if us then "ft" else "m"

    member _.Altitude(metres: float) =
        if us then
            float (Units.metresToFeet (metres * 1.0<m>))
        else
            metres

    member _.FuelFlowUnit = if us then "lb/h" else "kg/s"

    member _.FuelFlow(si: float) =
        if us then
            float (Units.kilogramsPerSecondToPoundsPerHour (si * 1.0<kg / s>))
        else
            si

    /// Corrected or plain air flow.
    member _.FlowUnit = if us then "lb/s" else "kg/s"

    member _.Flow(si: float) =
        if us then
            float (Units.kilogramsToPounds (si * 1.0<kg>))
        else
            si

    member _.TemperatureUnit = if celsius then "°C" else "K"

    member _.Temperature(kelvin: float) =
        if celsius then kelvin - 273.15 else kelvin

    member _.PressureUnit = if us then "psi" else "kPa"

    member _.Pressure(pascals: float) =
        if us then pascals / 6894.757293168361 else pascals / 1000.0

    /// A number as a note would give it; a dash where there is none.
    static member Text(value: float, digits: int) =
        if Double.IsFinite value then
            value.ToString($"N{digits}", CultureInfo.InvariantCulture).Replace(",", " ").Replace("-", "−")
        else
            "–"

    member units.ThrustText newtons =
        ChartUnits.Text(units.Thrust newtons, (if us then 0 else 1))
        + " "
        + units.ThrustUnit

    member internal _.ThrustDigits = if us then 0 else 2

    member internal _.FuelFlowDigits = if us then 1 else 4

    member units.AltitudeText metres =
        ChartUnits.Text(units.Altitude metres, 0) + " " + units.AltitudeUnit

    member units.TemperatureText kelvin =
        ChartUnits.Text(units.Temperature kelvin, 1) + " " + units.TemperatureUnit

    member units.SfcText si =
        ChartUnits.Text(units.Sfc si, (if us then 4 else 2)) + " " + units.SfcUnit

    /// A limit or power setting in words: "T41 1 342 °C", "N1 101.5 %".
    member units.LimitText(limit: Limit) =
        let value =
            match limit.Quantity with
            | Quantity.NetThrust
            | Quantity.InstalledThrust -> units.ThrustText limit.Value
            | Quantity.FuelFlow ->
                ChartUnits.Text(units.FuelFlow limit.Value, (if us then 0 else 3))
                + " "
                + units.FuelFlowUnit
            | Quantity.T3
            | Quantity.T4
            | Quantity.T41
            | Quantity.T45
            | Quantity.T5 -> units.TemperatureText limit.Value
            | Quantity.P3 -> ChartUnits.Text(units.Pressure limit.Value, 0) + " " + units.PressureUnit
            | Quantity.Epr -> ChartUnits.Text(limit.Value, 3)
            | _ -> ChartUnits.Text(limit.Value * 100.0, 1) + " %"

        QuantityText.Name limit.Quantity + " " + value

    /// What is left on the limits that do not set the power: "35 K left on T45, 1.8 points on N2". Empty where all is said.
    member units.RoomText(limits: seq<Limit>, point: OperatingPoint) =
        let left (limit: Limit) =
            let room = limit.Value - point.Value limit.Quantity

            let number scale digits =
                ChartUnits.Text(abs room * scale, digits)

            let amount =
                match limit.Quantity with
                | Quantity.T3
                | Quantity.T4
                | Quantity.T41
                | Quantity.T45
                | Quantity.T5 -> number 1.0 0 + " K"
                | Quantity.P3 -> $"{ChartUnits.Text(units.Pressure(abs room), 0)} {units.PressureUnit}"
                | Quantity.FuelFlow ->
                    $"{ChartUnits.Text(units.FuelFlow(abs room), (if us then 0 else 3))} {units.FuelFlowUnit}"
                | Quantity.Epr -> number 1.0 3
                | _ -> number 100.0 1 + " points"

            let side = if room < 0.0 then "beyond" else "left on"
            $"{amount} {side} {QuantityText.Name limit.Quantity}"

        limits
        |> Seq.filter (fun limit ->
            limit.Quantity <> point.Setting.Quantity
            && limit.Quantity <> Quantity.NetThrust
            && limit.Quantity <> Quantity.InstalledThrust)
        |> Seq.map left
        |> String.concat ", "
