using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;

namespace CycleSim.Gas;

/// <summary>
/// Thermally perfect mixture of dry air, water vapour and the lean, complete combustion products of one fuel, from the
/// nine-coefficient NASA Glenn data. The composition y is the mass fraction of the stream that came in as fuel.
/// </summary>
/// <remarks>
/// The species collapse to three polynomial lines per kilogram - dry air, water vapour, and "fuel line" = the products of
/// burning a kilogram of fuel less the oxygen that took part - so that every property is linear in the mass fractions
/// and three lanes of one vector carry it. Dissociation is not included here; <see cref="EquilibriumCombustion"/> tells
/// how much it would change. The published integration constants leave steps of a few parts in 1e9 at 1000 K, more than
/// the solver's tolerance; the upper range is re-anchored so that enthalpy and entropy are continuous there.
/// Valid from 200 K (extrapolated to 120 K) to 3000 K.
/// </remarks>
public sealed class ThermallyPerfectGas : GasModel
{
    private const double Reference = 298.15;
    private const double Join = 1000.0;
    private const int Cells = 128;
    private const int Terms = 10;

    // For each range (below, above 1000 K) and line (air, water, fuel line) eleven coefficients, of 1/T3 to T5 and of ln T;
    // the lanes of each are the four temperature functions h, Phi, cp, dcp/dT.
    private readonly Vector256<double>[] _terms = new Vector256<double>[2 * 3 * Terms];

    private readonly double[] _hReference = new double[3];
    private readonly double[] _phiReference = new double[3];
    private readonly double _fuelEnthalpy;

    // Starting temperatures over sensible enthalpy, over the entropy function, over the total temperature of a sonic stream.
    private readonly StartTable _byEnthalpy,
        _byEntropy,
        _bySonicTotal;

    public ThermallyPerfectGas(Fuel fuel)
    {
        Fuel = fuel;
        var carbon = fuel.Carbon / fuel.MolarMass;
        var hydrogen = fuel.Hydrogen / fuel.MolarMass;
        var airMass = DryAir.MolarMass;
        double R(string species) => NasaGlennData.GasConstant / NasaGlennData.Species(species).MolarMass;

        for (var range = 0; range < 2; range++)
        {
            var air = new double[9];
            var water = new double[9];
            var products = new double[9];
            foreach (var (species, moles) in DryAir.MoleFractions)
                Add(air, species, range, moles / airMass);
            Add(water, "H2O", range, 1.0 / NasaGlennData.Species("H2O").MolarMass);
            Add(products, "CO2", range, carbon);
            Add(products, "H2O", range, hydrogen / 2.0);
            Add(products, "O2", range, -(carbon + hydrogen / 4.0));
            SetTerms(range, 0, air);
            SetTerms(range, 1, water);
            SetTerms(range, 2, products);
        }

        for (var line = 0; line < 3; line++)
        {
            var step = Line(Join, 0, line) - Line(Join, 1, line);
            _terms[Index(1, line)] += Vector256.Create(step[0], step[1], 0.0, 0.0);
        }

        RAir = NasaGlennData.GasConstant / airMass;
        RWater = R("H2O");
        RFuelLine = NasaGlennData.GasConstant * (carbon + hydrogen / 2.0 - (carbon + hydrogen / 4.0));
        HeatingValue = fuel.LowerHeatingValue;

        for (var line = 0; line < 3; line++)
        {
            var reference = Line(Reference, 0, line);
            _hReference[line] = reference[0];
            _phiReference[line] = reference[1];
        }

        _fuelEnthalpy = _hReference[2] + HeatingValue;

        _byEnthalpy = new StartTable(this, (in GasPoint p, double y, double q) => p.H - EnthalpyDatum(y, q));
        _byEntropy = new StartTable(this, (in GasPoint p, double y, double q) => p.Phi - EntropyDatum(y, q));
        _bySonicTotal = new StartTable(this, TotalOfSonic);
    }

    private static readonly System.Collections.Concurrent.ConcurrentDictionary<Fuel, ThermallyPerfectGas> Known = new();

    /// <summary>The gas of a fuel; made once, as its start tables take a few milliseconds.</summary>
    public static ThermallyPerfectGas For(Fuel fuel) => Known.GetOrAdd(fuel, f => new ThermallyPerfectGas(f));

    public Fuel Fuel { get; }

    public override double RAir { get; }

