using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>A turbine, asked for the work that its spool needs.</summary>
public static class Turbine
{
    /// <summary>
    /// Outlet state for a drop of specific work (J/kg of inlet flow) and an isentropic efficiency. The expansion ratio
    /// follows; whether the turbine can swallow the flow at that ratio is its capacity equation.
    /// </summary>
    public static void Expand<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in T work,
        in T efficiency,
        out FlowState<T> outlet,
        out T expansionRatio
    )
        where T : struct, IScalar<T>
    {
        Unsafe.SkipInit(out outlet);
        outlet.W = inlet.W;
        outlet.Y = inlet.Y;
        outlet.H = inlet.H - work;
        gas.CompleteFromEnthalpy(ref outlet);
        var phiIdeal = gas.EntropyAtEnthalpy(inlet.H - work / efficiency, inlet.Y);
        expansionRatio = T.Exp((inlet.Phi - phiIdeal) / gas.GasConstant(inlet.Y));
        outlet.P = inlet.P / expansionRatio;
    }

    /// <summary>Isentropic efficiency that a polytropic one amounts to for a given work, J/kg.</summary>
    public static double IsentropicFromPolytropic(
        in GasRelations<Plain> gas,
        in FlowState<Plain> inlet,
        double work,
        double polytropic
    )
    {
        gas.AtEnthalpy(new Plain(inlet.H.Value - work), inlet.Y, out _, out var phiOut);
        var lnRatio = (inlet.Phi.Value - phiOut.Value) / polytropic;
        var ideal = gas.EnthalpyAtEntropy(new Plain(inlet.Phi.Value - lnRatio), inlet.Y).Value;
        return work / (inlet.H.Value - ideal);
    }
}
