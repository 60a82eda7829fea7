namespace CycleSim.Gas;
public sealed record Fuel(string Name, double Carbon, double Hydrogen, double LowerHeatingValue)
{
    public double MolarMass => Carbon * 12.0107e-3 + Hydrogen * 1.00794e-3;
    public double StoichiometricFuelAirRatio => MolarMass / ((Carbon + Hydrogen / 4) / 0.209476 * DryAir.MolarMass);
    public static readonly Fuel JetA1 = new("Jet A-1", 12, 23, 43.1e6);
}
public static class DryAir
{
    public static readonly (string, double)[] MoleFractions = [("N2", .78084), ("O2", .209476), ("Ar", .009365), ("CO2", .000319)];
    public static readonly double MolarMass = MoleFractions.Sum(m => m.Item2 * NasaGlennData.Species(m.Item1).MolarMass);
}
public sealed record NasaSpecies(double MolarMass, double[][] A) { public double[] Coefficients(int r) => A[r]; }
public static class NasaGlennData
{
    public const double GasConstant = 8.314510;
    static readonly Dictionary<string, NasaSpecies> D = Load();
    static Dictionary<string, NasaSpecies> Load()
    {
        var d = new Dictionary<string, NasaSpecies>();
        using var s = typeof(NasaGlennData).Assembly.GetManifestResourceStream("CycleSim.Core.Gas.Data.nasa-glenn-coefficients.csv")!;
        using var r = new StreamReader(s);
        r.ReadLine();
        while (r.ReadLine() is { } l)
        {
            var p = l.Split(',');
            var a = p[5..14].Select(double.Parse).ToArray();
            if (d.TryGetValue(p[0], out var old)) d[p[0]] = old with { A = [old.A[0], a] };
            else d[p[0]] = new(double.Parse(p[1]) * 1e-3, [a]);
        }
        return d;
    }
    public static NasaSpecies Species(string n) => D[n];
}
