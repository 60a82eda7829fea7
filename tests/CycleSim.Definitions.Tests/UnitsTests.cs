namespace CycleSim.Definitions.Tests;

/// <summary>Every spelling that is accepted, against the definitions of the units.</summary>
public class UnitsTests
{
    // Exact by definition: foot 0.3048 m, pound 0.45359237 kg, standard gravity 9.80665 m/s2, knot 1852/3600 m/s,
    // inch 0.0254 m, Btu (international table) per pound 2326 J/kg, mechanical horsepower 550 ft lbf/s. Mercury
    // 13595.1 kg/m3 (conventional).
    private const double Pound = 0.45359237,
        PoundForce = Pound * 9.80665;

    public static TheoryData<string, Dimension, double> Written =>
        new()
        {
            { "35000 ft", Dimension.Length, 35000.0 * 0.3048 },
            { "10.668km", Dimension.Length, 10668.0 },
            { " 1e3 m ", Dimension.Length, 1000.0 },
            { "14.7 psi", Dimension.Pressure, 14.7 * PoundForce / (0.0254 * 0.0254) },
            { "29.92 inHg", Dimension.Pressure, 29.92 * 0.0254 * 13595.1 * 9.80665 },
            { "1013.25 mbar", Dimension.Pressure, 101325.0 },
            { "0.1 MPa", Dimension.Pressure, 1e5 },
            { "1376 degC", Dimension.Temperature, 1649.15 },
            { "1376 ºC", Dimension.Temperature, 1649.15 },
            { "1376 ℃", Dimension.Temperature, 1649.15 },
            { "2000 °F", Dimension.Temperature, (2000.0 + 459.67) / 1.8 },
            { "2000 °R", Dimension.Temperature, 2000.0 / 1.8 },
            { "27 °F", Dimension.TemperatureDifference, 15.0 },
            { "-15 °C", Dimension.TemperatureDifference, -15.0 },
            { "900 lb/s", Dimension.MassFlow, 900.0 * Pound },
            { "3600 lbm/h", Dimension.MassFlow, Pound },
            { "3600 kg/h", Dimension.MassFlow, 1.0 },
            { "27000 lbf", Dimension.Force, 27000.0 * PoundForce },
            { "100 hp", Dimension.Power, 100.0 * 550.0 * 0.3048 * PoundForce },
            { "0.08 MW", Dimension.Power, 80e3 },
            { "60 1/s", Dimension.RotationalSpeed, 3600.0 },
            { "400 rad/s", Dimension.RotationalSpeed, 400.0 * 30.0 / Math.PI },
            { "18500 Btu/lb", Dimension.SpecificEnergy, 18500.0 * 2326.0 },
            { "1.005 kJ/(kg·K)", Dimension.SpecificHeat, 1005.0 },
            { "250 kt", Dimension.Speed, 250.0 * 1852.0 / 3600.0 },
            { "900 km/h", Dimension.Speed, 250.0 },
            { "7%", Dimension.Share, 0.07 },
        };

    [Theory]
    [MemberData(nameof(Written))]
    public void Units_are_converted(string text, Dimension dimension, double inside)
    {
        Assert.True(Units.TryRead(text, dimension, out var value, out var problem), problem);
        // The library rounds pound-force and Btu per pound to eight digits.
        Assert.Equal(1.0, value / inside, 1e-7);
    }

    [Theory]
    [InlineData("2,4 bar", Dimension.Pressure)]
    [InlineData("35,000 ft", Dimension.Length)]
    [InlineData("2.4.1 bar", Dimension.Pressure)]
    [InlineData("1_000 m", Dimension.Length)]
    [InlineData("∞ m", Dimension.Length)]
    [InlineData("NaN K", Dimension.Temperature)]
    [InlineData("1e30 MW", Dimension.Power)]
    [InlineData("bar", Dimension.Pressure)]
    [InlineData("", Dimension.Length)]
    [InlineData("1 2 m", Dimension.Length)]
    [InlineData("5 mW", Dimension.Power)]
    public void What_is_not_plainly_a_quantity_never_gives_a_number(string text, Dimension dimension)
    {
        Assert.False(Units.TryRead(text, dimension, out var value, out var problem));
        Assert.True(double.IsNaN(value));
        Assert.Contains("Expected", problem);
    }
}
