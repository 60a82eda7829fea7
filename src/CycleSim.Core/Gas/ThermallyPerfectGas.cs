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

    // One entry per range (below, above 1000 K) and coefficient; lanes: air, water, fuel line, unused.
    private readonly Vector256<double>[] _cp = new Vector256<double>[2 * 7];
    private readonly Vector256<double>[] _b1 = new Vector256<double>[2];
    private readonly Vector256<double>[] _b2 = new Vector256<double>[2];

    private readonly double[] _hReference = new double[3];
    private readonly double[] _phiReference = new double[3];
    private readonly double _fuelEnthalpy;

    // Starting temperatures over sensible enthalpy and over the entropy function; lanes: air, its change per unit of q,
    // its change per unit of y.
    private readonly StartTable _byEnthalpy,
        _byEntropy;

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
            for (var k = 0; k < 7; k++)
                _cp[7 * range + k] = Vector256.Create(air[k], water[k], products[k], 0.0);
            _b1[range] = Vector256.Create(air[7], water[7], products[7], 0.0);
            _b2[range] = Vector256.Create(air[8], water[8], products[8], 0.0);
        }

        Lines(Join, 0, out var below);
        Lines(Join, 1, out var above);
        _b1[1] += below.H - above.H;
        _b2[1] += below.Phi - above.Phi;

        RAir = NasaGlennData.GasConstant / airMass;
        RWater = R("H2O");
        RFuelLine = NasaGlennData.GasConstant * (carbon + hydrogen / 2.0 - (carbon + hydrogen / 4.0));
        HeatingValue = fuel.LowerHeatingValue;

        Lines(Reference, 0, out var reference);
        for (var lane = 0; lane < 3; lane++)
        {
            _hReference[lane] = reference.H[lane];
            _phiReference[lane] = reference.Phi[lane];
        }
        _fuelEnthalpy = _hReference[2] + HeatingValue;

        _byEnthalpy = new StartTable(this, (in GasPoint p, double y, double q) => p.H - EnthalpyDatum(y, q));
        _byEntropy = new StartTable(this, (in GasPoint p, double y, double q) => p.Phi - EntropyDatum(y, q));
    }

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
        Lines(inside, inside < Join ? 0 : 1, out var lines);
        Blend(inside, lines, y, q, out point);
        if (inside != t)
            Extend(t - inside, ref point);
    }

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public override void AtEnthalpy(double h, double y, double q, out GasPoint point)
    {
        var t = _byEnthalpy.Start(h - EnthalpyDatum(y, q), y, q);
        var weights = Weights(y, q);
        for (var i = 0; i < 8; i++)
        {
            Lines(t, t < Join ? 0 : 1, out var lines);
            var cp = Vector256.Dot(lines.Cp, weights);
            var cpT = Vector256.Dot(lines.CpT, weights);
            var newton = (h - Vector256.Dot(lines.H, weights)) / cp;
            var step = newton / (1.0 + 0.5 * newton * cpT / cp);
            var next = Math.Clamp(t + step, LowestTemperature, HighestTemperature);
            var done = Math.Abs(next - t) < StepForRoundOff * t;
            t = next;
            if (done)
                break;
        }

        Lines(t, t < Join ? 0 : 1, out var last);
        Blend(t, last, y, q, out point);
        // What the last step left: of the order of the cube of that step, so a first-order correction is exact to rounding.
        var rest = (h - point.H) / point.Cp;
        point.T += rest;
        point.Phi += point.Cp * rest / t;
        point.H = h;
    }

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public override void AtEntropy(double phi, double y, double q, out GasPoint point)
    {
        var t = _byEntropy.Start(phi - EntropyDatum(y, q), y, q);
        var weights = Weights(y, q);
        for (var i = 0; i < 8; i++)
        {
            Lines(t, t < Join ? 0 : 1, out var lines);
            var cp = Vector256.Dot(lines.Cp, weights);
            var cpT = Vector256.Dot(lines.CpT, weights);
            var newton = (phi - Vector256.Dot(lines.Phi, weights)) * t / cp;
            var step = newton / (1.0 + 0.5 * newton * (cpT / cp - 1.0 / t));
            var next = Math.Clamp(t + step, LowestTemperature, HighestTemperature);
            var done = Math.Abs(next - t) < StepForRoundOff * t;
            t = next;
            if (done)
                break;
        }

        Lines(t, t < Join ? 0 : 1, out var last);
        Blend(t, last, y, q, out point);
        var rest = (phi - point.Phi) * t / point.Cp;
        point.T += rest;
        point.H += point.Cp * rest;
        point.Phi = phi;
    }

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

    public override double BurntFraction(double fuelAirRatio, out double slope)
    {
        var whole = 1.0 / (1.0 + fuelAirRatio);
        slope = whole * whole;
        return fuelAirRatio * whole;
    }

    public override double FuelAirRatioOf(double y) => y / (1.0 - y);

    // After a step this small (relative) Halley's cubic convergence leaves less than 1e-12; the closing correction takes that.
    private const double StepForRoundOff = 1e-4;

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

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<double> Weights(double y, double q) =>
        Vector256.Create((1.0 - y) * (1.0 - q), (1.0 - y) * q, y, 0.0);

    private static void Extend(double beyond, ref GasPoint p)
    {
        p.T += beyond;
        p.H += p.Cp * beyond;
        p.Phi += p.Cp * Math.Log(Math.Max(p.T, 1.0) / (p.T - beyond));
        p.CpT = 0.0;
    }

    private struct PropertyLines
    {
        public Vector256<double> Cp,
            CpT,
            H,
            Phi;
    }

    /// <summary>The four temperature functions of all three lines.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Lines(double t, int range, out PropertyLines lines)
    {
        ref var a = ref _cp[7 * range];
        var r = 1.0 / t;
        var tv = Vector256.Create(t);
        var rv = Vector256.Create(r);
        var log = Vector256.Create(Math.Log(t));
        var a1 = a;
        var a2 = Unsafe.Add(ref a, 1);
        var a3 = Unsafe.Add(ref a, 2);
        var a4 = Unsafe.Add(ref a, 3);
        var a5 = Unsafe.Add(ref a, 4);
        var a6 = Unsafe.Add(ref a, 5);
        var a7 = Unsafe.Add(ref a, 6);

        var low = MulAdd(a1, rv, a2); // a1/T + a2
        lines.Cp = MulAdd(low, rv, MulAdd(tv, MulAdd(tv, MulAdd(tv, MulAdd(tv, a7, a6), a5), a4), a3));
        lines.CpT = MulAdd(
            Vector256.Create(-r * r),
            MulAdd(a1 + a1, rv, a2),
            MulAdd(tv, MulAdd(tv, MulAdd(tv, 4.0 * a7, 3.0 * a6), 2.0 * a5), a4)
        );
        var h = MulAdd(tv, MulAdd(tv, MulAdd(tv, MulAdd(tv, 0.2 * a7, 0.25 * a6), a5 * (1.0 / 3.0)), 0.5 * a4), a3);
        lines.H = MulAdd(tv, h, MulAdd(a2, log, _b1[range] - a1 * rv));
        var s = MulAdd(tv, MulAdd(tv, MulAdd(tv, 0.25 * a7, a6 * (1.0 / 3.0)), 0.5 * a5), a4);
        lines.Phi = MulAdd(tv, s, MulAdd(a3, log, _b2[range] - rv * MulAdd(0.5 * a1, rv, a2)));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Blend(double t, in PropertyLines lines, double y, double q, out GasPoint p)
    {
        var weights = Weights(y, q);
        var perY = Vector256.Create(q - 1.0, -q, 1.0, 0.0);
        var perQ = Vector256.Create(y - 1.0, 1.0 - y, 0.0, 0.0);
        p.T = t;
        p.H = Vector256.Dot(lines.H, weights);
        p.Phi = Vector256.Dot(lines.Phi, weights);
        p.Cp = Vector256.Dot(lines.Cp, weights);
        p.CpT = Vector256.Dot(lines.CpT, weights);
        p.Hy = Vector256.Dot(lines.H, perY);
        p.Phiy = Vector256.Dot(lines.Phi, perY);
        p.Cpy = Vector256.Dot(lines.Cp, perY);
        p.Hq = Vector256.Dot(lines.H, perQ);
        p.Phiq = Vector256.Dot(lines.Phi, perQ);
        p.Cpq = Vector256.Dot(lines.Cp, perQ);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<double> MulAdd(Vector256<double> a, Vector256<double> b, Vector256<double> c) =>
        Fma.IsSupported || System.Runtime.Intrinsics.Arm.AdvSimd.Arm64.IsSupported
            ? Vector256.FusedMultiplyAdd(a, b, c)
            : a * b + c;

    private delegate double Ordinate(in GasPoint point, double y, double q);

    /// <summary>
    /// Cubic Hermite table of temperature over a shifted property of dry air, with the change that a little water or fuel
    /// makes. Good to about 1e-4, which one Halley step turns into rounding error.
    /// </summary>
    private sealed class StartTable
    {
        private const double SampleY = 0.03,
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
                var (ty, sy) = Invert(gas, ordinate, x, SampleY, 0.0);
                _nodes[2 * i] = Vector256.Create(t0, (tq - t0) / SampleQ, (ty - t0) / SampleY, 0.0);
                _nodes[2 * i + 1] =
                    width * Vector256.Create(s0, (sq - s0) / SampleQ, (sy - s0) / SampleY, 0.0);
            }
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
            var t = Vector256.Dot(value, Vector256.Create(1.0, q, y, 0.0));
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
