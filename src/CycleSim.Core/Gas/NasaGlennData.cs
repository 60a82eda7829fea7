using System.Globalization;

namespace CycleSim.Gas;

/// <summary>
/// The nine-coefficient data of one species: cp/R = a1/T2 + a2/T + a3 + a4 T + a5 T2 + a6 T3 + a7 T4, with integration
/// constants b1 (enthalpy) and b2 (entropy), in two ranges that meet at 1000 K or in one. Immutable.
/// </summary>
/// <remarks>Temperatures outside the ranges of the species are refused.</remarks>
public sealed class NasaSpecies
{
    private readonly double[][] _ranges;

    // Where the ranges begin and, last, end.
    private readonly double[] _limits;

    internal NasaSpecies(string name, double molarMass, double formationEnthalpy, double[] limits, double[][] ranges) =>
        (Name, MolarMass, FormationEnthalpy, _limits, _ranges) = (name, molarMass, formationEnthalpy, limits, ranges);

    public string Name { get; }

    /// <summary>kg/mol.</summary>
    public double MolarMass { get; }

    /// <summary>Enthalpy of formation at 298.15 K, J/mol.</summary>
    public double FormationEnthalpy { get; }

    /// <summary>Lowest temperature of the data, K.</summary>
    public double LowestTemperature => _limits[0];

    /// <summary>Highest temperature of the data, K.</summary>
    public double HighestTemperature => _limits[^1];

    /// <summary>a1 to a7, b1, b2 below (0) or above (1) 1000 K.</summary>
    public ReadOnlySpan<double> Coefficients(int range) => _ranges[range];

    /// <summary>h/(R T), dimensionless, at a temperature in K, enthalpy of formation included.</summary>
    public double EnthalpyOverRT(double t)
    {
        var a = At(t);
        return -a[0] / (t * t)
            + a[1] * Math.Log(t) / t
            + a[2]
            + t * (a[3] / 2.0 + t * (a[4] / 3.0 + t * (a[5] / 4.0 + t * a[6] / 5.0)))
            + a[7] / t;
    }

    /// <summary>s/R at one bar.</summary>
    public double EntropyOverR(double t)
    {
        var a = At(t);
        return -a[0] / (2.0 * t * t)
            - a[1] / t
            + a[2] * Math.Log(t)
            + t * (a[3] + t * (a[4] / 2.0 + t * (a[5] / 3.0 + t * a[6] / 4.0)))
            + a[8];
    }

    /// <summary>cp/R.</summary>
    public double HeatCapacityOverR(double t)
    {
        var a = At(t);
        return a[0] / (t * t) + a[1] / t + a[2] + t * (a[3] + t * (a[4] + t * (a[5] + t * a[6])));
    }

    private double[] At(double t)
    {
        if (!(t >= LowestTemperature && t <= HighestTemperature))
            throw new ArgumentOutOfRangeException(
                nameof(t),
                $"The data of {Name} reach from {LowestTemperature} to {HighestTemperature} K; {t:G6} K was asked for."
            );
        return _ranges[_ranges.Length == 1 || t < _limits[1] ? 0 : 1];
    }
}

/// <summary>The species data shipped with the library.</summary>
public static class NasaGlennData
{
    /// <summary>J/(mol K), the value that the data were fitted with.</summary>
    public const double GasConstant = 8.314510;

    private static readonly Dictionary<string, NasaSpecies> All = Load();

    /// <exception cref="KeyNotFoundException">No such species in the data.</exception>
    public static NasaSpecies Species(string name) =>
        All.TryGetValue(name, out var species)
            ? species
            : throw new KeyNotFoundException(
                $"No species '{name}' in the data; there are {string.Join(", ", All.Keys)}."
            );

    private static Dictionary<string, NasaSpecies> Load()
    {
        using var stream =
            typeof(NasaGlennData).Assembly.GetManifestResourceStream(
                "CycleSim.Core.Gas.Data.nasa-glenn-coefficients.csv"
            ) ?? throw new InvalidOperationException("the species data are missing from the assembly");
        using var reader = new StreamReader(stream);
        reader.ReadLine();
        var rows = new List<string[]>();
        while (reader.ReadLine() is { } line)
            rows.Add(line.Split(','));
        double Number(string text) => double.Parse(text, CultureInfo.InvariantCulture);
        return rows.GroupBy(row => row[0])
            .ToDictionary(
                group => group.Key,
                group => new NasaSpecies(
                    group.Key,
                    Number(group.First()[1]) * 1e-3,
                    Number(group.First()[2]),
                    [Number(group.First()[3]), .. group.Select(row => Number(row[4]))],
                    [.. group.Select(row => row[5..14].Select(Number).ToArray())]
                )
            );
    }
}
