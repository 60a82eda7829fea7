using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>Balances every component of a pass and the engine as a whole.</summary>
internal static class PointAudit
{
    public static Audit Draw(SizedEngine engine, FlowPath<Plain> p, GasRelations<Plain> gas)
    {
        var lines = new List<AuditLine>();
        var whole = new Balance("engine");
        var zeroSpeed = Entropy(gas, p.FreeStream);
        whole.In(p.FreeStream.W.Value, p.FreeStream.H.Value, zeroSpeed);

        lines.Add(Through("inlet", gas, [p.FreeStream], [p.FanFace], 0.0));
        if (engine.HasFan)
        {
            var power =
                p.FanTip.W.Value * (p.FanTip.H.Value - p.FanFace.H.Value)
                + p.FanHub.W.Value * (p.FanHub.H.Value - p.FanFace.H.Value);
            lines.Add(Through("fan", gas, [p.FanFace], [p.FanTip, p.FanHub], power));
        }

        var spoolPower = new double[engine.Spools.Length];
        var gearLoss = 0.0;
        if (engine.Fan is { } f)
        {
            var atFan =
                p.FanTip.W.Value * p.FanTip.H.Value
                + p.FanHub.W.Value * p.FanHub.H.Value
                - p.FanFace.W.Value * p.FanFace.H.Value;
            spoolPower[f.Spool] += atFan / engine.Definition.Fan!.GearEfficiency;
            gearLoss = spoolPower[f.Spool] - atFan;
        }

        for (var k = 0; k < engine.Compressors.Length; k++)
        {
            var upstream =
                k > 0 ? p.CompressorDelivery[k - 1]
                : engine.HasFan ? p.FanHub
                : p.FanFace;
            List<FlowState<Plain>> leaving = [p.CompressorDelivery[k]];
            for (var i = 0; i < engine.Ports.Length; i++)
                if (engine.Ports[i].Compressor == k)
                    leaving.Add(PortState(engine, p, gas, i));
            var power = Power(engine, p, k);
            spoolPower[engine.Compressors[k].Spool] += power;
            lines.Add(Through(engine.Compressors[k].Name, gas, [upstream], leaving, power));
        }

        lines.Add(Combustor(engine, p, gas, whole));
        for (var k = 0; k < engine.Turbines.Length; k++)
        {
            var turbine = engine.Turbines[k];
            List<FlowState<Plain>> entering = [k == 0 ? p.CombustorExit : p.TurbineOutlet[k - 1]];
            for (var i = 0; i < engine.Ports.Length; i++)
                if (engine.Ports[i].Turbine == k)
                    entering.Add(PortState(engine, p, gas, i));
            var spool = engine.Spools[turbine.Spool];
            var offtake = p.Inputs[engine.Layout.PowerOfftake(turbine.Spool)].Value;
            var power = (spoolPower[turbine.Spool] + offtake) / spool.MechanicalEfficiency;
            lines.Add(Through(turbine.Definition.Name, gas, entering, [p.TurbineOutlet[k]], -power));
            whole.Power(-offtake - power * (1.0 - spool.MechanicalEfficiency));
            if (engine.Fan?.Spool == turbine.Spool)
                whole.Power(-gearLoss);
        }

        var mixes = engine.Definition.Mixer is not null;
        lines.Add(Through("core duct", gas, [p.TurbineOutlet[^1]], [p.CoreExit], 0.0));
        Leave(whole, gas, mixes ? p.Mixed : p.CoreExit);
        if (engine.HasFan)
        {
            List<FlowState<Plain>> entering = [p.FanTip];
            for (var i = 0; i < engine.Ports.Length; i++)
                if (engine.Ports[i].Port.To == AirDestination.BypassDuct)
                    entering.Add(PortState(engine, p, gas, i));
            List<FlowState<Plain>> leaving = [p.BypassExit];
            for (var i = 0; i < engine.Ports.Length; i++)
                if (engine.Ports[i].FromFan)
                    leaving.Add(PortState(engine, p, gas, i));
            lines.Add(Through("bypass duct", gas, entering, leaving, 0.0));
            if (mixes)
                lines.Add(Through("mixer", gas, [p.CoreExit, p.BypassExit], [p.Mixed], 0.0));
            else
                Leave(whole, gas, p.BypassExit);
        }

        for (var i = 0; i < engine.Ports.Length; i++)
            if (engine.Ports[i].Port.To == AirDestination.Overboard)
                Leave(whole, gas, PortState(engine, p, gas, i));
        return new Audit(lines, whole.Close());
    }

    /// <summary>Power of core compressor k from its streams, W.</summary>
    public static double Power(SizedEngine engine, FlowPath<Plain> p, int k)
    {
        var inlet = p.CompressorInlet[k];
        var power = p.CompressorDelivery[k].W.Value * p.CompressorDelivery[k].H.Value - inlet.W.Value * inlet.H.Value;
        for (var i = 0; i < engine.Ports.Length; i++)
            if (engine.Ports[i].Compressor == k)
                power += p.PortFlow[i].Value * p.PortEnthalpy[i].Value;
        return power;
    }

    private static AuditLine Combustor(SizedEngine engine, FlowPath<Plain> p, in GasRelations<Plain> gas, Balance whole)
    {
        var air = p.CombustorInlet;
        var burnt = p.CombustorExit;
        var model = engine.Definition.Gas;
        var heat = model.FuelEnthalpyFlow(p.FuelFlow.Value, engine.Definition.Combustor.Efficiency);
        // The constant gas has no enthalpy of formation: the heat it is given is by definition what it takes up.
        if (double.IsNaN(heat))
            heat = burnt.W.Value * burnt.H.Value - air.W.Value * air.H.Value;
        var mass = model.CountsFuelMass ? p.FuelFlow.Value : 0.0;
        whole.Fuel(mass, heat);
        return new Balance("combustor")
            .In(air.W.Value, air.H.Value, Entropy(gas, air))
            .Fuel(mass, heat)
            .Out(burnt.W.Value, burnt.H.Value, Entropy(gas, burnt))
            .Close();
    }

    private static AuditLine Through(
        string name,
        in GasRelations<Plain> gas,
        IEnumerable<FlowState<Plain>> entering,
        IEnumerable<FlowState<Plain>> leaving,
        double power
    )
    {
        var balance = new Balance(name).Power(power);
        foreach (var s in entering)
            balance.In(s.W.Value, s.H.Value, Entropy(gas, s));
        foreach (var s in leaving)
            balance.Out(s.W.Value, s.H.Value, Entropy(gas, s));
        return balance.Close();
    }

    private static void Leave(Balance whole, in GasRelations<Plain> gas, in FlowState<Plain> s) =>
        whole.Out(s.W.Value, s.H.Value, Entropy(gas, s));

    /// <summary>The air of a port as it leaves.</summary>
    public static FlowState<Plain> PortState(SizedEngine engine, FlowPath<Plain> p, in GasRelations<Plain> gas, int i)
    {
        var port = engine.Ports[i];
        if (port.FromFan)
            return p.FanTip with { W = p.PortFlow[i] };
        Components.Compressor.AtPort(
            gas,
            p.CompressorInlet[port.Compressor],
            p.CompressorDelivery[port.Compressor],
            port.Port.WorkFraction,
            out var state
        );
        state.W = p.PortFlow[i];
        return state;
    }

    private static double Entropy(in GasRelations<Plain> gas, in FlowState<Plain> s) =>
        s.Phi.Value - gas.GasConstant(s.Y).Value * Math.Log(s.P.Value);
}
