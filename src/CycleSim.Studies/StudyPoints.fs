namespace CycleSim.Studies

open System
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// What studies ask of an engine model again and again.
module internal StudyPoints =
    /// A condition from pressure altitude, Mach number, outside temperature and relative humidity (0 to 1).
    let flight (altitude: float<m>) mach (temperature: float<K>) relativeHumidity =
        let dry = FlightCondition.AtTemperature(float altitude, mach, float temperature)

        if relativeHumidity > 0.0 then
            dry.WithRelativeHumidity relativeHumidity
        else
            dry

    /// The same condition at another temperature (K), with the same water in the air.
    let atTemperature (flight: FlightCondition) temperature =
        FlightCondition.AtTemperature(flight.PressureAltitude, flight.Mach, temperature, flight.WaterAirRatio)

    /// Inputs of a condition with the definition's bleeds and offtakes, and with what the user changes.
    let inputs (model: EngineModel) (flight: FlightCondition) (changes: Action<float[]> | null) =
        let condition = flight
        let inputs = model.Inputs &condition

        match changes with
        | null -> ()
        | act -> act.Invoke inputs

        inputs

    /// "flat", or the name of the limit that governs a rated point.
    let governing (point: OperatingPoint) =
        if point.Setting.Quantity = Quantity.NetThrust then
            "flat"
        else
            QuantityText.Name point.Setting.Quantity
