namespace CycleSim.Gas;

/// <summary>State of burnt gas in full chemical equilibrium.</summary>
/// <param name="Temperature">K</param>
/// <param name="MolarMass">kg/mol</param>
/// <param name="MoleFractions">of the species of <see cref="EquilibriumCombustion.Species"/></param>
public sealed record EquilibriumState(double Temperature, double MolarMass, IReadOnlyList<double> MoleFractions);

/// <summary>
/// Lean combustion in full chemical equilibrium, to tell what dissociation changes: the flow path itself burns completely.
/// Minimum of the Gibbs energy by element potentials, the method of NASA RP-1311 (Gordon and McBride, 1994).
/// </summary>
/// <remarks>Valid for 300 to 3000 K, 1 kPa to 10 MPa and fuel-air ratios up to stoichiometric.</remarks>
public static class EquilibriumCombustion
{
    private const double ReferencePressure = 1e5;
    private const int Elements = 5;

    // Atoms of C, H, O, N, Ar in a molecule.
    private static readonly (string Name, double[] Atoms)[] Formulas =
    [
        ("N2", [0, 0, 0, 2, 0]),
        ("O2", [0, 0, 2, 0, 0]),
        ("Ar", [0, 0, 0, 0, 1]),
        ("CO2", [1, 0, 2, 0, 0]),
        ("H2O", [0, 2, 1, 0, 0]),
        ("CO", [1, 0, 1, 0, 0]),
        ("NO", [0, 0, 1, 1, 0]),
        ("NO2", [0, 0, 2, 1, 0]),
        ("N2O", [0, 0, 1, 2, 0]),
        ("OH", [0, 1, 1, 0, 0]),
        ("O", [0, 0, 1, 0, 0]),
        ("H", [0, 1, 0, 0, 0]),
        ("H2", [0, 2, 0, 0, 0]),
    ];

    private static readonly NasaSpecies[] Data = [.. Formulas.Select(f => NasaGlennData.Species(f.Name))];

    /// <summary>Species considered, in the order of the mole fractions.</summary>
    public static IReadOnlyList<string> Species { get; } = [.. Formulas.Select(f => f.Name)];

    /// <summary>
    /// The state in which fuel at 298.15 K and humid air at a temperature come to rest adiabatically at a pressure.
    /// </summary>
    /// <param name="fuelAirRatio">kg fuel per kg dry air, above 0, at most stoichiometric</param>
    /// <param name="waterAirRatio">kg vapour per kg dry air</param>
    /// <param name="airTemperature">K</param>
    /// <param name="pressure">Pa</param>
    /// <exception cref="ArgumentOutOfRangeException">Outside the valid range.</exception>
    /// <exception cref="InvalidOperationException">The iteration did not settle.</exception>
    public static EquilibriumState Adiabatic(
        Fuel fuel,
        double fuelAirRatio,
        double waterAirRatio,
        double airTemperature,
        double pressure
    )
    {
        if (!(fuelAirRatio > 0.0) || fuelAirRatio > fuel.StoichiometricFuelAirRatio)
            throw new ArgumentOutOfRangeException(
                nameof(fuelAirRatio),
                $"The fuel-air ratio must lie above 0 and at most at {fuel.StoichiometricFuelAirRatio:F4}, where {fuel.Name} "
                    + $"uses up the oxygen; {fuelAirRatio:G5} was given."
            );
        if (pressure is not (>= 1e3 and <= 1e7))
            throw new ArgumentOutOfRangeException(
                nameof(pressure),
                $"Pressure must lie between 1 kPa and 10 MPa; {pressure:G5} Pa was given."
            );

        // Everything per kilogram of dry air.
        var atoms = new double[Elements];
        var enthalpy = 0.0;
        void AddGas(string name, double moles)
        {
            var k = Array.FindIndex(Formulas, f => f.Name == name);
            for (var e = 0; e < Elements; e++)
                atoms[e] += moles * Formulas[k].Atoms[e];
            enthalpy += moles * Data[k].EnthalpyOverRT(airTemperature) * NasaGlennData.GasConstant * airTemperature;
        }

        foreach (var (species, fraction) in DryAir.MoleFractions)
            AddGas(species, fraction / DryAir.MolarMass);
        AddGas("H2O", waterAirRatio / NasaGlennData.Species("H2O").MolarMass);
        var fuelMoles = fuelAirRatio / fuel.MolarMass;
        atoms[0] += fuelMoles * fuel.Carbon;
        atoms[1] += fuelMoles * fuel.Hydrogen;
        enthalpy += fuelMoles * fuel.FormationEnthalpy;

        double low = 300.0,
            high = 3000.0;
        var n = Start(atoms);
        while (high - low > 1e-7)
        {
            // Enthalpy rises with temperature at equilibrium; halving needs no derivative of the composition.
            var t = 0.5 * (low + high);
            Settle(n, atoms, t, pressure);
            var h = 0.0;
            for (var j = 0; j < n.Length; j++)
                h += n[j] * Data[j].EnthalpyOverRT(t) * NasaGlennData.GasConstant * t;
            if (h < enthalpy)
                low = t;
            else
                high = t;
        }

        var moles = n.Sum();
        return new EquilibriumState(
            0.5 * (low + high),
            (1.0 + fuelAirRatio + waterAirRatio) / moles,
            [.. n.Select(x => x / moles)]
        );
    }

