namespace CycleSim.Air;

/// <summary>
/// Where and how fast an engine flies. Made by the factories, which check it; all members SI. The default value is no
/// flight condition: its pressure and temperature are zero.
/// </summary>
public readonly record struct FlightCondition
{
    /// <summary>Range of outside air temperature, K.</summary>
    public const double LowestTemperature = 170.0,
        HighestTemperature = 340.0;

    /// <summary>Highest Mach number; the lowest is 0.</summary>
    public const double HighestMach = 3.0;

    /// <summary>Highest water-air ratio, kg per kg of dry air: more than any weather brings.</summary>
    public const double HighestWaterAirRatio = 0.1;

    private FlightCondition(double altitude, double pressure, double temperature, double mach, double waterAirRatio)
    {
        if (temperature is not (>= LowestTemperature and <= HighestTemperature))
            throw new ArgumentOutOfRangeException(
                nameof(temperature),
                $"An outside air temperature of {temperature:F1} K ({temperature - 273.15:F1} °C, "
                    + $"ISA {temperature - StandardAtmosphere.Temperature(altitude):+0.0;-0.0} K) is outside "
                    + $"{LowestTemperature:F0} to {HighestTemperature:F0} K. "
                    + "Check the temperature or offset and its unit."
            );
        if (mach is not (>= 0.0 and <= HighestMach))
            throw new ArgumentOutOfRangeException(
                nameof(mach),
                $"Mach number must lie between 0 and {HighestMach:F0}; {mach:G4} was given."
            );
        if (waterAirRatio is not (>= 0.0 and <= HighestWaterAirRatio))
            throw new ArgumentOutOfRangeException(
                nameof(waterAirRatio),
                $"Water-air ratio must lie between 0 and {HighestWaterAirRatio:G1} kg/kg; {waterAirRatio:G4} was "
                    + "given or follows from the relative humidity. Give kg of vapour per kg of dry air, or lower the "
                    + "humidity."
            );
        (PressureAltitude, StaticPressure, StaticTemperature, Mach, WaterAirRatio) = (
            altitude,
            pressure,
            temperature,
            mach,
            waterAirRatio
        );
    }

    /// <summary>Pressure altitude, m.</summary>
    public double PressureAltitude { get; }

    /// <summary>Ambient static pressure, Pa.</summary>
    public double StaticPressure { get; }

    /// <summary>Outside air (static) temperature, K.</summary>
    public double StaticTemperature { get; }

    /// <summary>Flight Mach number.</summary>
    public double Mach { get; }

    /// <summary>Water vapour per kilogram of dry air.</summary>
    public double WaterAirRatio { get; }

    /// <summary>Outside air temperature less the standard's at this altitude, K.</summary>
    public double IsaOffset => StaticTemperature - StandardAtmosphere.Temperature(PressureAltitude);

    /// <summary>From pressure altitude (m), Mach number and offset from the standard temperature (K).</summary>
    /// <exception cref="ArgumentOutOfRangeException">A value outside its range; the message says which.</exception>
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
    ) => new(StandardAtmosphere.PressureAltitude(staticPressure), staticPressure, temperature, mach, waterAirRatio);

    /// <summary>The same with a relative humidity of 0 to 1.</summary>
    /// <exception cref="ArgumentOutOfRangeException">
    /// Relative humidity outside 0 to 1, or a temperature the formula does not cover.
    /// </exception>
    public FlightCondition WithRelativeHumidity(double relativeHumidity) =>
        new(
            PressureAltitude,
            StaticPressure,
            StaticTemperature,
            Mach,
            Humidity.WaterAirRatio(relativeHumidity, StaticPressure, StaticTemperature)
        );
}
