using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>A compressor: fan, booster, intermediate- or high-pressure compressor.</summary>
public static class Compressor
{
    /// <summary>
    /// Outlet state for a pressure ratio and an isentropic efficiency; <paramref name="inlet"/> gives the flow, the
    /// caller takes off what is bled.
    /// </summary>
    public static void Compress<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in T pressureRatio,
        in T efficiency,
        out FlowState<T> outlet
    )
        where T : struct, IScalar<T>
    {
        Unsafe.SkipInit(out outlet);
        outlet.W = inlet.W;
        outlet.Y = inlet.Y;
        outlet.P = inlet.P * pressureRatio;
        var ideal = gas.EnthalpyAtEntropy(inlet.Phi + gas.GasConstant(inlet.Y) * T.Log(pressureRatio), inlet.Y);
        outlet.H = inlet.H + (ideal - inlet.H) / efficiency;
        gas.CompleteFromEnthalpy(ref outlet);
    }

    /// <summary>
    /// The stream at a port where a share <paramref name="workFraction"/> of the compressor's enthalpy rise has been
    /// done; its pressure follows from the polytropic efficiency of the whole compressor.
    /// </summary>
    public static void AtPort<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in FlowState<T> outlet,
        double workFraction,
        out FlowState<T> port
    )
        where T : struct, IScalar<T>
    {
        port = outlet;
        if (workFraction >= 1.0)
            return;
        port.H = inlet.H + (outlet.H - inlet.H) * workFraction;
        gas.CompleteFromEnthalpy(ref port);
        port.P = inlet.P * T.Exp(T.Log(outlet.P / inlet.P) * (port.Phi - inlet.Phi) / (outlet.Phi - inlet.Phi));
    }

    /// <summary>Isentropic efficiency that a polytropic one amounts to at a pressure ratio, for a given inlet state.</summary>
    public static double IsentropicFromPolytropic(
        in GasRelations<Plain> gas,
        in FlowState<Plain> inlet,
        double pressureRatio,
        double polytropic
    )
    {
        var r = gas.GasConstant(inlet.Y).Value * Math.Log(pressureRatio);
        var real = gas.EnthalpyAtEntropy(new Plain(inlet.Phi.Value + r / polytropic), inlet.Y).Value;
        var ideal = gas.EnthalpyAtEntropy(new Plain(inlet.Phi.Value + r), inlet.Y).Value;
        return (ideal - inlet.H.Value) / (real - inlet.H.Value);
    }
}