    // Any positive composition will do; an even one is far enough from zero everywhere.
    private static double[] Start(double[] atoms)
    {
        var n = new double[Formulas.Length];
        Array.Fill(n, 0.1 * atoms.Sum() / Formulas.Length);
        return n;
    }

    /// <summary>Moles at equilibrium for a temperature and pressure; starts from, and returns in, <paramref name="n"/>.</summary>
    private static void Settle(double[] n, double[] atoms, double t, double pressure)
    {
        var gibbs = new double[n.Length];
        for (var j = 0; j < n.Length; j++)
            gibbs[j] = Data[j].EnthalpyOverRT(t) - Data[j].EntropyOverR(t) + Math.Log(pressure / ReferencePressure);

        const int Size = Elements + 1;
        var a = new double[Size, Size];
        var b = new double[Size];
        var step = new double[n.Length];
        for (var iteration = 0; iteration < 300; iteration++)
        {
            Array.Clear(a);
            Array.Clear(b);
            var total = n.Sum();
            for (var j = 0; j < n.Length; j++)
            {
                var mu = gibbs[j] + Math.Log(n[j] / total);
                var f = Formulas[j].Atoms;
                for (var e = 0; e < Elements; e++)
                {
                    for (var i = 0; i < Elements; i++)
                        a[e, i] += f[e] * f[i] * n[j];
                    a[e, Elements] += f[e] * n[j];
                    a[Elements, e] += f[e] * n[j];
                    b[e] += f[e] * n[j] * (mu - 1.0);
                }

                b[Elements] += n[j] * mu;
            }

            // With the total taken as the sum of the moles its own correction drops out of the last diagonal.
            for (var e = 0; e < Elements; e++)
                b[e] += atoms[e];
            Eliminate(a, b);
            var largest = 0.0;
            for (var j = 0; j < n.Length; j++)
            {
                var mu = gibbs[j] + Math.Log(n[j] / total);
                step[j] = b[Elements] - mu;
                for (var e = 0; e < Elements; e++)
                    step[j] += Formulas[j].Atoms[e] * b[e];
                largest = Math.Max(largest, Math.Abs(step[j]));
            }

            var share = Math.Min(1.0, 2.0 / largest);
            var change = 0.0;
            for (var j = 0; j < n.Length; j++)
            {
                change = Math.Max(change, n[j] / total * Math.Abs(step[j]));
                n[j] = Math.Max(n[j] * Math.Exp(share * step[j]), 1e-30);
            }

            if (change < 1e-12)
                return;
        }

        throw new InvalidOperationException($"no chemical equilibrium found at {t:F1} K and {pressure:F0} Pa");
    }

    private static void Eliminate(double[,] a, double[] b)
    {
        var size = b.Length;
        for (var k = 0; k < size; k++)
        {
            var pivot = k;
            for (var i = k + 1; i < size; i++)
                if (Math.Abs(a[i, k]) > Math.Abs(a[pivot, k]))
                    pivot = i;
            for (var j = 0; j < size; j++)
                (a[pivot, j], a[k, j]) = (a[k, j], a[pivot, j]);
            (b[pivot], b[k]) = (b[k], b[pivot]);
            for (var i = k + 1; i < size; i++)
            {
                var factor = a[i, k] / a[k, k];
                for (var j = k; j < size; j++)
                    a[i, j] -= factor * a[k, j];
                b[i] -= factor * b[k];
            }
        }

        for (var k = size - 1; k >= 0; k--)
        {
            for (var j = k + 1; j < size; j++)
                b[k] -= a[k, j] * b[j];
            b[k] /= a[k, k];
        }
    }
}
