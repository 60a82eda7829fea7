using CycleSim.Gas;

namespace CycleSim.Tests.Gas;

public class NasaGlennDataTests
{
    // JANAF tables: cp in J/(mol K) (from memory). To 0.2 %: the editions differ. Not steam above 1000 K: there the data
    // follow Woolley (1987), at 2000 K 1.1 % above JANAF's 51.180.
    [Theory]
    [InlineData("N2", 298.15, 29.124)]
    [InlineData("N2", 1000.0, 32.697)]
    [InlineData("N2", 2000.0, 35.971)]
    [InlineData("O2", 298.15, 29.376)]
    [InlineData("O2", 1000.0, 34.870)]
    [InlineData("O2", 2000.0, 37.741)]
    [InlineData("CO2", 298.15, 37.129)]
    [InlineData("CO2", 1000.0, 54.308)]
    [InlineData("CO2", 2000.0, 60.350)]
    [InlineData("H2O", 298.15, 33.590)]
    [InlineData("H2O", 1000.0, 41.268)]
    public void Heat_capacities_are_those_of_the_handbook(string name, double t, double cp) =>
        Assert.Equal(1.0, Species(name).HeatCapacityOverR(t) * NasaGlennData.GasConstant / cp, 0.002);

    // JANAF tables: entropy at 298.15 K and one bar, J/(mol K); enthalpy from 298.15 to 1000 K, J/mol (from memory).
    [Theory]
    [InlineData("N2", 191.609, 21463.0)]
    [InlineData("O2", 205.147, 22703.0)]
    [InlineData("CO2", 213.795, 33397.0)]
    [InlineData("H2O", 188.834, 26000.0)]
    public void Entropies_and_enthalpies_are_those_of_the_handbook(string name, double entropy, double enthalpy)
    {
        double H(double t) => Species(name).EnthalpyOverRT(t) * NasaGlennData.GasConstant * t;
        Assert.Equal(1.0, Species(name).EntropyOverR(298.15) * NasaGlennData.GasConstant / entropy, 0.0005);
        Assert.Equal(1.0, (H(1000.0) - H(298.15)) / enthalpy, 0.001);
    }

    // The column of enthalpies of formation stands in the data beside the polynomials that must give it.
    [Theory]
    [InlineData("N2")]
    [InlineData("CO2")]
    [InlineData("H2O")]
    [InlineData("CO")]
    [InlineData("NO")]
    [InlineData("OH")]
    [InlineData("Jet-A(L)")]
    public void Enthalpies_at_the_reference_temperature_are_those_of_formation(string name) =>
        Assert.Equal(
            Species(name).FormationEnthalpy,
            Species(name).EnthalpyOverRT(298.15) * NasaGlennData.GasConstant * 298.15,
            2.0
        );

    [Theory]
    [InlineData("N2", 199.0)]
    [InlineData("N2", 6001.0)]
    [InlineData("N2", double.NaN)]
    [InlineData("Jet-A(L)", 551.0)]
    public void Refuses_temperatures_outside_the_data(string name, double t)
    {
        var species = Species(name);
        var reach = $"reach from {species.LowestTemperature} to {species.HighestTemperature} K";
        foreach (
            var function in new Func<double, double>[]
            {
                species.HeatCapacityOverR,
                species.EnthalpyOverRT,
                species.EntropyOverR,
            }
        )
            Assert.Contains(reach, Assert.Throws<ArgumentOutOfRangeException>(() => function(t)).Message);
    }

    private static NasaSpecies Species(string name) => NasaGlennData.Species(name);
}
