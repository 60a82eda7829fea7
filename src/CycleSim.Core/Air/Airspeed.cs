namespace CycleSim.Air;

/// <summary>Airspeeds, with the ratio of specific heats 1.4 of the standard atmosphere; m/s, Pa, K.</summary>
public static class Airspeed
{
    private static readonly double SeaLevelSound = SpeedOfSound(StandardAtmosphere.SeaLevelTemperature);

    /// <summary>True airspeed at a Mach number and static temperature.</summary>
    public static double TrueFromMach(double mach, double staticTemperature) => mach * SpeedOfSound(staticTemperature);

    /// <summary>Mach number at a true airspeed and static temperature.</summary>
    public static double MachFromTrue(double trueAirspeed, double staticTemperature) =>
        trueAirspeed / SpeedOfSound(staticTemperature);

    /// <summary>Calibrated airspeed at a Mach number and static pressure.</summary>
    public static double CalibratedFromMach(double mach, double staticPressure)
    {
        var impact = ImpactRatio(mach) * staticPressure / StandardAtmosphere.SeaLevelPressure;
        return SeaLevelSound * MachFromImpactRatio(impact);
    }

    /// <summary>Mach number at a calibrated airspeed and static pressure.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The speed is negative or belongs to no Mach number below 5.</exception>
    public static double MachFromCalibrated(double calibratedAirspeed, double staticPressure)
    {
        if (!(calibratedAirspeed >= 0.0))
            throw new ArgumentOutOfRangeException(
                nameof(calibratedAirspeed),
                $"A calibrated airspeed cannot be negative; {calibratedAirspeed:F1} m/s was given."
            );
        var impact =
            ImpactRatio(calibratedAirspeed / SeaLevelSound) * StandardAtmosphere.SeaLevelPressure / staticPressure;
        return MachFromImpactRatio(impact);
    }

    /// <summary>Equivalent airspeed at a Mach number and static pressure.</summary>
    public static double EquivalentFromMach(double mach, double staticPressure) =>
        mach * SeaLevelSound * Math.Sqrt(staticPressure / StandardAtmosphere.SeaLevelPressure);

    /// <summary>
    /// Impact pressure over static pressure: isentropic below Mach 1, behind a normal shock (Rayleigh's pitot formula)
    /// above.
    /// </summary>
    public static double ImpactRatio(double mach)
    {
        var m2 = mach * mach;
        if (mach <= 1.0)
            return Math.Pow(1.0 + 0.2 * m2, 3.5) - 1.0;
        return Math.Pow(1.2 * m2, 3.5) * Math.Pow(6.0 / (7.0 * m2 - 1.0), 2.5) - 1.0;
    }

    private static double MachFromImpactRatio(double impact)
    {
        if (impact <= ImpactRatio(1.0))
            return Math.Sqrt(5.0 * (Math.Pow(impact + 1.0, 1.0 / 3.5) - 1.0));
        double low = 1.0,
            high = 5.0;
        if (!(impact < ImpactRatio(high)))
            throw new ArgumentOutOfRangeException(nameof(impact), "the airspeed belongs to no Mach number below 5");
        for (var i = 0; i < 60; i++)
        {
            var middle = 0.5 * (low + high);
            if (ImpactRatio(middle) < impact)
                low = middle;
            else
                high = middle;
        }

        return low;
    }

    private static double SpeedOfSound(double staticTemperature) =>
        Math.Sqrt(StandardAtmosphere.Gamma * StandardAtmosphere.GasConstant * staticTemperature);
}
