using CsCheck;
using CycleSim.Air;

namespace CycleSim.Tests.Air;

public class AirspeedTests
{
    private const double Knot = 1852.0 / 3600.0;

    // By definition calibrated, equivalent and true airspeed are the same at sea level on a standard day.
    [Theory]
    [InlineData(0.0)]
    [InlineData(0.2)]
    [InlineData(0.85)]
    [InlineData(1.0)]
    [InlineData(1.4)]
    public void All_airspeeds_are_one_at_sea_level(double mach)
    {
        var speed = Airspeed.TrueFromMach(mach, 288.15);
        Assert.Equal(speed, Airspeed.CalibratedFromMach(mach, 101325.0), 1e-6);
        Assert.Equal(speed, Airspeed.EquivalentFromMach(mach, 101325.0), 1e-9);
    }

    // Mach 0.80 at 35 000 ft is about 272 kt calibrated, 461 kt true on a standard day (from memory, flight planning
    // tables).
    [Fact]
    public void Cruise_speeds_are_those_of_the_tables()
    {
        Assert.Equal(272.0, Airspeed.CalibratedFromMach(0.8, StandardAtmosphere.Pressure(10668.0)) / Knot, 1.0);
        Assert.Equal(461.0, Airspeed.TrueFromMach(0.8, StandardAtmosphere.Temperature(10668.0)) / Knot, 1.0);
        Assert.Equal(0.8, Airspeed.MachFromCalibrated(272.0 * Knot, StandardAtmosphere.Pressure(10668.0)), 0.003);
    }

    // Static over total pressure (NACA Report 1135, table I, from memory).
    [Theory]
    [InlineData(0.5, 0.8430)]
    [InlineData(0.8, 0.6560)]
    [InlineData(1.0, 0.5283)]
    public void Subsonic_pitot_is_isentropic(double mach, double staticOverTotal) =>
        Assert.Equal(staticOverTotal, 1.0 / (Airspeed.ImpactRatio(mach) + 1.0), 0.00005);

    // Pitot pressure behind a normal shock over static pressure before it (NACA Report 1135, table II, from memory).
    [Theory]
    [InlineData(1.5, 3.413)]
    [InlineData(2.0, 5.640)]
    [InlineData(3.0, 12.061)]
    [InlineData(5.0, 32.653)]
    public void Supersonic_pitot_follows_Rayleigh(double mach, double ratio) =>
        Assert.Equal(ratio, Airspeed.ImpactRatio(mach) + 1.0, 0.0005);

    // In slow air impact pressure is half density times speed squared (Bernoulli); compressibility adds M2 / 4 of it.
    [Fact]
    public void Slow_impact_pressure_is_the_dynamic_pressure()
    {
        var speed = Airspeed.TrueFromMach(0.1, 288.15);
        Assert.Equal(0.5 * 1.225 * speed * speed * 1.0025, Airspeed.ImpactPressure(0.1, 101325.0), 0.01);
    }

    [Fact]
    public void Equivalent_airspeed_keeps_the_dynamic_pressure() =>
        Flights()
            .Sample(
                (mach, altitude) =>
                {
                    var p = StandardAtmosphere.Pressure(altitude);
                    var speed = Airspeed.TrueFromMach(mach, StandardAtmosphere.Temperature(altitude));
                    var equivalent = Airspeed.EquivalentFromMach(mach, p);
                    var dynamic = StandardAtmosphere.Density(altitude) * speed * speed;
                    return Math.Abs(1.225 * equivalent * equivalent / dynamic - 1.0) < 1e-6;
                },
                iter: 1000
            );

    // The compressibility correction lowers equivalent below calibrated airspeed at every height.
    [Fact]
    public void Equivalent_is_below_calibrated_above_sea_level() =>
        Flights()
            .Sample(
                (mach, altitude) =>
                {
                    var p = StandardAtmosphere.Pressure(altitude);
                    return Airspeed.EquivalentFromMach(mach, p) <= Airspeed.CalibratedFromMach(mach, p) + 1e-9;
                },
                iter: 1000
            );

    [Fact]
    public void Mach_undoes_calibrated_airspeed() =>
        Gen.Select(Gen.Double[0.0, 4.99], Gen.Double[-2000.0, 32000.0])
            .Sample(
                (mach, altitude) =>
                {
                    var p = StandardAtmosphere.Pressure(altitude);
                    var back = Airspeed.MachFromCalibrated(Airspeed.CalibratedFromMach(mach, p), p);
                    return Math.Abs(back - mach) < (mach < 0.01 ? 1e-6 : 1e-9);
                },
                iter: 1000
            );

    [Fact]
    public void Mach_undoes_true_airspeed() =>
        Gen.Select(Gen.Double[0.0, 4.99], Gen.Double[170.0, 340.0])
            .Sample(
                (mach, temperature) =>
                    Math.Abs(Airspeed.MachFromTrue(Airspeed.TrueFromMach(mach, temperature), temperature) - mach)
                    < 1e-12,
                iter: 1000
            );

    [Theory]
    [InlineData(-0.1)]
    [InlineData(5.1)]
    [InlineData(double.NaN)]
    public void Refuses_mach_numbers_outside_the_range(double mach)
    {
        Refused("mach", "between 0 and 5", () => Airspeed.ImpactRatio(mach));
        Refused("mach", "between 0 and 5", () => Airspeed.ImpactPressure(mach, 101325.0));
        Refused("mach", "between 0 and 5", () => Airspeed.TrueFromMach(mach, 288.15));
        Refused("mach", "between 0 and 5", () => Airspeed.CalibratedFromMach(mach, 101325.0));
        Refused("mach", "between 0 and 5", () => Airspeed.EquivalentFromMach(mach, 101325.0));
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(-1.0)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Refuses_pressures_and_temperatures_that_no_air_has(double value)
    {
        Refused("staticPressure", "above 0 Pa", () => Airspeed.ImpactPressure(0.5, value));
        Refused("staticPressure", "above 0 Pa", () => Airspeed.CalibratedFromMach(0.5, value));
        Refused("staticPressure", "above 0 Pa", () => Airspeed.MachFromCalibrated(100.0, value));
        Refused("staticPressure", "above 0 Pa", () => Airspeed.EquivalentFromMach(0.5, value));
        Refused("staticTemperature", "above 0 K", () => Airspeed.SpeedOfSound(value));
        Refused("staticTemperature", "above 0 K", () => Airspeed.TrueFromMach(0.5, value));
        Refused("staticTemperature", "above 0 K", () => Airspeed.MachFromTrue(100.0, value));
    }

    [Theory]
    [InlineData(-1.0, "cannot be negative")]
    [InlineData(double.NaN, "cannot be negative")]
    [InlineData(double.PositiveInfinity, "must be finite")]
    [InlineData(2000.0, "more than Mach 5")]
    public void Refuses_speeds_that_belong_to_no_mach_number(double speed, string message)
    {
        Refused("trueAirspeed", message, () => Airspeed.MachFromTrue(speed, 288.15));
        Refused("calibratedAirspeed", message, () => Airspeed.MachFromCalibrated(speed, 101325.0));
    }

    private static Gen<(double, double)> Flights() => Gen.Select(Gen.Double[0.01, 3.0], Gen.Double[0.0, 32000.0]);

    private static void Refused(string parameter, string message, Func<object?> action)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(action);
        Assert.Equal(parameter, error.ParamName);
        Assert.Contains(message, error.Message);
    }
}
