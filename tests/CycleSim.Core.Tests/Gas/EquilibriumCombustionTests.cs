using CycleSim.Gas;

namespace CycleSim.Tests.Gas;

public class EquilibriumCombustionTests
{
    // Data/combustion-reference.csv: source in the file. Temperature to 0.2 %, molar mass to 0.02 %, every row.
    [Fact]
    public void Temperatures_and_molar_masses_are_those_of_the_equilibrium_code()
    {
        var rows = 0;
        foreach (var row in TestData.Rows("combustion-reference.csv"))
        {
            var fuel = row["fuel"] == "jet-a" ? Fuel.JetA1 : Fuel.Dihydrogen;
            var state = EquilibriumCombustion.Adiabatic(
                fuel,
                row.Number("fuel_air_ratio"),
                0.0,
                row.Number("T3_K"),
                row.Number("pressure_Pa")
            );
            Assert.Equal(1.0, state.Temperature / row.Number("T4_K"), 0.002);
            Assert.Equal(1.0, state.MolarMass * 1000.0 / row.Number("molar_mass_g_per_mol"), 0.0002);
            rows++;
        }

        Assert.Equal(195, rows);
    }

    [Fact]
    public void Mole_fractions_add_up_and_hold_the_products_of_lean_burning()
    {
        var state = EquilibriumCombustion.Adiabatic(Fuel.JetA1, 0.02, 0.01, 800.0, 3e6);
        Assert.Equal(1.0, state.MoleFractions.Sum(), 1e-12);
        var carbon = Share(state, "CO2") + Share(state, "CO");
        // 0.02/0.16731 x 12 carbon atoms plus 0.000319/0.028966 in the air a kilogram of dry air, by hand.
        var moles = (1.0 + 0.02 + 0.01) / state.MolarMass;
        Assert.Equal(0.02 / 0.16731 * 12.0 + 0.000319 / 0.028966, carbon * moles, 2e-4);
    }

    [Theory]
    [InlineData(0.0, 2e6, "must lie above 0")]
    [InlineData(0.08, 2e6, "uses up the oxygen")]
    [InlineData(0.02, 1.0, "1 kPa and 10 MPa")]
    public void Refuses_what_it_does_not_cover(double far, double pressure, string message) =>
        Assert.Contains(
            message,
            Assert
                .Throws<ArgumentOutOfRangeException>(() =>
                    EquilibriumCombustion.Adiabatic(Fuel.JetA1, far, 0.0, 800.0, pressure)
                )
                .Message
        );

    private static double Share(EquilibriumState state, string species) =>
        state.MoleFractions[EquilibriumCombustion.Species.ToList().IndexOf(species)];
}
