namespace CycleSim.Gas;

/// <summary>Dry air as a mixture of four species.</summary>
public static class DryAir
{
    /// <summary>Mole fractions: the composition of the standard atmosphere rounded to N2, O2, Ar and CO2.</summary>
    public static readonly IReadOnlyList<(string Species, double Fraction)> MoleFractions =
    [
        ("N2", 0.78084),
        ("O2", Oxygen),
        ("Ar", 0.009365),
        ("CO2", 0.000319),
    ];

    /// <summary>kg/mol.</summary>
    public static readonly double MolarMass = MoleFractions.Sum(part =>
        part.Fraction * NasaGlennData.Species(part.Species).MolarMass
    );

    /// <summary>Mole fraction of oxygen.</summary>
    public const double Oxygen = 0.209476;
}
