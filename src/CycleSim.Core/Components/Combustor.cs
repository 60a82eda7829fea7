using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>Combustor: heats the air to a given exit temperature and tells the fuel flow that takes.</summary>
public static class Combustor
{
    /// <summary>
    /// Outlet state for exit temperature <paramref name="t4"/> (K), pressure ratio and combustion efficiency, and the
    /// fuel flow (kg/s). One enthalpy balance with formation enthalpies, fuel entering at 298.15 K.
    /// </summary>
    public static void Burn<T>(
        in GasRelations<T> gas,
        in FlowState<T> air,
        in T t4,
        in T pressureRatio,
        double efficiency,
        out FlowState<T> burnt,
        out T fuelFlow
    )
        where T : struct, IScalar<T>
    {
        var model = gas.Model;
        var q = gas.SpecificHumidity;
        var f = model.FuelForTemperature(air.Tt.Value, air.H.Value, t4.Value, q.Value, efficiency, out var d);
        var ratio = T.Chain(f, air.H, d.H3, t4, d.T4, q, d.Q) + T.Chain(0.0, air.Tt, d.T3);
        fuelFlow = air.W * ratio;
        Unsafe.SkipInit(out burnt);
        burnt.W = model.CountsFuelMass ? air.W + fuelFlow : air.W;
        burnt.P = air.P * pressureRatio;
        burnt.Tt = t4;
        burnt.Y = T.Chain(model.BurntFraction(f, out var slope), ratio, slope);
        gas.CompleteFromTemperature(ref burnt);
    }
}
