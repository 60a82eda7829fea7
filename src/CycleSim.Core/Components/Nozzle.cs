using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>Convergent propelling nozzle, choked or not.</summary>
public static class Nozzle
{
    /// <summary>Below this drop of enthalpy (J/kg; 14 m/s) the jet speed goes on as a tangent instead of a root.</summary>
    private const double TangentBelow = 100.0;

    /// <summary>What leaves the nozzle, per square metre of effective throat.</summary>
    public struct Jet<T>
        where T : struct, IScalar<T>
    {
        /// <summary>Speed in the exit plane, m/s, before the velocity coefficient.</summary>
        public T Speed;

        /// <summary>Mass flow per effective area, kg/(s m2).</summary>
        public T Flux;

        /// <summary>Static pressure in the exit plane, Pa.</summary>
        public T ExitPressure;

        /// <summary>Static temperature in the exit plane, K.</summary>
        public T ExitTemperature;

        /// <summary>Whether the throat is sonic.</summary>
        public bool Choked;
    }

    /// <summary>
    /// Expands a stream to the ambient pressure or to the sonic throat, whichever comes first, with an isentropic
    /// nozzle efficiency (1: loss-free up to the throat).
    /// </summary>
    public static void Expand<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in T ambientPressure,
        double efficiency,
        out Jet<T> jet
    )
        where T : struct, IScalar<T>
    {
        Unsafe.SkipInit(out jet);
        var r = gas.GasConstant(inlet.Y);

        gas.Sonic(inlet.H, inlet.Tt, inlet.Y, out var sonic, out var sonicEnthalpy, out var phiThroat);
        if (efficiency < 1.0)
            phiThroat = gas.EntropyAtEnthalpy(inlet.H - (inlet.H - sonicEnthalpy) / efficiency, inlet.Y);
        var critical = inlet.P * T.Exp((phiThroat - inlet.Phi) / r);

        jet.Choked = critical.Value > ambientPressure.Value;
        if (jet.Choked)
        {
            jet.ExitPressure = critical;
            jet.ExitTemperature = sonic;
            jet.Speed = T.Sqrt((inlet.H - sonicEnthalpy) * 2.0);
        }
        else
        {
            jet.ExitPressure = ambientPressure;
            var phiExit = inlet.Phi + r * T.Log(ambientPressure / inlet.P);
            gas.AtEntropy(phiExit, inlet.Y, out var ideal, out jet.ExitTemperature);
            var drop = (inlet.H - ideal) * efficiency;
            if (efficiency < 1.0)
                gas.AtEnthalpy(inlet.H - drop, inlet.Y, out jet.ExitTemperature, out _);
            jet.Speed = SpeedFromDrop(drop);
        }

        jet.Flux = jet.ExitPressure / (r * jet.ExitTemperature) * jet.Speed;
    }

    /// <summary>Gross thrust, N: velocity coefficient on the momentum, exit-plane pressure on the effective area.</summary>
    public static T GrossThrust<T>(in Jet<T> jet, in T massFlow, in T ambientPressure, double velocityCoefficient)
        where T : struct, IScalar<T> =>
        massFlow * (jet.Speed * velocityCoefficient + (jet.ExitPressure - ambientPressure) / jet.Flux);

    // A trial point of the solver may have less total pressure than the ambient; the tangent keeps the equations defined
    // and points the way back. Converged points on the tangent are refused by the caller.
    private static T SpeedFromDrop<T>(in T drop)
        where T : struct, IScalar<T>
    {
        if (drop.Value >= TangentBelow)
            return T.Sqrt(drop * 2.0);
        var slope = 1.0 / Math.Sqrt(2.0 * TangentBelow);
        return (drop + TangentBelow) * slope;
    }
}
