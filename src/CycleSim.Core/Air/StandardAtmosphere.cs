namespace CycleSim.Air;

/// <summary>
/// The international standard atmosphere of ISO 2533:1975 over pressure altitude (geopotential), -2 000 to 32 000 m.
/// </summary>
public static class StandardAtmosphere
{
    public const double LowestAltitude = -2000.0,
        HighestAltitude = 32000.0;

    /// <summary>Sea level: K, Pa, kg/m3.</summary>
    public const double SeaLevelTemperature = 288.15,
        SeaLevelPressure = 101325.0,
        SeaLevelDensity = 1.225;

    /// <summary>Standard acceleration of free fall, m/s2.</summary>
    public const double Gravity = 9.80665;

    /// <summary>
    /// The standard's own gas constant R*, J/(kmol K) (not today's CODATA value), and molar mass of air, kg/kmol; ratio
    /// of specific heats.
    /// </summary>
    public const double MolarGasConstant = 8314.32,
        MolarMass = 28.964420,
        Gamma = 1.4;

    /// <summary>Gas constant of air in the standard, J/(kg K).</summary>
    public const double GasConstant = MolarGasConstant / MolarMass;

    /// <summary>Sutherland's law in the standard: coefficient, kg/(m s K^0.5), and temperature, K.</summary>
    public const double SutherlandCoefficient = 1.458e-6,
        SutherlandTemperature = 110.4;

    /// <summary>Temperatures, K, between which Sutherland's law holds to about 2 per cent.</summary>
    public const double LowestViscosityTemperature = 170.0,
        HighestViscosityTemperature = 1900.0;

    // Base altitude (m), temperature (K), gradient (K/m); the lowest layer is used below sea level too.
    private static readonly (double Altitude, double Temperature, double Gradient)[] Layers =
    [
        (0.0, 288.15, -0.0065),
        (11000.0, 216.65, 0.0),
        (20000.0, 216.65, 0.001),
    ];

    private static readonly double[] BasePressures = PressuresAtBases();

    /// <summary>Temperature, K.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Altitude outside the range.</exception>
    public static double Temperature(double pressureAltitude)
    {
        var layer = Layers[LayerOf(Checked(pressureAltitude))];
        return layer.Temperature + layer.Gradient * (pressureAltitude - layer.Altitude);
    }

    /// <summary>Pressure, Pa.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Altitude outside the range.</exception>
    public static double Pressure(double pressureAltitude)
    {
        var k = LayerOf(Checked(pressureAltitude));
        return BasePressures[k] * PressureRatio(Layers[k], pressureAltitude);
    }

    /// <summary>Density, kg/m3.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Altitude outside the range.</exception>
    public static double Density(double pressureAltitude) =>
        Pressure(pressureAltitude) / (GasConstant * Temperature(pressureAltitude));

    /// <summary>Speed of sound, m/s.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Altitude outside the range.</exception>
    public static double SpeedOfSound(double pressureAltitude) => Airspeed.SpeedOfSound(Temperature(pressureAltitude));

    /// <summary>Dynamic viscosity, Pa s, at a pressure altitude on a standard day.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Altitude outside the range.</exception>
    public static double ViscosityAtAltitude(double pressureAltitude) => Viscosity(Temperature(pressureAltitude));

    /// <summary>Dynamic viscosity of air, Pa s, at a temperature (K), by Sutherland's law as in the standard.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Temperature outside 170 to 1900 K.</exception>
    public static double Viscosity(double temperature) =>
        temperature is >= LowestViscosityTemperature and <= HighestViscosityTemperature
            ? SutherlandCoefficient * temperature * Math.Sqrt(temperature) / (temperature + SutherlandTemperature)
            : throw new ArgumentOutOfRangeException(
                nameof(temperature),
                $"The viscosity of air is given from {LowestViscosityTemperature:F0} to "
                    + $"{HighestViscosityTemperature:F0} K; {temperature:F1} K was given. Give the temperature "
                    + "in kelvin, not as an altitude or in °C."
            );

    /// <summary>Pressure altitude (m) at which the standard has this pressure (Pa).</summary>
    /// <exception cref="ArgumentOutOfRangeException">The pressure belongs to no altitude in the range.</exception>
    public static double PressureAltitude(double pressure)
    {
        if (!(pressure <= Pressure(LowestAltitude)) || !(pressure >= Pressure(HighestAltitude)))
            throw new ArgumentOutOfRangeException(
                nameof(pressure),
                $"A static pressure of {pressure:F0} Pa lies outside {Pressure(HighestAltitude):F0} to "
                    + $"{Pressure(LowestAltitude):F0} Pa, the range of the standard atmosphere used here. Give it in "
                    + "pascal, absolute."
            );
        var k = Layers.Length - 1;
        while (k > 0 && pressure > BasePressures[k])
            k--;
        var (altitude, temperature, gradient) = Layers[k];
        var log = Math.Log(pressure / BasePressures[k]);
        return gradient == 0.0
            ? altitude - log * GasConstant * temperature / Gravity
            : altitude + temperature / gradient * (Math.Exp(-log * GasConstant * gradient / Gravity) - 1.0);
    }

    private static double[] PressuresAtBases()
    {
        var pressures = new double[Layers.Length];
        pressures[0] = SeaLevelPressure;
        for (var k = 1; k < Layers.Length; k++)
            pressures[k] = pressures[k - 1] * PressureRatio(Layers[k - 1], Layers[k].Altitude);
        return pressures;
    }

    private static double PressureRatio((double Altitude, double Temperature, double Gradient) layer, double altitude)
    {
        var above = altitude - layer.Altitude;
        return layer.Gradient == 0.0
            ? Math.Exp(-Gravity * above / (GasConstant * layer.Temperature))
            : Math.Pow(1.0 + layer.Gradient * above / layer.Temperature, -Gravity / (GasConstant * layer.Gradient));
    }

    private static int LayerOf(double altitude)
    {
        var k = Layers.Length - 1;
        while (k > 0 && altitude < Layers[k].Altitude)
            k--;
        return k;
    }

    private static double Checked(double pressureAltitude) =>
        pressureAltitude is >= LowestAltitude and <= HighestAltitude
            ? pressureAltitude
            : throw new ArgumentOutOfRangeException(
                nameof(pressureAltitude),
                $"A pressure altitude of {pressureAltitude:F0} m ({pressureAltitude / 0.3048:F0} ft) lies outside "
                    + $"{LowestAltitude:F0} to {HighestAltitude:F0} m, the range of the standard atmosphere used here. "
                    + "Check the altitude and its unit."
            );
}
