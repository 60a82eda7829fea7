using System.Globalization;
using CsCheck;
using CycleSim.Air;

namespace CycleSim.Tests.Air;

public class StandardAtmosphereTests
{
    // Every row and column of Data/isa_check.csv (source in the file), to half a unit of the last digit printed.
    [Fact]
    public void Reproduces_the_printed_table_to_every_digit()
    {
        var rows = 0;
        foreach (var row in TestData.Rows("isa_check.csv"))
        {
            var h = row.Number("H_m");
            if (row["H_geopotential"] == "36089.24")
                h = 36089.24 * 0.3048;
            Same(row["T_K"], StandardAtmosphere.Temperature(h));
            Same(row["p_Pa"], StandardAtmosphere.Pressure(h));
            Same(row["rho_kg_m3"], StandardAtmosphere.Density(h));
            Same(row["a_m_s"], StandardAtmosphere.SpeedOfSound(h));
            Same(row["theta"], StandardAtmosphere.Temperature(h) / 288.15);
            Same(row["delta"], StandardAtmosphere.Pressure(h) / 101325.0);
            Same(row["sigma"], StandardAtmosphere.Density(h) / 1.225);
            Same(row["mu_Pa_s"], StandardAtmosphere.ViscosityAtAltitude(h));
            // A pressure printed to 0.01 Pa fixes the altitude to 6 mm at 20 km, where it changes least.
            Assert.Equal(h, StandardAtmosphere.PressureAltitude(row.Number("p_Pa")), 0.006);
            rows++;
        }

        Assert.Equal(18, rows);
    }

    // ISO 2533 tabulates 868.02 Pa and 228.65 K at 32 km (from memory).
    [Fact]
    public void Reaches_the_top_of_the_third_layer()
    {
        Assert.Equal(868.02, StandardAtmosphere.Pressure(32000.0), 0.01);
        Assert.Equal(228.65, StandardAtmosphere.Temperature(32000.0), 1e-9);
    }

    // 2 km below sea level: 301.2 K, 1.278e5 Pa, 1.478 kg/m3, 347.9 m/s, 18.51e-6 Pa s (from memory, tables of the
    // U.S. Standard Atmosphere 1976, which is the same here).
    [Fact]
    public void Reaches_the_bottom_of_the_first_layer()
    {
        Assert.Equal(301.15, StandardAtmosphere.Temperature(-2000.0), 1e-9);
        Assert.Equal(1.278e5, StandardAtmosphere.Pressure(-2000.0), 50.0);
        Assert.Equal(1.478, StandardAtmosphere.Density(-2000.0), 0.0005);
        Assert.Equal(347.9, StandardAtmosphere.SpeedOfSound(-2000.0), 0.05);
        Assert.Equal(18.51e-6, StandardAtmosphere.ViscosityAtAltitude(-2000.0), 0.005e-6);
    }

    // 287.05287 J/(kg K), ISO 2533:1975 (from memory).
    [Fact]
    public void Gas_constant_is_that_of_the_standard() =>
        Assert.Equal(287.05287, StandardAtmosphere.GasConstant, 0.00001);

    [Fact]
    public void Pressure_altitude_undoes_pressure()
    {
        foreach (var edge in new[] { -2000.0, 0.0, 11000.0, 20000.0, 32000.0 })
            Assert.Equal(edge, BackFrom(edge), 1e-6);
        Gen.Double[-2000.0, 32000.0].Sample(altitude => Math.Abs(BackFrom(altitude) - altitude) < 1e-6, iter: 1000);
    }

    // Hydrostatic balance, dp/dh = -rho g: the equation the standard is built from.
    [Fact]
    public void The_air_is_in_hydrostatic_balance() =>
        Gen.Double[-1999.0, 31999.0]
            .Sample(
                altitude =>
                {
                    const double Step = 0.5;
                    var rise =
                        StandardAtmosphere.Pressure(altitude + Step) - StandardAtmosphere.Pressure(altitude - Step);
                    var weight = StandardAtmosphere.Density(altitude) * 9.80665 * 2.0 * Step;
                    return Math.Abs(rise / weight + 1.0) < 1e-6;
                },
                iter: 1000
            );

    [Theory]
    [InlineData(-2000.1)]
    [InlineData(32000.1)]
    [InlineData(double.NaN)]
    public void Refuses_altitudes_outside_the_range(double altitude)
    {
        Func<double, double>[] all =
        [
            StandardAtmosphere.Temperature,
            StandardAtmosphere.Pressure,
            StandardAtmosphere.Density,
            StandardAtmosphere.SpeedOfSound,
            StandardAtmosphere.ViscosityAtAltitude,
        ];
        foreach (var quantity in all)
        {
            var error = Assert.Throws<ArgumentOutOfRangeException>("pressureAltitude", () => quantity(altitude));
            Assert.Contains("-2000 to 32000 m", error.Message);
        }
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(860.0)]
    [InlineData(130000.0)]
    [InlineData(double.NaN)]
    public void Refuses_pressures_outside_the_range(double pressure)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() => StandardAtmosphere.PressureAltitude(pressure));
        Assert.Contains("868 to 127774 Pa", error.Message);
    }

    [Theory]
    [InlineData(15.0)]
    [InlineData(-5.0)]
    [InlineData(10668.0)]
    [InlineData(double.NaN)]
    public void Refuses_temperatures_without_a_viscosity(double temperature)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() => StandardAtmosphere.Viscosity(temperature));
        Assert.Contains("170 to 1900 K", error.Message);
    }

    private static double BackFrom(double altitude) =>
        StandardAtmosphere.PressureAltitude(StandardAtmosphere.Pressure(altitude));

    private static void Same(string printed, double value)
    {
        var mantissa = printed.Split('e')[0];
        var digits = mantissa.Contains('.') ? mantissa.Length - mantissa.IndexOf('.') - 1 : 0;
        var exponent = printed.Contains('e') ? int.Parse(printed.Split('e')[1], CultureInfo.InvariantCulture) : 0;
        var half = 0.5000001 * Math.Pow(10.0, exponent - digits);
        Assert.Equal(double.Parse(printed, CultureInfo.InvariantCulture), value, half);
    }
}