    public override double RWater { get; }

    public override double RFuelLine { get; }

    public override double HeatingValue { get; }

    public override double StoichiometricFuelAirRatio => Fuel.StoichiometricFuelAirRatio;

    public override bool CarriesHumidity => true;

    public override bool CountsFuelMass => true;

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public override void AtTemperature(double t, double y, double q, out GasPoint point)
    {
        var inside = Math.Clamp(t, LowestTemperature, HighestTemperature);
        Lines(inside, out var air, out var water, out var fuel);
        Blend(inside, air, water, fuel, y, q, out point);
        if (inside != t)
            Extend(t - inside, ref point);
    }

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public override void AtEnthalpy(double h, double y, double q, out GasPoint point)
    {
        var t = _byEnthalpy.Start(h - EnthalpyDatum(y, q), y, q);
        for (var i = 0; ; i++)
        {
            Lines(t, out var air, out var water, out var fuel);
            Blend(t, air, water, fuel, y, q, out point);
            var newton = (h - point.H) / point.Cp;
            var step = newton / (1.0 + 0.5 * newton * point.CpT / point.Cp);
            var next = t + step;
            if (Math.Abs(step) < LastStep * t || i == MostSteps || next is < LowestTemperature or > HighestTemperature)
            {
                Move(ref point, i < MostSteps ? step : newton);
                point.H = h;
                return;
            }

            t = next;
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public override void AtEntropy(double phi, double y, double q, out GasPoint point)
    {
        var t = _byEntropy.Start(phi - EntropyDatum(y, q), y, q);
        for (var i = 0; ; i++)
        {
            Lines(t, out var air, out var water, out var fuel);
            Blend(t, air, water, fuel, y, q, out point);
            var newton = (phi - point.Phi) * t / point.Cp;
            var step = newton / (1.0 + 0.5 * newton * (point.CpT / point.Cp - 1.0 / t));
            var next = t + step;
            if (Math.Abs(step) < LastStep * t || i == MostSteps || next is < LowestTemperature or > HighestTemperature)
            {
                Move(ref point, i < MostSteps ? step : newton);
                point.Phi = phi;
                return;
            }

            t = next;
        }
    }

    public override double SonicStart(double totalTemperature, double y, double q) =>
        _bySonicTotal.Start(totalTemperature, y, q);

    public override double FuelForTemperature(
        double t3,
        double h3,
        double t4,
        double q,
        double efficiency,
        out FuelSlopes slopes
    )
    {
        // (1) h3 + f (h_fuel - (1 - efficiency) LHV) = h_air(T4) + f h_fuelline(T4), all per kilogram of moist air.
        AtTemperature(t4, 0.0, q, out var air);
        var products = air.H + air.Hy;
        var released = _fuelEnthalpy - (1.0 - efficiency) * HeatingValue - products;
        var f = (air.H - h3) / released;
        slopes = new FuelSlopes
        {
            H3 = -1.0 / released,
            T4 = (air.Cp + f * (air.Cp + air.Cpy)) / released,
            Q = air.Hq / released,
        };
        return f;
    }

    public override double FuelEnthalpyFlow(double fuelFlow, double efficiency) =>
        fuelFlow * (_fuelEnthalpy - (1.0 - efficiency) * HeatingValue);

    public override double BurntFraction(double fuelAirRatio, out double slope)
    {
        var whole = 1.0 / (1.0 + fuelAirRatio);
        slope = whole * whole;
        return fuelAirRatio * whole;
    }

    public override double FuelAirRatioOf(double y) => y / (1.0 - y);

    // After a step this small (relative) Halley's cubic convergence leaves less than 1e-13, and the second-order expansion
    // over that step is as good.
    private const double LastStep = 3e-5;
    private const int MostSteps = 8;

    private static void Add(Span<double> line, string species, int range, double molesPerKilogram)
    {
        var a = NasaGlennData.Species(species).Coefficients(range);
        for (var k = 0; k < 9; k++)
            line[k] += molesPerKilogram * NasaGlennData.GasConstant * a[k];
    }

    private double EnthalpyDatum(double y, double q) =>
        (1.0 - y) * ((1.0 - q) * _hReference[0] + q * _hReference[1]) + y * _hReference[2];

    private double EntropyDatum(double y, double q) =>
        (1.0 - y) * ((1.0 - q) * _phiReference[0] + q * _phiReference[1]) + y * _phiReference[2];

    private static void Extend(double beyond, ref GasPoint p)
    {
        p.T += beyond;
        p.H += p.Cp * beyond;
        p.Phi += p.Cp * Math.Log(Math.Max(p.T, 1.0) / (p.T - beyond));
        p.CpT = 0.0;
    }

    /// <summary>Carries a point over a small step of temperature by its own derivatives.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Move(ref GasPoint p, double d)
    {
        var r = d / p.T;
        p.H += d * (p.Cp + 0.5 * d * p.CpT);
        p.Phi += r * (p.Cp * (1.0 - 0.5 * r) + 0.5 * d * p.CpT);
        p.Hy += d * p.Cpy;
        p.Hq += d * p.Cpq;
        p.Phiy += r * p.Cpy;
        p.Phiq += r * p.Cpq;
        p.Cp += d * p.CpT;
        p.Cpy += d * p.CpTy;
        p.Cpq += d * p.CpTq;
        p.T += d;
    }

    private double TotalOfSonic(in GasPoint p, double y, double q)
    {
        var r = GasConstant(y, q);
        AtEnthalpy(p.H + 0.5 * p.Cp / (p.Cp - r) * r * p.T, y, q, out var total);
        return total.T;
    }

    private static int Index(int range, int line) => (3 * range + line) * Terms;

    // Order: 1, T, T2, T3, T4, T5, 1/T, 1/T2, 1/T3, ln T.
    private void SetTerms(int range, int line, double[] a)
    {
        static Vector256<double> V(double h, double phi, double cp, double cpT) => Vector256.Create(h, phi, cp, cpT);
        var at = Index(range, line);
        _terms[at] = V(a[7], a[8], a[2], a[3]);
        _terms[at + 1] = V(a[2], a[3], a[3], 2.0 * a[4]);
        _terms[at + 2] = V(a[3] / 2.0, a[4] / 2.0, a[4], 3.0 * a[5]);
        _terms[at + 3] = V(a[4] / 3.0, a[5] / 3.0, a[5], 4.0 * a[6]);
        _terms[at + 4] = V(a[5] / 4.0, a[6] / 4.0, a[6], 0.0);
        _terms[at + 5] = V(a[6] / 5.0, 0.0, 0.0, 0.0);
        _terms[at + 6] = V(-a[0], -a[1], a[1], 0.0);
        _terms[at + 7] = V(0.0, -a[0] / 2.0, a[0], -a[1]);
        _terms[at + 8] = V(0.0, 0.0, 0.0, -2.0 * a[0]);
        _terms[at + 9] = V(a[1], a[2], 0.0, 0.0);
    }

    private Vector256<double> Line(double t, int range, int line)
    {
        var r = 1.0 / t;
        return OneLine(ref _terms[Index(range, line)], t, r, Math.Log(t));
    }

    /// <summary>The four temperature functions of all three lines.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Lines(double t, out Vector256<double> air, out Vector256<double> water, out Vector256<double> fuel)
    {
        ref var terms = ref _terms[t < Join ? 0 : 3 * Terms];
        var r = 1.0 / t;
        var log = Math.Log(t);
        air = OneLine(ref terms, t, r, log);
        water = OneLine(ref Unsafe.Add(ref terms, Terms), t, r, log);
        fuel = OneLine(ref Unsafe.Add(ref terms, 2 * Terms), t, r, log);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<double> OneLine(ref Vector256<double> c, double t, double r, double log)
    {
        var tv = Vector256.Create(t);
        var rv = Vector256.Create(r);
        var rising = MulAdd(tv, MulAdd(tv, Unsafe.Add(ref c, 5), Unsafe.Add(ref c, 4)), Unsafe.Add(ref c, 3));
        rising = MulAdd(tv, MulAdd(tv, MulAdd(tv, rising, Unsafe.Add(ref c, 2)), Unsafe.Add(ref c, 1)), c);
        var falling = MulAdd(rv, MulAdd(rv, Unsafe.Add(ref c, 8), Unsafe.Add(ref c, 7)), Unsafe.Add(ref c, 6));
        return MulAdd(Vector256.Create(log), Unsafe.Add(ref c, 9), MulAdd(rv, falling, rising));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Blend(
        double t,
        Vector256<double> air,
        Vector256<double> water,
        Vector256<double> fuel,
        double y,
        double q,
        out GasPoint p
    )
    {
        var perQ = water - air;
        var moist = MulAdd(Vector256.Create(q), perQ, air);
        var perY = fuel - moist;
        GasPoint.Fill(out p, t, MulAdd(Vector256.Create(y), perY, moist), perY, perQ * Vector256.Create(1.0 - y));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<double> MulAdd(Vector256<double> a, Vector256<double> b, Vector256<double> c) =>
        Fma.IsSupported || System.Runtime.Intrinsics.Arm.AdvSimd.Arm64.IsSupported
            ? Vector256.FusedMultiplyAdd(a, b, c)
            : a * b + c;

    private delegate double Ordinate(in GasPoint point, double y, double q);

    /// <summary>
    /// Cubic Hermite table of temperature over a shifted property: lanes are dry air, the change per unit of q, and the
    /// first and second differences over y. Good to about 1e-5, which one Halley step turns into rounding error.
    /// </summary>
    private sealed class StartTable
    {
        private const double SampleY = 0.02,
            SampleQ = 0.02;

        private readonly double _first,
            _perCell;
        private readonly Vector256<double>[] _nodes = new Vector256<double>[2 * (Cells + 1)];

        public StartTable(ThermallyPerfectGas gas, Ordinate ordinate)
        {
            gas.AtTemperature(LowestTemperature, 0.0, 0.0, out var low);
            gas.AtTemperature(HighestTemperature, 0.0, 0.0, out var high);
            _first = ordinate(low, 0.0, 0.0);
            var width = (ordinate(high, 0.0, 0.0) - _first) / Cells;
            _perCell = 1.0 / width;
            for (var i = 0; i <= Cells; i++)
            {
                var x = _first + i * width;
                var (t0, s0) = Invert(gas, ordinate, x, 0.0, 0.0);
                var (tq, sq) = Invert(gas, ordinate, x, 0.0, SampleQ);
                var (t1, s1) = Invert(gas, ordinate, x, SampleY, 0.0);
                var (t2, s2) = Invert(gas, ordinate, x, 2.0 * SampleY, 0.0);
                _nodes[2 * i] = Lanes(t0, tq, t1, t2);
                _nodes[2 * i + 1] = width * Lanes(s0, sq, s1, s2);
            }

            static Vector256<double> Lanes(double at0, double atQ, double atY, double atTwoY) =>
                Vector256.Create(
                    at0,
                    (atQ - at0) / SampleQ,
                    (4.0 * atY - 3.0 * at0 - atTwoY) / (2.0 * SampleY),
                    (atTwoY - 2.0 * atY + at0) / (2.0 * SampleY * SampleY)
                );
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public double Start(double x, double y, double q)
        {
            var z = (x - _first) * _perCell;
            z = Math.Clamp(z, 0.0, Cells - 1e-9);
            var i = (int)z;
            var u = z - i;
            ref var node = ref _nodes[2 * i];
            var p0 = node;
            var m0 = Unsafe.Add(ref node, 1);
            var p1 = Unsafe.Add(ref node, 2);
            var m1 = Unsafe.Add(ref node, 3);
            var d = p1 - p0;
            var c2 = 3.0 * d - 2.0 * m0 - m1;
            var c3 = m0 + m1 - 2.0 * d;
            var uv = Vector256.Create(u);
            var value = MulAdd(uv, MulAdd(uv, MulAdd(uv, c3, c2), m0), p0);
            var t = Vector256.Dot(value, Vector256.Create(1.0, q, y, y * y));
            return Math.Clamp(t, LowestTemperature, HighestTemperature);
        }

        private static (double T, double Slope) Invert(
            ThermallyPerfectGas gas,
            Ordinate ordinate,
            double x,
            double y,
            double q
        )
        {
            double low = LowestTemperature - 60.0,
                high = HighestTemperature + 2000.0;
            for (var i = 0; i < 60; i++)
            {
                var middle = 0.5 * (low + high);
                gas.AtTemperature(middle, y, q, out var p);
                if (ordinate(p, y, q) < x)
                    low = middle;
                else
                    high = middle;
            }

            const double Step = 0.01;
            gas.AtTemperature(low - Step, y, q, out var a);
            gas.AtTemperature(low + Step, y, q, out var b);
            return (low, 2.0 * Step / (ordinate(b, y, q) - ordinate(a, y, q)));
        }
    }
}
