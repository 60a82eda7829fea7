namespace CycleSim.Gas;

/// <summary>A fuel of carbon and hydrogen.</summary>
/// <param name="Name">as shown</param>
/// <param name="Carbon">carbon atoms a molecule</param>
/// <param name="Hydrogen">hydrogen atoms a molecule</param>
/// <param name="LowerHeatingValue">J/kg at 298.15 K, products gaseous</param>
public sealed record Fuel(string Name, double Carbon, double Hydrogen, double LowerHeatingValue)
{
    private const double CarbonMass = 12.0107e-3,
        HydrogenMass = 1.00794e-3;

    /// <summary>
    /// Jet A-1 as C12H23. The heating value is the one that the enthalpy of formation of the liquid in the NASA Glenn data
    /// (-303 403 J/mol) amounts to, 43.03 MJ/kg; specifications ask for at least 42.8, deliveries give 43.0 to 43.2.
    /// </summary>
    public static Fuel JetA1 { get; } =
        FromFormation("Jet A-1", 12.0, 23.0, NasaGlennData.Species("Jet-A(L)").FormationEnthalpy);

    /// <summary>Hydroprocessed esters and fatty acids, neat, as C12H26; 44.1 MJ/kg.</summary>
    public static Fuel Hefa { get; } = new("HEFA", 12.0, 26.0, 44.1e6);

    /// <summary>Gaseous hydrogen; 119.96 MJ/kg.</summary>
    public static Fuel Dihydrogen { get; } = FromFormation("hydrogen", 0.0, 2.0, 0.0);

    /// <summary>kg/mol.</summary>
    public double MolarMass => Carbon * CarbonMass + Hydrogen * HydrogenMass;

    /// <summary>Fuel-air ratio at which all the oxygen of dry air is used, kg/kg.</summary>
    public double StoichiometricFuelAirRatio =>
        MolarMass * DryAir.Oxygen / ((Carbon + Hydrogen / 4.0) * DryAir.MolarMass);

    /// <summary>kg CO2 formed by a kilogram of fuel.</summary>
    public double CarbonDioxideIndex => Carbon * NasaGlennData.Species("CO2").MolarMass / MolarMass;

    /// <summary>kg water formed by a kilogram of fuel.</summary>
    public double WaterIndex => Hydrogen / 2.0 * NasaGlennData.Species("H2O").MolarMass / MolarMass;

    /// <summary>Enthalpy of formation of the fuel as burnt, J/mol, that goes with the heating value.</summary>
    public double FormationEnthalpy => ProductsFormation(Carbon, Hydrogen) + LowerHeatingValue * MolarMass;

    /// <summary>A fuel whose heating value follows from its enthalpy of formation, J/mol.</summary>
    public static Fuel FromFormation(string name, double carbon, double hydrogen, double formationEnthalpy)
    {
        var mass = carbon * CarbonMass + hydrogen * HydrogenMass;
        return new Fuel(name, carbon, hydrogen, (formationEnthalpy - ProductsFormation(carbon, hydrogen)) / mass);
    }

    /// <exception cref="ArgumentException">No fuel can have these values; the message says which.</exception>
    internal void ThrowIfUnusable()
    {
        if (!(Carbon >= 0.0 && Hydrogen >= 0.0 && Carbon + Hydrogen > 0.0 && double.IsFinite(Carbon + Hydrogen)))
            throw new ArgumentException(
                $"A molecule of {Name} must hold carbon or hydrogen, neither below 0 and both finite; {Carbon:G5} carbon "
                    + $"and {Hydrogen:G5} hydrogen atoms were given."
            );
        if (LowerHeatingValue is not (>= 1e6 and <= 2e8))
            throw new ArgumentException(
                $"The lower heating value of {Name} must lie between 1e6 and 2e8 J/kg; {LowerHeatingValue:G5} was given. "
                    + "43 MJ/kg is 43e6 J/kg."
            );
    }

    private static double ProductsFormation(double carbon, double hydrogen) =>
        carbon * NasaGlennData.Species("CO2").FormationEnthalpy
        + hydrogen / 2.0 * NasaGlennData.Species("H2O").FormationEnthalpy;
}
