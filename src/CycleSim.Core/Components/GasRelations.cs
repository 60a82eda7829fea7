using CycleSim.Gas;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>
/// The gas of one flow path at one humidity, as the scalar-generic formulas see it. Each member evaluates one
/// primitive in doubles and attaches its exact derivatives.
/// </summary>
public readonly struct GasRelations<T>(GasModel gas, in T specificHumidity)
    where T : struct, IScalar<T>
{
    private readonly T _q = specificHumidity;

    public GasModel Model { get; } = gas;

    /// <summary>Water vapour per kilogram of moist air taken in.</summary>
    public T SpecificHumidity => _q;

    /// <summary>Gas constant, J/(kg K).</summary>
    public T GasConstant(in T y)
    {
        var perY = Model.RFuelLine - Model.RAir - _q.Value * (Model.RWater - Model.RAir);
        var perQ = (1.0 - y.Value) * (Model.RWater - Model.RAir);
        return T.Chain(Model.GasConstant(y.Value, _q.Value), y, perY, _q, perQ);
    }

    /// <summary>Enthalpy and entropy function at a temperature.</summary>
    public void AtTemperature(in T t, in T y, out T h, out T phi)
    {
        Model.AtTemperature(t.Value, y.Value, _q.Value, out var p);
        h = T.Chain(p.H, t, p.Cp, y, p.Hy, _q, p.Hq);
        phi = T.Chain(p.Phi, t, p.Cp / p.T, y, p.Phiy, _q, p.Phiq);
    }

    /// <summary>Enthalpy, entropy function and specific heat at a temperature.</summary>
    public void AtTemperature(in T t, in T y, out T h, out T phi, out T cp)
    {
        Model.AtTemperature(t.Value, y.Value, _q.Value, out var p);
        h = T.Chain(p.H, t, p.Cp, y, p.Hy, _q, p.Hq);
        phi = T.Chain(p.Phi, t, p.Cp / p.T, y, p.Phiy, _q, p.Phiq);
        cp = T.Chain(p.Cp, t, p.CpT, y, p.Cpy, _q, p.Cpq);
    }

    /// <summary>Temperature and entropy function at an enthalpy.</summary>
    public void AtEnthalpy(in T h, in T y, out T t, out T phi)
    {
        Model.AtEnthalpy(h.Value, y.Value, _q.Value, out var p);
        var r = 1.0 / p.Cp;
        t = T.Chain(p.T, h, r, y, -p.Hy * r, _q, -p.Hq * r);
        var rt = 1.0 / p.T;
        phi = T.Chain(p.Phi, h, rt, y, p.Phiy - p.Hy * rt, _q, p.Phiq - p.Hq * rt);
    }

    /// <summary>The entropy function at an enthalpy.</summary>
    public T EntropyAtEnthalpy(in T h, in T y)
    {
        Model.AtEnthalpy(h.Value, y.Value, _q.Value, out var p);
        var rt = 1.0 / p.T;
        return T.Chain(p.Phi, h, rt, y, p.Phiy - p.Hy * rt, _q, p.Phiq - p.Hq * rt);
    }

    /// <summary>The enthalpy at a value of the entropy function: where an ideal change of pressure ends.</summary>
    public T EnthalpyAtEntropy(in T phi, in T y)
    {
        Model.AtEntropy(phi.Value, y.Value, _q.Value, out var p);
        return T.Chain(p.H, phi, p.T, y, p.Hy - p.T * p.Phiy, _q, p.Hq - p.T * p.Phiq);
    }

    /// <summary>Sets the total state of a stream whose flow, pressure and composition are known, from its enthalpy.</summary>
    public void CompleteFromEnthalpy(ref FlowState<T> s) => AtEnthalpy(s.H, s.Y, out s.Tt, out s.Phi);

    /// <summary>Sets the total state of a stream from its temperature.</summary>
    public void CompleteFromTemperature(ref FlowState<T> s) => AtTemperature(s.Tt, s.Y, out s.H, out s.Phi);

    /// <summary>Enthalpy and temperature at a value of the entropy function.</summary>
    public void AtEntropy(in T phi, in T y, out T h, out T t)
    {
        Model.AtEntropy(phi.Value, y.Value, _q.Value, out var p);
        h = T.Chain(p.H, phi, p.T, y, p.Hy - p.T * p.Phiy, _q, p.Hq - p.T * p.Phiq);
        var k = p.T / p.Cp;
        t = T.Chain(p.T, phi, k, y, -k * p.Phiy, _q, -k * p.Phiq);
    }

    /// <summary>
    /// State in which a stream of given total enthalpy moves at the speed of sound, from h0 - h(T) = gamma R T / 2. One
    /// Newton step in doubles from a close start; the derivatives come from a second one in <typeparamref name="T"/>.
    /// </summary>
    public void Sonic(in T h0, in T t0, in T y, out T t, out T h, out T phi)
    {
        var q = _q.Value;
        var r = Model.GasConstant(y.Value, q);
        var guess = Model.SonicStart(t0.Value, y.Value, q);
        Model.AtTemperature(guess, y.Value, q, out var p);
        var k = p.Cp / (p.Cp - r);
        var slope = -p.Cp - 0.5 * r * (k - guess * r * p.CpT / ((p.Cp - r) * (p.Cp - r)));
        guess -= (h0.Value - p.H - 0.5 * k * r * guess) / slope;

        var start = T.Constant(guess);
        AtTemperature(start, y, out h, out phi, out var cp);
        var gas = GasConstant(y);
        var step = (h + cp * gas / (cp - gas) * (0.5 * guess) - h0) / slope;
        t = start + step;
        h += cp * step;
        phi += cp * step / guess;
    }
}
