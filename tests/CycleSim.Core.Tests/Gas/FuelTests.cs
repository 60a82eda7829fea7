using CycleSim.Gas;

namespace CycleSim.Tests.Gas;

public class FuelTests
{
    // Stoichiometry by hand with C 12.011, H 1.008, O 15.999 g/mol, four decimals.
    [Fact]
    public void Carbon_dioxide_and_water_follow_from_the_formula()
    {
        Assert.Equal(3.1564, Fuel.JetA1.CarbonDioxideIndex, 0.0002);
        Assert.Equal(1.2382, Fuel.JetA1.WaterIndex, 0.0002);
        Assert.Equal(3.1003, Fuel.Hefa.CarbonDioxideIndex, 0.0002);
        Assert.Equal(1.3749, Fuel.Hefa.WaterIndex, 0.0002);
        Assert.Equal(0.0, Fuel.Dihydrogen.CarbonDioxideIndex);
        Assert.Equal(8.936, Fuel.Dihydrogen.WaterIndex, 0.001);
    }

    // Neat HEFA has 43.9 to 44.3 MJ/kg (from memory).
    [Fact]
    public void Heating_value_and_enthalpy_of_formation_go_together()
    {
        Assert.InRange(Fuel.Hefa.LowerHeatingValue, 43.9e6, 44.3e6);
        var again = Fuel.FromFormation("again", 12.0, 26.0, Fuel.Hefa.FormationEnthalpy);
        Assert.Equal(Fuel.Hefa.LowerHeatingValue, again.LowerHeatingValue, 0.1);
        // Liquid dodecane, C12H26: enthalpy of formation -352 kJ/mol, heating value 44.1 MJ/kg (from memory, handbooks).
        var dodecane = Fuel.FromFormation("dodecane", 12.0, 26.0, -352e3);
        Assert.Equal(44.1e6, dodecane.LowerHeatingValue, 0.1e6);
    }
}
