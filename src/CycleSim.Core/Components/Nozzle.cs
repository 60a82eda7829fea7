using System.Runtime.CompilerServices;
using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>Propelling nozzle, convergent or convergent-divergent, choked or not.</summary>
public static class Nozzle
{
    /// <summary>Below this drop of enthalpy (J/kg; 14 m/s) the jet speed goes on as a tangent instead of a root.</summary>
    private const double TangentBelow = 100.0;

    /// <summary>What leaves the nozzle, per square metre of effective area.</summary>
    public struct Jet<T>
        where T : struct, IScalar<T>
    {
        /// <summary>Speed in the exit plane, m/s, before the velocity coefficient.</summary>
        public T Speed;

        /// <summary>Mass flow per effective throat area, kg/(s m2).</summary>
        public T Flux;

        /// <summary>Mass flow per effective exit area, kg/(s m2): that of the throat where the nozzle is convergent.</summary>
        public T ExitFlux;

        /// <summary>Static pressure in the exit plane, Pa.</summary>
        public T ExitPressure;

        /// <summary>Static temperature in the exit plane, K.</summary>
        public T ExitTemperature;

        /// <summary>Whether the throat is sonic.</summary>
        public bool Choked;
    }

    /// <summary>Expands a stream through the nozzle to the ambient pressure, or as far as its throat and exit let it.</summary>
    /// <param name="gas">the gas of the path</param>
    /// <param name="inlet">total state ahead of the nozzle</param>
    /// <param name="ambientPressure">Pa</param>
    /// <param name="efficiency">
    /// isentropic efficiency, 1: loss-free up to the throat (convergent) or the exit but for a shock; 1 where
    /// <paramref name="areaRatio"/> is above 1
    /// </param>
    /// <param name="areaRatio">exit over throat area, 1 for a convergent nozzle</param>
    /// <param name="jet">what leaves</param>
    public static void Expand<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in T ambientPressure,
        double efficiency,
        double areaRatio,
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
        if (!jet.Choked)
        {
            jet.ExitPressure = ambientPressure;
            var phiExit = inlet.Phi + r * T.Log(ambientPressure / inlet.P);
            gas.AtEntropy(phiExit, inlet.Y, out var ideal, out jet.ExitTemperature);
            var drop = (inlet.H - ideal) * efficiency;
            if (efficiency < 1.0)
                gas.AtEnthalpy(inlet.H - drop, inlet.Y, out jet.ExitTemperature, out _);
            jet.Speed = SpeedFromDrop(drop);
            jet.ExitFlux = jet.ExitPressure / (r * jet.ExitTemperature) * jet.Speed;
            jet.Flux = jet.ExitFlux;
            if (areaRatio <= 1.0)
                return;
            jet.Flux *= areaRatio;
        }

