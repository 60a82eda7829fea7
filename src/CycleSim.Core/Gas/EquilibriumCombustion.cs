namespace CycleSim.Gas;

/// <summary>State of burnt gas in full chemical equilibrium.</summary>
/// <param name="Temperature">K</param>
/// <param name="CompleteTemperature">
/// K, at which the products of complete combustion, without dissociation, have the same enthalpy; NaN where
/// that is above 6000 K, the end of the species data (towards 3000 K at a few kilopascals)
/// </param>
/// <param name="MolarMass">kg/mol; its reciprocal is the number of moles a kilogram</param>
/// <param name="MoleFractions">of the species of <see cref="EquilibriumCombustion.Species"/>, to 1e-12</param>
/// <param name="Iterations">Newton steps taken for the composition, over all temperatures tried</param>
public sealed record EquilibriumState(
    double Temperature,
    double CompleteTemperature,
    double MolarMass,
    IReadOnlyList<double> MoleFractions,
    int Iterations
);

/// <summary>
/// Lean combustion in full chemical equilibrium, to tell what dissociation changes: the flow path itself burns completely.
/// Minimum of the Gibbs energy by element potentials, the method of NASA RP-1311 (Gordon and McBride, 1994).
/// </summary>
/// <remarks>
/// Valid for 200 to 3000 K, 1 kPa to 10 MPa, up to 1 kg vapour per kg dry air and fuel-air ratios from none to stoichiometric.
/// </remarks>
public static class EquilibriumCombustion
{
    private const double ReferencePressure = 1e5;
    private const double Lowest = 200.0,
        Highest = 3000.0,
        HighestOfData = 6000.0;
    private const double Negligible = 1e-8;
    private const int MostIterations = 300;
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
    /// <param name="fuelAirRatio">kg fuel per kg dry air, at most stoichiometric</param>
    /// <param name="waterAirRatio">kg vapour per kg dry air, 0 to 1</param>
    /// <param name="airTemperature">K, 200 to 3000</param>
    /// <param name="pressure">Pa, 1 kPa to 10 MPa</param>
    /// <exception cref="ArgumentException">An input outside its range, or a fuel that cannot be.</exception>
    /// <exception cref="EquilibriumException">The iteration did not settle, or not between 200 and 3000 K.</exception>
    public static EquilibriumState Adiabatic(
        Fuel fuel,
        double fuelAirRatio,
        double waterAirRatio,
        double airTemperature,
        double pressure
    )
    {
        Check(fuel, fuelAirRatio, waterAirRatio, pressure);
        CheckTemperature(airTemperature, nameof(airTemperature));
        var fuelMoles = fuelAirRatio / fuel.MolarMass;
        var enthalpy = Enthalpy(Air(waterAirRatio), airTemperature) + fuelMoles * fuel.FormationEnthalpy;
        var complete = Burnt(fuel, fuelAirRatio, waterAirRatio);
        var atoms = Atoms(complete);
        var n = Start(atoms);
        var iterations = 0;
        var temperature = TemperatureAt(
            enthalpy,
            t =>
            {
                iterations += Settle(n, atoms, t, pressure);
                return Enthalpy(n, t);
            },
            Highest
        );
        return double.IsNaN(temperature)
            ? throw new EquilibriumException(
                $"The burnt gas would be hotter than {Highest:F0} K, the limit here. Give colder air or less fuel."
            )
            : State(complete, n, temperature, enthalpy, iterations);
    }

    /// <summary>The state of the burnt gas held at a temperature and a pressure.</summary>
    /// <param name="fuelAirRatio">kg fuel per kg dry air, at most stoichiometric</param>
    /// <param name="waterAirRatio">kg vapour per kg dry air, 0 to 1</param>
    /// <param name="temperature">K, 200 to 3000</param>
    /// <param name="pressure">Pa, 1 kPa to 10 MPa</param>
    /// <exception cref="ArgumentException">An input outside its range, or a fuel that cannot be.</exception>
    /// <exception cref="EquilibriumException">The iteration did not settle.</exception>
    public static EquilibriumState AtTemperature(
        Fuel fuel,
        double fuelAirRatio,
        double waterAirRatio,
        double temperature,
        double pressure
    )
    {
        Check(fuel, fuelAirRatio, waterAirRatio, pressure);
        CheckTemperature(temperature, nameof(temperature));
        var complete = Burnt(fuel, fuelAirRatio, waterAirRatio);
        var atoms = Atoms(complete);
        var n = Start(atoms);
        var iterations = Settle(n, atoms, temperature, pressure);
        return State(complete, n, temperature, Enthalpy(n, temperature), iterations);
    }

    private static EquilibriumState State(
        double[] complete,
        double[] n,
        double temperature,
        double enthalpy,
        int iterations
    )
    {
        var moles = n.Sum();
        var mass = complete.Select((x, j) => x * Data[j].MolarMass).Sum();
        return new EquilibriumState(
            temperature,
            TemperatureAt(enthalpy, t => Enthalpy(complete, t), HighestOfData),
            mass / moles,
            [.. n.Select(x => x / moles)],
            iterations
        );
    }

