using CycleSim.Components;
using CycleSim.Scalars;

namespace CycleSim.Engine;

/// <summary>
/// Fixes the size of an engine at its design point by running the ordinary flow path once in station order and, wherever
/// it meets a component, first setting that component's scale so that the design value comes out.
/// </summary>
public static class Sizing
{
    /// <summary>Sizes an engine.</summary>
    /// <exception cref="SizingException">
    /// The design point contradicts itself: the turbines are asked for more work than the gas holds, combustor exit below
    /// compressor delivery, a nozzle without pressure to expand, cooling beyond the flow.
    /// </exception>
    public static SizedEngine Size(EngineDefinition definition)
    {
        var design = definition.Design;
        var massFlow = design.MassFlow > 0.0 ? design.MassFlow : 100.0;
        // With a thrust given, the size follows: thrust goes with mass flow but for offtakes given in W or kg/s.
        for (var i = 0; i < 50; i++)
        {
            var engine = SizeForFlow(definition, massFlow);
            if (design.MassFlow > 0.0)
                return engine;
            var ratio = design.NetThrust / engine.DesignThrust;
            if (!(ratio > 0.0))
                throw new SizingException(
                    $"{definition.Name}: at the design point the engine gives no net thrust "
                        + $"({engine.DesignThrust / massFlow:F0} N per kg/s), so no size gives {design.NetThrust:F0} N."
                );
            massFlow *= ratio;
            if (Math.Abs(ratio - 1.0) < 1e-13)
                return engine;
        }

        throw new SizingException(
            $"{definition.Name}: no mass flow gives {design.NetThrust:F0} N at the design point."
        );
    }

    private static SizedEngine SizeForFlow(EngineDefinition definition, double massFlow)
    {
        var t4 = definition.Design.CombustorExitTemperature;
        if (t4 > 0.0)
            return Run(definition, massFlow, t4);

        // T41 falls with T4 one for one at most: a secant from two close guesses settles in a few steps.
        var wanted = definition.Design.RotorInletTemperature;
        double a = wanted,
            b = wanted * 1.03;
        var fa = Run(definition, massFlow, a).DesignRotorInlet - wanted;
        for (var i = 0; i < 30; i++)
        {
            var engine = Run(definition, massFlow, b);
            var fb = engine.DesignRotorInlet - wanted;
            if (Math.Abs(fb) < 1e-9 * wanted)
                return engine;
            (a, b, fa) = (b, b - fb * (b - a) / (fb - fa), fb);
        }

        throw new SizingException($"{definition.Name}: no combustor exit temperature gives T41 = {wanted:F0} K.");
    }

    private static SizedEngine Run(EngineDefinition definition, double massFlow, double t4)
    {
        var engine = new SizedEngine(definition)
        {
            DesignInputs = new InputLayout(definition).Defaults(definition, definition.Design.Flight),
            DesignMassFlow = massFlow,
        };
        var path = new FlowPath<Plain>(engine, sizing: true);
        for (var i = 0; i < engine.DesignInputs.Length; i++)
            path.Inputs[i] = new Plain(engine.DesignInputs[i]);
        var unknowns = new double[engine.UnknownCount];
        Array.Fill(unknowns, 1.0, 0, engine.Spools.Length);
        var position = engine.Spools.Length;
        if (engine.Fan is { } fan)
            unknowns[position++] = fan.DesignBeta;
        foreach (var compressor in engine.Compressors)
            unknowns[position++] = compressor.DesignBeta;
        unknowns[^1] = t4 / 1000.0;
        for (var i = 0; i < unknowns.Length; i++)
            path.Unknowns[i] = new Plain(unknowns[i]);
        path.Evaluate();
        DesignChecks.CheckNozzles(definition, path);

        engine.DesignUnknowns = unknowns;
        engine.DesignThrust = path.NetThrust.Value;
        engine.DesignRotorInlet = path.TurbineInlet[0].Tt.Value;
        return engine;
    }

    internal static void ScaleFan<T>(SizedEngine engine, in GasRelations<T> gas, in FlowState<T> face)
        where T : struct, IScalar<T>
    {
        var (plainGas, inlet) = InPlain(gas, face);
        var definition = engine.Definition.Fan!;
        var tip = Isentropic(plainGas, inlet, definition.PressureRatio, definition.Efficiency);
        var hub =
            definition.HubPressureRatio > 1.0
                ? Isentropic(plainGas, inlet, definition.HubPressureRatio, definition.HubEfficiency)
                : tip;
        engine.FanHubRise = (definition.HubPressureRatio - 1.0) / (definition.PressureRatio - 1.0);
        engine.FanHubEfficiency = hub / tip;
        Scale(engine.Fan!, plainGas, inlet, engine.DesignMassFlow, definition.PressureRatio, tip);
    }

