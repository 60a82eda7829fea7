using CsCheck;
using CycleSim.Air;

namespace CycleSim.Tests.Air;

public class AirspeedTests
{
    // By definition calibrated and true airspeed are the same at sea level on a standard day.
    [Theory]
    [InlineData(0.2)]
    [InlineData(0.85)]
    [InlineData(1.4)]
    public void Calibrated_is_true_at_sea_level(double mach) =>
        Assert.Equal(
            Airspeed.TrueFromMach(mach, 288.15),
            Airspeed.CalibratedFromMach(mach, 101325.0),
            1e-6
        );

    // Mach 0.80 at 35 000 ft is about 272 kt calibrated, 461 kt true on a standard day (from memory, flight planning tables).
    [Fact]
    public void Cruise_speeds_are_those_of_the_tables()
    {
        const double Knot = 1852.0 / 3600.0;
        Assert.Equal(272.0, Airspeed.CalibratedFromMach(0.8, StandardAtmosphere.Pressure(10668.0)) / Knot, 1.0);
        Assert.Equal(461.0, Airspeed.TrueFromMach(0.8, StandardAtmosphere.Temperature(10668.0)) / Knot, 1.0);
    }

    // Pitot pressure behind a normal shock at Mach 2: p02/p1 = 5.640 (NACA Report 1135, table II).
    [Fact]
    public void Supersonic_pitot_follows_Rayleigh() => Assert.Equal(5.640, Airspeed.ImpactRatio(2.0) + 1.0, 0.0005);

    [Fact]
    public void Mach_undoes_calibrated_airspeed() =>
        Gen.Select(Gen.Double[0.01, 2.5], Gen.Double[0.0, 20000.0])
            .Sample(
                (mach, altitude) =>
                {
                    var p = StandardAtmosphere.Pressure(altitude);
                    var back = Airspeed.MachFromCalibrated(Airspeed.CalibratedFromMach(mach, p), p);
                    return Math.Abs(back - mach) < 1e-9;
                },
                iter: 1000
            );

    [Fact]
    public void Flight_conditions_refuse_what_no_engine_meets()
    {
        Assert.Contains("between 0 and 3", Message(() => FlightCondition.AtIsaOffset(0, 3.1, 0)));
        Assert.Contains("between 0 and 3", Message(() => FlightCondition.AtIsaOffset(0, -0.1, 0)));
        Assert.Contains("170 to 340 K", Message(() => FlightCondition.AtIsaOffset(0, 0.5, 80)));
        Assert.Contains("32000 m", Message(() => FlightCondition.AtTemperature(40000, 0.5, 250)));
        Assert.Contains("between 0 and 0.1", Message(() => FlightCondition.AtIsaOffset(0, 0, 0, 0.2)));
    }

    private static string Message(Action action) => Assert.Throws<ArgumentOutOfRangeException>(action).Message;
}
