using CsCheck;
using CycleSim.Air;

namespace CycleSim.Tests.Air;

public class HumidityTests
{
    // Buck 1981 column of Data/vapour_pressure_check.csv (source in the file), printed to 0.0001 hPa.
    [Fact]
    public void Saturation_follows_Buck()
    {
        foreach (var row in TestData.Rows("vapour_pressure_check.csv"))
            Assert.Equal(
                row.Number("Buck1981_hPa"),
                Humidity.SaturationPressure(row.Number("t_C") + 273.15) / 100.0,
                0.00006
            );
    }

    // Steam tables (from memory): 23.39 hPa at 20 C, 42.47 at 30 C, 73.85 at 40 C; Buck agrees within 0.1 %.
    [Theory]
    [InlineData(20.0, 2339.0)]
    [InlineData(30.0, 4247.0)]
    [InlineData(40.0, 7385.0)]
    public void Saturation_agrees_with_steam_tables(double celsius, double pascal) =>
        Assert.Equal(1.0, Humidity.SaturationPressure(celsius + 273.15) / pascal, 0.001);

    // The ICAO reference humidity of 0.00634 kg/kg is 60 % relative humidity at 15 C, sea level (Annex 16 vol. II).
    [Fact]
    public void Sixty_per_cent_at_sea_level_is_the_reference_humidity() =>
        Assert.Equal(0.00634, Humidity.WaterAirRatio(0.6, 101325.0, 288.15), 0.00002);

    // Humidity ratios at 60 and 100 % of Data/vapour_pressure_check.csv come from the WMO formula (source in the file),
    // which from 0 C up lies within 0.35 % of Buck's.
    [Fact]
    public void Water_air_ratio_agrees_with_the_formula_of_the_WMO()
    {
        var rows = 0;
        foreach (var row in TestData.Rows("vapour_pressure_check.csv").Where(r => r.Number("t_C") >= 0.0))
        {
            var t = row.Number("t_C") + 273.15;
            var at60 = row.Number("humidity_ratio_60pct_g_per_kg_at_1013.25hPa") / 1000.0;
            var at100 = row.Number("humidity_ratio_100pct_g_per_kg_at_1013.25hPa") / 1000.0;
            Assert.Equal(1.0, Humidity.WaterAirRatio(0.6, 101325.0, t) / at60, 0.0035);
            Assert.Equal(1.0, Humidity.WaterAirRatio(1.0, 101325.0, t) / at100, 0.0035);
            rows++;
        }

        Assert.Equal(9, rows);
    }

    // Buck 1981 gives about 1.004 for pressures above 800 hPa.
    [Theory]
    [InlineData(80000.0)]
    [InlineData(101325.0)]
    public void Enhancement_near_the_ground_is_four_per_mille(double pressure) =>
        Assert.Equal(1.004, Humidity.EnhancementFactor(pressure), 0.0006);

    // In thin vapour the water-air ratio goes with vapour pressure, so four per mille more of one is four of the other.
    [Fact]
    public void Enhancement_raises_the_water_air_ratio()
    {
        var plain = Humidity.WaterAirRatio(0.6, 101325.0, 263.15);
        Assert.Equal(1.004, Humidity.WaterAirRatio(0.6, 101325.0, 263.15, enhanced: true) / plain, 0.0006);
    }

    [Fact]
    public void Relative_humidity_undoes_water_air_ratio() =>
        Gen.Select(Gen.Double[0.0, 1.0], Gen.Double[30000.0, 110000.0], Gen.Double[193.2, 333.1], Gen.Bool)
            .Sample(
                (humidity, pressure, temperature, enhanced) =>
                {
                    var ratio = Humidity.WaterAirRatio(humidity, pressure, temperature, enhanced);
                    var back = Humidity.RelativeHumidity(ratio, pressure, temperature, enhanced);
                    return Math.Abs(back - humidity) < 1e-12;
                },
                iter: 1000
            );

    [Theory]
    [InlineData(-0.01, 101325.0, 288.15, "between 0 and 1")]
    [InlineData(1.01, 101325.0, 288.15, "between 0 and 1")]
    [InlineData(double.NaN, 101325.0, 288.15, "between 0 and 1")]
    [InlineData(0.5, 101325.0, 350.0, "-80 to 60 °C")]
    [InlineData(0.5, 101325.0, 193.1, "-80 to 60 °C")]
    [InlineData(1.0, 5000.0, 320.0, "not less than the static pressure")]
    [InlineData(0.5, -1.0, 288.15, "above 0 Pa")]
    [InlineData(0.0, double.NaN, 288.15, "above 0 Pa")]
    [InlineData(0.0, 101325.0, double.NaN, "above 0 K")]
    public void Refuses_what_cannot_be(double humidity, double pressure, double temperature, string message)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() =>
            Humidity.WaterAirRatio(humidity, pressure, temperature)
        );
        Assert.Contains(message, error.Message);
    }

    [Theory]
    [InlineData(-0.001, 101325.0, 288.15, "0 or more")]
    [InlineData(double.NaN, 101325.0, 288.15, "0 or more")]
    [InlineData(double.PositiveInfinity, 101325.0, 288.15, "0 or more")]
    [InlineData(0.001, 0.0, 288.15, "above 0 Pa")]
    [InlineData(0.001, 101325.0, 350.0, "-80 to 60 °C")]
    public void Refuses_ratios_that_have_no_humidity(double ratio, double pressure, double temperature, string message)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() =>
            Humidity.RelativeHumidity(ratio, pressure, temperature)
        );
        Assert.Contains(message, error.Message);
    }
}
