namespace CycleSim.Air;

/// <summary>
/// Water vapour in air; Pa, K, kg of vapour per kg of dry air. Saturation is over liquid water at all temperatures:
/// below freezing over supercooled water, as meteorology states relative humidity by convention, not over ice.
/// </summary>
public static class Humidity
{
    /// <summary>Range of the saturation formula, degrees Celsius.</summary>
    public const double LowestCelsius = -80.0,
        HighestCelsius = 60.0;

    /// <summary>Molar mass of water over that of dry air.</summary>
    public const double MolarMassRatio = 0.62197;

    /// <summary>
    /// Saturation pressure of pure vapour over water, Pa: Buck (1981), J. Applied Meteorology 20, 6.1121 hPa
    /// exp(17.502 t / (240.97 + t)).
    /// </summary>
    /// <exception cref="ArgumentOutOfRangeException">Temperature outside -80 to 60 degrees Celsius.</exception>
    public static double SaturationPressure(double temperature)
    {
        var celsius = temperature - 273.15;
        return celsius is >= LowestCelsius and <= HighestCelsius
            ? 611.21 * Math.Exp(17.502 * celsius / (240.97 + celsius))
            : throw new ArgumentOutOfRangeException(
                nameof(temperature),
                $"The saturation formula holds from {LowestCelsius:F0} to {HighestCelsius:F0} °C; {celsius:F1} °C "
                    + $"({temperature:F1} K) was given. Give the humidity as a water-air ratio instead, or leave it "
                    + "out."
            );
    }

    /// <summary>
    /// Factor by which air at a pressure (Pa) raises the saturation pressure above that of pure vapour: Buck (1981),
    /// 1.0007 + 3.46e-6 p with p in hPa; about 1.004 near the ground.
    /// </summary>
    /// <exception cref="ArgumentOutOfRangeException">Pressure not above zero.</exception>
    public static double EnhancementFactor(double pressure) => 1.0007 + 3.46e-8 * Guard.StaticPressure(pressure);

    /// <summary>
    /// Water-air ratio, kg per kg of dry air, for a relative humidity of 0 to 1 at static pressure and temperature. Dry
    /// air may have any temperature. With <paramref name="enhanced"/> the enhancement factor is applied; the reference
    /// humidity of ICAO follows without it.
    /// </summary>
    /// <exception cref="ArgumentOutOfRangeException">
    /// Relative humidity outside 0 to 1, pressure or temperature not above zero, the formula's range left, or vapour
    /// alone reaching the static pressure.
    /// </exception>
    public static double WaterAirRatio(
        double relativeHumidity,
        double pressure,
        double temperature,
        bool enhanced = false
    )
    {
        if (relativeHumidity is not (>= 0.0 and <= 1.0))
            throw new ArgumentOutOfRangeException(
                nameof(relativeHumidity),
                $"Relative humidity must lie between 0 and 1 (0 and 100 %); {relativeHumidity:G4} was given."
            );
        Guard.StaticPressure(pressure);
        Guard.StaticTemperature(temperature);
        if (relativeHumidity == 0.0)
            return 0.0;
        var vapour = relativeHumidity * SaturationPressureInAir(pressure, temperature, enhanced);
        return vapour < pressure
            ? MolarMassRatio * vapour / (pressure - vapour)
            : throw new ArgumentOutOfRangeException(
                nameof(pressure),
                $"At {temperature:F1} K and {relativeHumidity * 100.0:F0} % relative humidity the vapour alone would "
                    + $"have {vapour:F0} Pa, not less than the static pressure of {pressure:F0} Pa. Check the "
                    + "pressure and its unit, or lower the humidity."
            );
    }

    /// <summary>
    /// Relative humidity for a water-air ratio of 0 or more at static pressure and temperature, the reverse of
    /// <see cref="WaterAirRatio"/>; a result above 1 is supersaturated air.
    /// </summary>
    /// <exception cref="ArgumentOutOfRangeException">
    /// Negative or infinite ratio, pressure not above zero, temperature outside the formula's range.
    /// </exception>
    public static double RelativeHumidity(
        double waterAirRatio,
        double pressure,
        double temperature,
        bool enhanced = false
    )
    {
        if (!(waterAirRatio >= 0.0 && double.IsFinite(waterAirRatio)))
            throw new ArgumentOutOfRangeException(
                nameof(waterAirRatio),
                $"A water-air ratio must be 0 or more and finite; {waterAirRatio:G4} kg/kg was given."
            );
        var vapour = waterAirRatio / (MolarMassRatio + waterAirRatio) * Guard.StaticPressure(pressure);
        return vapour / SaturationPressureInAir(pressure, temperature, enhanced);
    }

    private static double SaturationPressureInAir(double pressure, double temperature, bool enhanced) =>
        SaturationPressure(temperature) * (enhanced ? EnhancementFactor(pressure) : 1.0);
}
