using CsCheck;
using CycleSim.Air;

namespace CycleSim.Tests.Air;

public class FlightConditionTests
{
    // 35 000 ft, ISA + 10 K: 23842.27 Pa and 218.808 K on a standard day (Data/isa_check.csv, source in the file).
    [Fact]
    public void Carries_what_the_standard_has_at_the_altitude()
    {
        var flight = FlightCondition.AtIsaOffset(10668.0, 0.8, 10.0, 0.001);
        Assert.Equal(10668.0, flight.PressureAltitude);
        Assert.Equal(23842.27, flight.StaticPressure, 0.00501);
        Assert.Equal(228.808, flight.StaticTemperature, 0.000501);
        Assert.Equal(10.0, flight.IsaOffset, 1e-9);
        Assert.Equal(0.8, flight.Mach);
        Assert.Equal(0.001, flight.WaterAirRatio);
    }

    // 60 % at 15 C, sea level is the ICAO reference humidity of 0.00634 kg/kg (Annex 16 vol. II).
    [Fact]
    public void Takes_humidity_as_a_relative_humidity() =>
        Assert.Equal(
            0.00634,
            FlightCondition.AtIsaOffset(0.0, 0.0, 0.0).WithRelativeHumidity(0.6).WaterAirRatio,
            0.00002
        );

    [Fact]
    public void Dry_air_may_be_colder_than_the_saturation_formula_reaches() =>
        Assert.Equal(0.0, FlightCondition.AtTemperature(15000.0, 0.8, 180.0).WithRelativeHumidity(0.0).WaterAirRatio);

    [Fact]
    public void Every_factory_gives_the_same_flight() =>
        Gen.Select(Gen.Double[-2000.0, 32000.0], Gen.Double[0.0, 3.0], Gen.Double[-10.0, 30.0])
            .Sample(
                (altitude, mach, offset) =>
                {
                    var first = FlightCondition.AtIsaOffset(altitude, mach, offset);
                    var second = FlightCondition.AtTemperature(altitude, mach, first.StaticTemperature);
                    var third = FlightCondition.AtPressure(first.StaticPressure, mach, first.StaticTemperature);
                    return first == second
                        && Math.Abs(third.PressureAltitude - altitude) < 1e-6
                        && Math.Abs(third.IsaOffset - offset) < 1e-6;
                },
                iter: 1000
            );

    [Fact]
    public void Refuses_what_no_engine_meets()
    {
        Assert.Contains("between 0 and 3", Message(() => FlightCondition.AtIsaOffset(0, 3.1, 0)));
        Assert.Contains("between 0 and 3", Message(() => FlightCondition.AtIsaOffset(0, -0.1, 0)));
        Assert.Contains("between 0 and 3", Message(() => FlightCondition.AtIsaOffset(0, double.NaN, 0)));
        Assert.Contains("ISA +80.0 K", Message(() => FlightCondition.AtIsaOffset(0, 0.5, 80)));
        Assert.Contains("170 to 340 K", Message(() => FlightCondition.AtIsaOffset(0, 0.5, double.NaN)));
        Assert.Contains("170 to 340 K", Message(() => FlightCondition.AtTemperature(0, 0.5, 15.0)));
        Assert.Contains("32000 m", Message(() => FlightCondition.AtTemperature(40000, 0.5, 250)));
        Assert.Contains("868 to 127774 Pa", Message(() => FlightCondition.AtPressure(1013.25e2 * 2.0, 0.5, 250)));
        Assert.Contains("between 0 and 0.1", Message(() => FlightCondition.AtIsaOffset(0, 0, 0, 0.2)));
        Assert.Contains("between 0 and 0.1", Message(() => FlightCondition.AtIsaOffset(0, 0, 0, double.NaN)));
    }

    [Fact]
    public void Refuses_humidities_that_cannot_be()
    {
        var cold = FlightCondition.AtTemperature(15000.0, 0.8, 180.0);
        Assert.Contains("-80 to 60 °C", Message(() => cold.WithRelativeHumidity(0.1)));
        Assert.Contains("between 0 and 1", Message(() => cold.WithRelativeHumidity(60.0)));
        var hot = FlightCondition.AtTemperature(0.0, 0.0, 328.0);
        Assert.Contains("follows from the relative humidity", Message(() => hot.WithRelativeHumidity(1.0)));
        Assert.Contains("above 0 Pa", Message(() => default(FlightCondition).WithRelativeHumidity(0.0)));
    }

    [Fact]
    public void Allocates_nothing()
    {
        static double Once(double altitude)
        {
            var flight = FlightCondition.AtIsaOffset(altitude, 1.4, 5.0).WithRelativeHumidity(0.3);
            var speed = Airspeed.CalibratedFromMach(flight.Mach, flight.StaticPressure);
            return Airspeed.MachFromCalibrated(speed, flight.StaticPressure)
                + FlightCondition.AtPressure(flight.StaticPressure, 0.5, flight.StaticTemperature).IsaOffset
                + StandardAtmosphere.ViscosityAtAltitude(altitude);
        }

        Once(1000.0);
        var before = GC.GetAllocatedBytesForCurrentThread();
        for (var k = 0; k < 100; k++)
            Once(100.0 * k);
        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }

    private static string Message(Func<FlightCondition> make) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => make()).Message;
}
