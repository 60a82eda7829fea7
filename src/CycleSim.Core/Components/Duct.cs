using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>Passages without work: ducts and mixing of side streams.</summary>
public static class Duct
{
    /// <summary>
    /// Total pressure left behind a passage whose loss goes with the square of the corrected flow, over the one ahead.
    /// </summary>
    /// <param name="designLoss">loss over inlet total pressure at the design point</param>
    /// <param name="correctedFlowRatio">corrected flow over that of the design point</param>
    public static T PressureRatio<T>(double designLoss, in T correctedFlowRatio)
        where T : struct, IScalar<T> => 1.0 - correctedFlowRatio * correctedFlowRatio * designLoss;

    /// <summary>
    /// Corrected flow W sqrt(R T) / P, m2: the capacity of a passage freed of units and of the gas constant, so that it
    /// holds for humid air and burnt gas alike.
    /// </summary>
    public static T CorrectedFlow<T>(in GasRelations<T> gas, in FlowState<T> s)
        where T : struct, IScalar<T> => s.W * T.Sqrt(gas.GasConstant(s.Y) * s.Tt) / s.P;

    /// <summary>
    /// Mixes a side stream into the main one, conserving mass, energy and composition; the main stream's total pressure
    /// stays. The state is completed from the enthalpy.
    /// </summary>
    public static void Mix<T>(in GasRelations<T> gas, ref FlowState<T> main, in T sideFlow, in T sideEnthalpy)
        where T : struct, IScalar<T>
    {
        var total = main.W + sideFlow;
        main.H = (main.W * main.H + sideFlow * sideEnthalpy) / total;
        main.Y = main.W * main.Y / total;
        main.W = total;
        gas.CompleteFromEnthalpy(ref main);
    }
}
