using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>Free stream and air inlet.</summary>
public static class Inlet
{
    /// <summary>
    /// Total state of the free stream for static pressure (Pa), static temperature (K) and Mach number, and the true
    /// airspeed (m/s). The stream is brought to rest without loss.
    /// </summary>
    public static void FreeStream<T>(
        in GasRelations<T> gas,
        in T staticPressure,
        in T staticTemperature,
        in T mach,
        out FlowState<T> free,
        out T airspeed,
        out T staticEnthalpy
    )
        where T : struct, IScalar<T>
    {
        free = default;
        free.Y = T.Constant(0.0);
        gas.AtTemperature(staticTemperature, free.Y, out staticEnthalpy, out var phi, out var cp);
        var r = gas.GasConstant(free.Y);
        airspeed = mach * T.Sqrt(cp * r / (cp - r) * staticTemperature);
        free.H = staticEnthalpy + airspeed * airspeed * 0.5;
        gas.CompleteFromEnthalpy(ref free);
        free.P = staticPressure * T.Exp((free.Phi - phi) / r);
    }

    /// <summary>
    /// Total pressure behind the inlet from a recovery P2/P0; beyond Mach 1 multiplied by the published recovery of
    /// <see cref="ShockRecovery"/>.
    /// </summary>
    public static T Recovered<T>(in FlowState<T> free, double recovery, in T mach)
        where T : struct, IScalar<T> => free.P * ShockRecovery(mach) * recovery;

    /// <summary>
    /// Total pressure behind an inlet with a ram efficiency: the share of the free stream's kinetic energy that would, in
    /// an ideal compression from the static pressure, give the pressure reached.
    /// </summary>
    public static T RamCompressed<T>(
        in GasRelations<T> gas,
        in FlowState<T> free,
        in T staticPressure,
        in T staticTemperature,
        in T staticEnthalpy,
        double ramEfficiency
    )
        where T : struct, IScalar<T>
    {
        gas.AtTemperature(staticTemperature, free.Y, out _, out var phi);
        var useful = staticEnthalpy + (free.H - staticEnthalpy) * ramEfficiency;
        var phiIdeal = gas.EntropyAtEnthalpy(useful, free.Y);
        return staticPressure * T.Exp((phiIdeal - phi) / gas.GasConstant(free.Y));
    }

    /// <summary>Standard recovery of MIL-E-5008B: 1 to Mach 1, 1 - 0.075 (M - 1)^1.35 to Mach 5.</summary>
    public static T ShockRecovery<T>(in T mach)
        where T : struct, IScalar<T>
    {
        var beyond = mach.Value - 1.0;
        return beyond <= 0.0
            ? T.Constant(1.0)
            : T.Chain(1.0 - 0.075 * Math.Pow(beyond, 1.35), mach, -0.075 * 1.35 * Math.Pow(beyond, 0.35));
    }
}
