namespace CycleSim.Air;

/// <summary>
/// Airspeeds of a perfect gas with the ratio of specific heats 1.4 of the standard atmosphere; m/s, Pa, K. Mach numbers
/// from 0 to <see cref="HighestMach"/>. Pitot formulas: NACA Report 1135 (1953).
/// </summary>
/// <exception cref="ArgumentOutOfRangeException">
/// From every method: a pressure or temperature not above zero, a negative speed, a Mach number outside the range.
/// </exception>
public static class Airspeed
{
    /// <summary>Highest Mach number of any airspeed here.</summary>
    public const double HighestMach = 5.0;

    private static readonly double SeaLevelSound = SpeedOfSound(StandardAtmosphere.SeaLevelTemperature);

    /// <summary>Speed of sound, m/s, at a static temperature.</summary>
    public static double SpeedOfSound(double staticTemperature) =>
        Math.Sqrt(
            StandardAtmosphere.Gamma * StandardAtmosphere.GasConstant * Guard.StaticTemperature(staticTemperature)
        );

    /// <summary>True airspeed at a Mach number and static temperature.</summary>
    public static double TrueFromMach(double mach, double staticTemperature) =>
        CheckedMach(mach) * SpeedOfSound(staticTemperature);

    /// <summary>Mach number at a true airspeed and static temperature.</summary>
    public static double MachFromTrue(double trueAirspeed, double staticTemperature)
    {
        var mach = CheckedSpeed(trueAirspeed, nameof(trueAirspeed)) / SpeedOfSound(staticTemperature);
        return mach <= HighestMach ? mach : throw TooFast(trueAirspeed, nameof(trueAirspeed), "true");
    }

    /// <summary>Calibrated airspeed at a Mach number and static pressure.</summary>
    public static double CalibratedFromMach(double mach, double staticPressure)
    {
        var impact = ImpactPressure(mach, staticPressure) / StandardAtmosphere.SeaLevelPressure;
        return SeaLevelSound * MachFromImpactRatio(impact);
    }

    /// <summary>Mach number at a calibrated airspeed and static pressure.</summary>
    public static double MachFromCalibrated(double calibratedAirspeed, double staticPressure)
    {
        var atSeaLevel = CheckedSpeed(calibratedAirspeed, nameof(calibratedAirspeed)) / SeaLevelSound;
        var impact =
            PitotRatioLessOne(atSeaLevel) * StandardAtmosphere.SeaLevelPressure / Guard.StaticPressure(staticPressure);
        return impact <= PitotRatioLessOne(HighestMach)
            ? MachFromImpactRatio(impact)
            : throw TooFast(calibratedAirspeed, nameof(calibratedAirspeed), "calibrated");
    }

    /// <summary>Equivalent airspeed at a Mach number and static pressure.</summary>
    public static double EquivalentFromMach(double mach, double staticPressure) =>
        CheckedMach(mach)
        * SeaLevelSound
        * Math.Sqrt(Guard.StaticPressure(staticPressure) / StandardAtmosphere.SeaLevelPressure);

    /// <summary>Impact pressure, Pa: what a pitot tube reads above static pressure.</summary>
    public static double ImpactPressure(double mach, double staticPressure) =>
        ImpactRatio(mach) * Guard.StaticPressure(staticPressure);

    /// <summary>
    /// Impact pressure over static pressure: isentropic below Mach 1, behind a normal shock (Rayleigh's pitot formula)
    /// above.
    /// </summary>
    public static double ImpactRatio(double mach) => PitotRatioLessOne(CheckedMach(mach));

    private static double PitotRatioLessOne(double mach)
    {
        var m2 = mach * mach;
        return mach <= 1.0
            ? Math.Pow(1.0 + 0.2 * m2, 3.5) - 1.0
            : Math.Pow(1.2 * m2, 3.5) * Math.Pow(6.0 / (7.0 * m2 - 1.0), 2.5) - 1.0;
    }

    private static double MachFromImpactRatio(double impact)
    {
        if (impact <= PitotRatioLessOne(1.0))
            return Math.Sqrt(5.0 * (Math.Pow(impact + 1.0, 1.0 / 3.5) - 1.0));
        // Rayleigh's formula has no inverse in closed form but rises steadily with Mach number. The pitot ratio
        // exceeds M2, so this bracket holds the root at any pressure.
        double low = 1.0,
            high = 1.0 + Math.Sqrt(impact);
        for (var i = 0; i < 60; i++)
        {
            var middle = 0.5 * (low + high);
            if (PitotRatioLessOne(middle) < impact)
                low = middle;
            else
                high = middle;
        }

        return low;
    }

    private static double CheckedMach(double mach) =>
        mach is >= 0.0 and <= HighestMach
            ? mach
            : throw new ArgumentOutOfRangeException(
                nameof(mach),
                $"Mach number must lie between 0 and {HighestMach:F0} for an airspeed; {mach:G4} was given."
            );

    private static double CheckedSpeed(double speed, string name) =>
        speed >= 0.0 && double.IsFinite(speed)
            ? speed
            : throw new ArgumentOutOfRangeException(
                name,
                $"An airspeed cannot be negative and must be finite; {speed:G4} m/s was given."
            );

    private static ArgumentOutOfRangeException TooFast(double speed, string name, string kind) =>
        new(
            name,
            $"At this pressure or temperature a {kind} airspeed of {speed:F1} m/s means more than "
                + $"Mach {HighestMach:F0}, the highest covered here. Check the speed and its unit."
        );
}
