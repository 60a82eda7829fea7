namespace CycleSim.Air;

/// <summary>
/// Where and how fast an engine flies. Made by the factories, which check it; all members SI.
/// </summary>
public readonly record struct FlightCondition
{
    public const double LowestTemperature = 170.0,
        HighestTemperature = 340.0;

    private FlightCondition(double altitude, double pressure, double temperature, double mach, double waterAirRatio)
    {
        if (temperature is not (>= LowestTemperature and <= HighestTemperature))
            throw new ArgumentOutOfRangeException(
                nameof(temperature),
                $"An outside air temperature of {temperature:F1} K ({temperature - 273.15:F1} °C) is outside "
                    + $"{LowestTemperature:F0} to {HighestTemperature:F0} K."
            );
        if (mach is not (>= 0.0 and <= 3.0))
            throw new ArgumentOutOfRangeException(
                nameof(mach),
                $"Mach number must lie between 0 and 3; {mach:G4} was given."
            );
        if (waterAirRatio is not (>= 0.0 and <= 0.1))
            throw new ArgumentOutOfRangeException(
                nameof(waterAirRatio),
                $"Water-air ratio must lie between 0 and 0.1 kg/kg; {waterAirRatio:G4} was given."
            );
        (PressureAltitude, StaticPressure, StaticTemperature, Mach, WaterAirRatio) =
            (altitude, pressure, temperature, mach, waterAirRatio);
    }

    /// <summary>Pressure altitude, m.</summary>
    public double PressureAltitude { get; }

    /// <summary>Ambient static pressure, Pa.</summary>
    public double StaticPressure { get; }

    /// <summary>Outside air (static) temperature, K.</summary>
    public double StaticTemperature { get; }

    public double Mach { get; }

    /// <summary>Water vapour per kilogram of dry air.</summary>
    public double WaterAirRatio { get; }

    /// <summary>Outside air temperature less the standard's at this altitude, K.</summary>
    public double IsaOffset => StaticTemperature - StandardAtmosphere.Temperature(PressureAltitude);

    /// <summary>From pressure altitude (m), Mach number and offset from the standard temperature (K).</summary>
    /// <exception cref="ArgumentOutOfRangeException">A value outside its range; the message says which and what was expected.</exception>
    public static FlightCondition AtIsaOffset(
        double pressureAltitude,
        double mach,
        double isaOffset,
        double waterAirRatio = 0.0
    ) =>
        new(
            pressureAltitude,
            StandardAtmosphere.Pressure(pressureAltitude),
            StandardAtmosphere.Temperature(pressureAltitude) + isaOffset,
            mach,
            waterAirRatio
        );

    /// <summary>From pressure altitude (m), Mach number and outside air temperature (K).</summary>
    /// <exception cref="ArgumentOutOfRangeException">A value outside its range.</exception>
    public static FlightCondition AtTemperature(
        double pressureAltitude,
        double mach,
        double temperature,
        double waterAirRatio = 0.0
    ) => new(pressureAltitude, StandardAtmosphere.Pressure(pressureAltitude), temperature, mach, waterAirRatio);

    /// <summary>From static pressure (Pa), Mach number and outside air temperature (K).</summary>
    /// <exception cref="ArgumentOutOfRangeException">A value outside its range.</exception>
    public static FlightCondition AtPressure(
        double staticPressure,
        double mach,
        double temperature,
        double waterAirRatio = 0.0
    ) =>
        new(StandardAtmosphere.PressureAltitude(staticPressure), staticPressure, temperature, mach, waterAirRatio);

    /// <summary>The same with a relative humidity of 0 to 1.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Relative humidity outside 0 to 1, or a temperature the formula does not cover.</exception>
    public FlightCondition WithRelativeHumidity(double relativeHumidity) =>
        new(
            PressureAltitude,
            StaticPressure,
            StaticTemperature,
            Mach,
            Humidity.WaterAirRatio(relativeHumidity, StaticPressure, StaticTemperature)
        );
}