    private static void Check(Fuel fuel, double fuelAirRatio, double waterAirRatio, double pressure)
    {
        ArgumentNullException.ThrowIfNull(fuel);
        fuel.ThrowIfUnusable();
        if (!(fuelAirRatio >= 0.0 && fuelAirRatio <= fuel.StoichiometricFuelAirRatio))
            throw new ArgumentOutOfRangeException(
                nameof(fuelAirRatio),
                $"The fuel-air ratio must lie between 0 and {fuel.StoichiometricFuelAirRatio:F4}, where {fuel.Name} "
                    + $"uses up the oxygen; {fuelAirRatio:G5} was given. Give kg fuel per kg dry air."
            );
        if (waterAirRatio is not (>= 0.0 and <= 1.0))
            throw new ArgumentOutOfRangeException(
                nameof(waterAirRatio),
                $"The water-air ratio must lie between 0 and 1 kg per kg dry air; {waterAirRatio:G5} was given."
            );
        if (pressure is not (>= 1e3 and <= 1e7))
            throw new ArgumentOutOfRangeException(
                nameof(pressure),
                $"Pressure must lie between 1 kPa and 10 MPa; {pressure:G5} Pa was given. Give it in pascal, absolute."
            );
    }

    private static void CheckTemperature(double t, string name)
    {
        if (t is not (>= Lowest and <= Highest))
            throw new ArgumentOutOfRangeException(
                name,
                $"Temperature must lie between {Lowest:F0} and {Highest:F0} K; {t:G5} K was given. Give it in kelvin."
            );
    }

    // Moles of each species in humid air, a kilogram of dry air.
    private static double[] Air(double waterAirRatio)
    {
        var moles = new double[Formulas.Length];
        foreach (var (species, fraction) in DryAir.MoleFractions)
            moles[Index(species)] = fraction / DryAir.MolarMass;
        moles[Index("H2O")] = waterAirRatio / Data[Index("H2O")].MolarMass;
        return moles;
    }

    // The same after complete combustion.
    private static double[] Burnt(Fuel fuel, double fuelAirRatio, double waterAirRatio)
    {
        var moles = Air(waterAirRatio);
        var fuelMoles = fuelAirRatio / fuel.MolarMass;
        moles[Index("CO2")] += fuelMoles * fuel.Carbon;
        moles[Index("H2O")] += fuelMoles * fuel.Hydrogen / 2.0;
        moles[Index("O2")] -= fuelMoles * (fuel.Carbon + fuel.Hydrogen / 4.0);
        return moles;
    }

    private static int Index(string species) => Array.FindIndex(Formulas, f => f.Name == species);

    // Hydrogen may be none; the floor under the moles keeps its equation regular.
    private static double[] Atoms(double[] moles)
    {
        var atoms = new double[Elements];
        for (var e = 0; e < Elements; e++)
            atoms[e] = moles.Select((x, j) => x * Formulas[j].Atoms[e]).Sum();
        return atoms;
    }

    // J, enthalpies of formation included.
    private static double Enthalpy(double[] moles, double t)
    {
        var sum = 0.0;
        for (var j = 0; j < moles.Length; j++)
            sum += moles[j] * Data[j].EnthalpyOverRT(t);
        return sum * NasaGlennData.GasConstant * t;
    }

    // Enthalpy rises with temperature, at equilibrium too; halving needs no derivative of the composition. NaN above the
    // highest temperature.
    private static double TemperatureAt(double enthalpy, Func<double, double> enthalpyAt, double highest)
    {
        double low = Lowest,
            high = highest;
        while (high - low > 1e-7)
        {
            var t = 0.5 * (low + high);
            if (enthalpyAt(t) < enthalpy)
                low = t;
            else
                high = t;
        }

        // Burning only heats, so that nothing ends below the lowest temperature of the air.
        return high < highest ? 0.5 * (low + high) : double.NaN;
    }

    // Any positive composition will do; an even one is far enough from zero everywhere.
    private static double[] Start(double[] atoms)
    {
        var n = new double[Formulas.Length];
        Array.Fill(n, 0.1 * atoms.Sum() / Formulas.Length);
        return n;
    }

    /// <summary>
    /// Moles at equilibrium for a temperature and pressure; starts from, and returns in, <paramref name="n"/>. Gives the
    /// number of steps.
    /// </summary>
    private static int Settle(double[] n, double[] atoms, double t, double pressure)
    {
        var gibbs = new double[n.Length];
        for (var j = 0; j < n.Length; j++)
            gibbs[j] = Data[j].EnthalpyOverRT(t) - Data[j].EntropyOverR(t) + Math.Log(pressure / ReferencePressure);

        const int Size = Elements + 1;
        var a = new double[Size, Size];
        var b = new double[Size];
        var step = new double[n.Length];
        for (var iteration = 1; iteration <= MostIterations; iteration++)
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
                // Species on their way out of the gas may go at once; they must not hold up the rest.
                if (step[j] > 0.0 || n[j] > Negligible * total)
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
                return iteration;
        }

        throw new EquilibriumException(
            $"No chemical equilibrium found in {MostIterations} steps at {t:F1} K and {pressure:F0} Pa, for "
                + $"{string.Join(", ", atoms.Zip("CHONA", (x, e) => $"{x:G6} {(e == 'A' ? "Ar" : e)}"))} moles of atoms."
        );
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
