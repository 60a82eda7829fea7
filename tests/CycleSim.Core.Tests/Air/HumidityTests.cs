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

    [Fact]
    public void Relative_humidity_undoes_water_air_ratio() =>
        Assert.Equal(0.37, Humidity.RelativeHumidity(Humidity.WaterAirRatio(0.37, 90000, 300), 90000, 300), 1e-12);

    [Theory]
    [InlineData(-0.01, 101325.0, 288.15, "between 0 and 1")]
    [InlineData(1.01, 101325.0, 288.15, "between 0 and 1")]
    [InlineData(0.5, 101325.0, 350.0, "-80 to 60 °C")]
    [InlineData(1.0, 5000.0, 320.0, "more than the static pressure")]
    public void Refuses_what_cannot_be(double humidity, double pressure, double temperature, string message)
    {
        var error = Assert.Throws<ArgumentOutOfRangeException>(() =>
            Humidity.WaterAirRatio(humidity, pressure, temperature)
        );
        Assert.Contains(message, error.Message);
    }
}
