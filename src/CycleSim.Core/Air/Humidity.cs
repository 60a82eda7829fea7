namespace CycleSim.Air;

/// <summary>
/// Water vapour in air. Saturation pressure over liquid water after Buck (1981): 6.1121 hPa exp(17.502 t / (240.97 + t)),
/// without enhancement factor, -80 to 60 degrees Celsius; below freezing by convention over supercooled water.
/// </summary>
public static class Humidity
{
    /// <summary>Molar mass of water over that of dry air.</summary>
    public const double MolarMassRatio = 0.62197;

    /// <summary>Saturation vapour pressure over water, Pa, at a temperature in K.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Temperature outside 193 to 333 K.</exception>
    public static double SaturationPressure(double temperature)
    {
        var celsius = temperature - 273.15;
        return celsius is >= -80.0 and <= 60.0
            ? 611.21 * Math.Exp(17.502 * celsius / (240.97 + celsius))
            : throw new ArgumentOutOfRangeException(
                nameof(temperature),
                $"The saturation formula holds from -80 to 60 °C; {celsius:F1} °C ({temperature:F1} K) was given. "
                    + "Give the humidity as a water-air ratio instead, or leave it out."
            );
    }

    /// <summary>Water-air ratio, kg per kg of dry air, for a relative humidity of 0 to 1 at static pressure and temperature.</summary>
    /// <exception cref="ArgumentOutOfRangeException">Relative humidity outside 0 to 1, or vapour alone exceeding the pressure.</exception>
    public static double WaterAirRatio(double relativeHumidity, double pressure, double temperature)
    {
        if (relativeHumidity is not (>= 0.0 and <= 1.0))
            throw new ArgumentOutOfRangeException(
                nameof(relativeHumidity),
                $"Relative humidity must lie between 0 and 1 (0 and 100 %); {relativeHumidity:G4} was given."
            );
        if (relativeHumidity == 0.0)
            return 0.0;
        var vapour = relativeHumidity * SaturationPressure(temperature);
        return vapour < pressure
            ? MolarMassRatio * vapour / (pressure - vapour)
            : throw new ArgumentOutOfRangeException(
                nameof(pressure),
                $"At {temperature:F1} K the vapour alone would have {vapour:F0} Pa, more than the static pressure of {pressure:F0} Pa."
            );
    }

    /// <summary>Relative humidity, 0 to 1 (above 1: supersaturated), for a water-air ratio.</summary>
    public static double RelativeHumidity(double waterAirRatio, double pressure, double temperature) =>
        waterAirRatio
        / (MolarMassRatio + waterAirRatio)
        * pressure
        / SaturationPressure(temperature);
}