    internal static void ScaleCompressor<T>(SizedEngine engine, in GasRelations<T> gas, int k, in FlowState<T> upstream)
        where T : struct, IScalar<T>
    {
        var (plainGas, inlet) = InPlain(gas, upstream);
        var definition = engine.Definition.Compressors[k];
        inlet.P = new Plain(inlet.P.Value * (1.0 - definition.InletDuctLoss));
        var flow = k == 0 ? engine.DesignMassFlow / (1.0 + engine.Definition.Design.BypassRatio) : inlet.W.Value;
        var efficiency = Isentropic(plainGas, inlet, definition.PressureRatio, definition.Efficiency);
        Scale(engine.Compressors[k], plainGas, inlet, flow, definition.PressureRatio, efficiency);
    }

    internal static void ScaleMixer<T>(
        SizedEngine engine,
        in GasRelations<T> gas,
        MixerDefinition mixer,
        in FlowState<T> core,
        in FlowState<T> bypass
    )
        where T : struct, IScalar<T>
    {
        var (plainGas, coreState) = InPlain(gas, core);
        var (_, bypassState) = InPlain(gas, bypass);
        var (area, staticPressure) = Mixer.AtMach(plainGas, coreState, mixer.CoreMach);
        DesignChecks.CheckMixer(engine.Definition, mixer, coreState.P.Value, bypassState.P.Value, staticPressure);
        engine.MixerCoreArea = area;
        engine.MixerBypassArea = Mixer.AreaAtPressure(plainGas, bypassState, staticPressure);
    }

    internal static void ScaleTurbineWork<T>(
        SizedEngine engine,
        in GasRelations<T> gas,
        int k,
        in FlowState<T> inlet,
        double work
    )
        where T : struct, IScalar<T>
    {
        var (plainGas, plainInlet) = InPlain(gas, inlet);
        var turbine = engine.Turbines[k];
        DesignChecks.CheckTurbineWork(engine.Definition, k, plainGas, plainInlet, work);
        turbine.DesignWork = work;
        turbine.DesignEfficiency = turbine.Definition.Efficiency.Polytropic
            ? Turbine.IsentropicFromPolytropic(plainGas, plainInlet, work, turbine.Definition.Efficiency.Value)
            : turbine.Definition.Efficiency.Value;
    }

    private static double Isentropic(
        in GasRelations<Plain> gas,
        in FlowState<Plain> inlet,
        double pressureRatio,
        DesignEfficiency efficiency
    ) =>
        efficiency.Polytropic
            ? Compressor.IsentropicFromPolytropic(gas, inlet, pressureRatio, efficiency.Value)
            : efficiency.Value;

    private static void Scale(
        ScaledCompressor compressor,
        in GasRelations<Plain> gas,
        in FlowState<Plain> inlet,
        double flow,
        double pressureRatio,
        double efficiency
    )
    {
        var rt = Math.Sqrt(gas.GasConstant(inlet.Y).Value * inlet.Tt.Value);
        compressor.Map.Read(1.0, compressor.DesignBeta, out var m);
        compressor.SpeedReference = rt;
        compressor.DesignFlow = flow * rt / inlet.P.Value;
        compressor.FlowScale = compressor.DesignFlow / m.Value[0];
        compressor.RiseScale = (pressureRatio - 1.0) / m.Value[1];
        compressor.EfficiencyScale = efficiency / m.Value[2];
    }

    private static (GasRelations<Plain> Gas, FlowState<Plain> State) InPlain<T>(
        in GasRelations<T> gas,
        in FlowState<T> s
    )
        where T : struct, IScalar<T> =>
        (
            new GasRelations<Plain>(gas.Model, new Plain(gas.SpecificHumidity.Value)),
            new FlowState<Plain>
            {
                W = new Plain(s.W.Value),
                P = new Plain(s.P.Value),
                Tt = new Plain(s.Tt.Value),
                H = new Plain(s.H.Value),
                Phi = new Plain(s.Phi.Value),
                Y = new Plain(s.Y.Value),
            }
        );
}

/// <summary>The design point contradicts itself; the message says where.</summary>
public sealed class SizingException(string message) : Exception(message);