        var sonicSpeed = T.Sqrt((inlet.H - sonicEnthalpy) * 2.0);
        var sonicFlux = critical / (r * sonic) * sonicSpeed;
        // The divergent part slows a subsonic stream down again: its throat chokes while the exit is still subsonic.
        if (!jet.Choked && jet.Flux.Value <= sonicFlux.Value)
            return;
        jet.Choked = true;
        jet.Flux = sonicFlux;
        if (areaRatio > 1.0)
            Diverge(gas, inlet, ambientPressure, areaRatio, ref jet);
        else
        {
            jet.ExitPressure = critical;
            jet.ExitTemperature = sonic;
            jet.Speed = sonicSpeed;
            jet.ExitFlux = sonicFlux;
        }
    }

    /// <summary>Gross thrust, N: momentum of the jet's real speed, exit-plane pressure on the effective area.</summary>
    /// <param name="jet">what leaves</param>
    /// <param name="speed">the jet's speed times its velocity coefficient, m/s</param>
    /// <param name="massFlow">kg/s</param>
    /// <param name="ambientPressure">Pa</param>
    public static T GrossThrust<T>(in Jet<T> jet, in T speed, in T massFlow, in T ambientPressure)
        where T : struct, IScalar<T> => massFlow * (speed + (jet.ExitPressure - ambientPressure) / jet.ExitFlux);

    /// <summary>
    /// Exit plane behind a sonic throat: supersonic to the area ratio, or subsonic at ambient pressure behind a normal shock in
    /// the divergent part. The one with more momentum p + G V holds: the two are equal when the shock stands in the exit,
    /// for momentum does not change across it. Flow that leaves the wall earlier is not modelled.
    /// </summary>
    private static void Diverge<T>(
        in GasRelations<T> gas,
        in FlowState<T> inlet,
        in T ambientPressure,
        double areaRatio,
        ref Jet<T> jet
    )
        where T : struct, IScalar<T>
    {
        jet.ExitFlux = jet.Flux / areaRatio;
        Supersonic(gas, inlet, jet.ExitFlux, out jet.Speed, out jet.ExitTemperature, out jet.ExitPressure);
        if (ambientPressure.Value <= jet.ExitPressure.Value)
            return;
        BehindShock(gas, inlet, jet.ExitFlux, ambientPressure, out var speed, out var temperature);
        var free = jet.ExitPressure.Value + jet.ExitFlux.Value * jet.Speed.Value;
        if (ambientPressure.Value + jet.ExitFlux.Value * speed.Value <= free)
            return;
        jet.Speed = speed;
        jet.ExitTemperature = temperature;
        jet.ExitPressure = ambientPressure;
    }

    /// <summary>Supersonic state of an isentropic stream that carries a flow per area (kg/(s m2)) below its sonic one.</summary>
    private static void Supersonic<T>(
        in GasRelations<T> gas,
        in FlowState<T> s,
        in T flux,
        out T speed,
        out T temperature,
        out T pressure
    )
        where T : struct, IScalar<T>
    {
        var r = gas.GasConstant(s.Y);
        var q = gas.SpecificHumidity.Value;
        gas.Model.AtTemperature(Gas.GasModel.LowestTemperature, s.Y.Value, q, out var coldest);
        // Density times speed falls with the speed, by density (1 - Mach2); the root lies between the two ends kept here.
        var slow = 0.5 * Math.Sqrt(r.Value * s.Tt.Value);
        var fast = Math.Sqrt(2.0 * (s.H.Value - coldest.H));
        var v = 0.5 * (slow + fast);
        double slope = -1.0;
        for (var i = 0; i < 60; i++)
        {
            gas.Model.AtEnthalpy(s.H.Value - 0.5 * v * v, s.Y.Value, q, out var p);
            var sound2 = p.Cp / (p.Cp - r.Value) * r.Value * p.T;
            var density = s.P.Value * Math.Exp((p.Phi - s.Phi.Value) / r.Value) / (r.Value * p.T);
            var excess = density * v - flux.Value;
            slope = density * (1.0 - v * v / sound2);
            var supersonic = v * v > sound2;
            if (supersonic && excess < 0.0)
                fast = v;
            else
                slow = v;
            var next = v - excess / slope;
            if (!supersonic || !(next > slow && next < fast))
                next = 0.5 * (slow + fast);
            var settled = Math.Abs(next - v) < 1e-10 * v;
            v = next;
            if (settled)
                break;
        }

        // One more step in T gives the derivatives.
        var start = T.Constant(v);
        gas.AtEnthalpy(s.H - 0.5 * v * v, s.Y, out var t, out var phi);
        var at = s.P * T.Exp((phi - s.Phi) / r);
        speed = start - (at / (r * t) * v - flux) / slope;
        gas.AtEnthalpy(s.H - speed * speed * 0.5, s.Y, out temperature, out var phiAtSpeed);
        pressure = s.P * T.Exp((phiAtSpeed - s.Phi) / r);
    }

    /// <summary>Subsonic state of a stream of known flow per area (kg/(s m2)) at a static pressure (Pa).</summary>
    private static void BehindShock<T>(
        in GasRelations<T> gas,
        in FlowState<T> s,
        in T flux,
        in T staticPressure,
        out T speed,
        out T temperature
    )
        where T : struct, IScalar<T>
    {
        var r = gas.GasConstant(s.Y);
        var perKelvin = flux.Value * r.Value / staticPressure.Value;
        // h(T) + V(T)2 / 2 rises and bends upwards: from the total temperature Newton comes down on its root.
        var guess = s.Tt.Value;
        double slope = 1.0;
        for (var i = 0; i < 30; i++)
        {
            gas.Model.AtTemperature(guess, s.Y.Value, gas.SpecificHumidity.Value, out var p);
            var v = perKelvin * guess;
            slope = p.Cp + perKelvin * v;
            var step = (p.H + 0.5 * v * v - s.H.Value) / slope;
            guess = Math.Max(guess - step, Gas.GasModel.LowestTemperature);
            if (Math.Abs(step) < 1e-10 * guess)
                break;
        }

        var start = T.Constant(guess);
        gas.AtTemperature(start, s.Y, out var h, out _);
        var at = flux * r * guess / staticPressure;
        temperature = start - (h + at * at * 0.5 - s.H) / slope;
        speed = flux * r * temperature / staticPressure;
    }

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
