using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>
/// Forced mixer: two streams that meet at equal static pressure mix in a duct of constant area. Mass, energy and momentum
/// balance; static states come from flow and area.
/// </summary>
public static class Mixer
{
    /// <summary>Beyond this Mach number the subsonic solutions go on as tangents; no such point is accepted as a solution.</summary>
    private const double LastMach = 0.98;

    /// <summary>
    /// Speed (m/s) and static pressure (Pa) of a stream that fills an area (m2). Where the area is too small for the flow
    /// the result goes on as a tangent, so that the solver sees the way back.
    /// </summary>
    public static void StaticState<T>(
        in GasRelations<T> gas,
        in FlowState<T> s,
        double area,
        out T speed,
        out T staticPressure
    )
        where T : struct, IScalar<T>
    {
        var r = gas.GasConstant(s.Y);
        // Density times speed against flow per area; its slope over the speed is density (1 - Mach2).
        var wanted = s.W.Value / area;
        var v = wanted * r.Value * s.Tt.Value / s.P.Value;
        double slope = 1.0;
        for (var i = 0; i < 30; i++)
        {
            gas.Model.AtEnthalpy(s.H.Value - 0.5 * v * v, s.Y.Value, gas.SpecificHumidity.Value, out var p);
            var sound2 = p.Cp / (p.Cp - r.Value) * r.Value * p.T;
            if (v * v > LastMach * LastMach * sound2)
            {
                v = 0.999 * LastMach * Math.Sqrt(sound2);
                slope = double.NaN;
                continue;
            }

            var density = s.P.Value * Math.Exp((p.Phi - s.Phi.Value) / r.Value) / (r.Value * p.T);
            var atEdge = double.IsNaN(slope);
            slope = density * (1.0 - v * v / sound2);
            var step = (density * v - wanted) / slope;
            if (atEdge && step < 0.0)
                break;
            v -= step;
            if (Math.Abs(step) < 1e-9 * v)
                break;
        }

        // One more step in T gives the derivatives (and, at the edge, the tangent).
        var start = T.Constant(v);
        gas.AtEnthalpy(s.H - 0.5 * v * v, s.Y, out var t, out var phi);
        var pressure = s.P * T.Exp((phi - s.Phi) / r);
        speed = start - (pressure / (r * t) * v - s.W / area) / slope;
        gas.AtEnthalpy(s.H - speed * speed * 0.5, s.Y, out _, out var phiAtSpeed);
        staticPressure = s.P * T.Exp((phiAtSpeed - s.Phi) / r);
    }

    /// <summary>
    /// The mixed stream behind a duct of constant area (m2) for the streams' momentum p A + W V (N), before losses.
    /// </summary>
    public static void MixedState<T>(
        in GasRelations<T> gas,
        in FlowState<T> core,
        in FlowState<T> bypass,
        in T momentum,
        double area,
        double guess,
        out FlowState<T> mixed
    )
        where T : struct, IScalar<T>
    {
        Unsafe.SkipInit(out mixed);
        mixed.W = core.W + bypass.W;
        mixed.H = (core.W * core.H + bypass.W * bypass.H) / mixed.W;
        mixed.Y = (core.W * core.Y + bypass.W * bypass.Y) / mixed.W;
        gas.CompleteFromEnthalpy(ref mixed);
        var r = gas.GasConstant(mixed.Y);

        // G V + G R T / V = momentum / area, subsonic root; G flow per area.
        var g = mixed.W.Value / area;
        var wanted = momentum.Value / area;
        var v = guess;
        double slope = 1.0;
        for (var i = 0; i < 30; i++)
        {
            gas.Model.AtEnthalpy(mixed.H.Value - 0.5 * v * v, mixed.Y.Value, gas.SpecificHumidity.Value, out var p);
            slope = g * (1.0 - r.Value * p.T / (v * v) - r.Value / p.Cp);
            var step = (g * v + g * r.Value * p.T / v - wanted) / slope;
            var sound = Math.Sqrt(p.Cp / (p.Cp - r.Value) * r.Value * p.T);
            var next = Math.Min(Math.Max(v - step, 0.3 * v), LastMach * sound);
            var settled = Math.Abs(next - v) < 1e-9 * v;
            v = next;
            if (settled)
                break;
        }

        gas.AtEnthalpy(mixed.H - 0.5 * v * v, mixed.Y, out var t, out _);
        var flow = mixed.W / area;
        var imbalance = flow * v + flow * r * t / v - momentum / area;
        var speed = T.Constant(v) - imbalance / slope;
        gas.AtEnthalpy(mixed.H - speed * speed * 0.5, mixed.Y, out var tAtSpeed, out var phi);
        mixed.P = flow * r * tAtSpeed / speed * T.Exp((mixed.Phi - phi) / r);
    }

    /// <summary>Area (m2) that a stream fills at a Mach number, and its static pressure there (Pa).</summary>
    public static (double Area, double StaticPressure) AtMach(
        in GasRelations<Plain> gas,
        in FlowState<Plain> s,
        double mach
    )
    {
        var r = gas.GasConstant(s.Y).Value;
        double low = 0.0,
            high = s.H.Value;
        gas.Model.AtTemperature(0.5 * s.Tt.Value, s.Y.Value, gas.SpecificHumidity.Value, out var cold);
        high = s.H.Value - cold.H;
        for (var i = 0; i < 100; i++)
        {
            // Halving over the enthalpy drop: Mach number rises with it.
            var drop = 0.5 * (low + high);
            gas.Model.AtEnthalpy(s.H.Value - drop, s.Y.Value, gas.SpecificHumidity.Value, out var p);
            if (2.0 * drop < mach * mach * (p.Cp / (p.Cp - r) * r * p.T))
                low = drop;
            else
                high = drop;
        }

        gas.Model.AtEnthalpy(s.H.Value - low, s.Y.Value, gas.SpecificHumidity.Value, out var q);
        var pressure = s.P.Value * Math.Exp((q.Phi - s.Phi.Value) / r);
        return (s.W.Value * r * q.T / (pressure * Math.Sqrt(2.0 * low)), pressure);
    }

    /// <summary>Area (m2) that a stream fills when its static pressure is given (Pa); NaN where it has no speed there.</summary>
    public static double AreaAtPressure(in GasRelations<Plain> gas, in FlowState<Plain> s, double staticPressure)
    {
        var r = gas.GasConstant(s.Y).Value;
        var phi = s.Phi.Value + r * Math.Log(staticPressure / s.P.Value);
        gas.Model.AtEntropy(phi, s.Y.Value, gas.SpecificHumidity.Value, out var p);
        var speed = Math.Sqrt(2.0 * (s.H.Value - p.H));
        return s.W.Value * r * p.T / (staticPressure * speed);
    }
}
