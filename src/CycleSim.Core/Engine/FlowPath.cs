using System.Runtime.CompilerServices;
using CycleSim.Components;
using CycleSim.Gas;
using CycleSim.Maps;
using CycleSim.Scalars;

namespace CycleSim.Engine;

/// <summary>
/// One pass through an engine in station order, the way the air goes: from a guess of speeds, map positions and
/// combustor exit temperature to every station and to the relative imbalances that matching brings to zero. The only
/// statement of the engine's equations: sizing, matching, sensitivities and reports all run it.
/// </summary>
/// <remarks>
/// A turbine is asked for the work of its spool, so power balances hold identically and need no unknown; what is left to
/// balance are flows: of each compressor behind the first, of each turbine, of each nozzle. One instance per thread; an
/// evaluation allocates nothing.
/// </remarks>
public sealed class FlowPath<T>
    where T : struct, IScalar<T>
{
    private readonly SizedEngine _engine;
    private readonly GasModel _gas;
    private readonly T[] _spoolPower;
    private readonly T[] _portFlow;
    private readonly T[] _portEnthalpy;
    private readonly bool _sizing;
    private int _residual;

    public FlowPath(SizedEngine engine)
        : this(engine, false) { }

    internal FlowPath(SizedEngine engine, bool sizing)
    {
        _engine = engine;
        _gas = engine.Definition.Gas;
        _sizing = sizing;
        Inputs = new T[engine.Layout.Count];
        Unknowns = new T[engine.UnknownCount];
        Residuals = new T[engine.UnknownCount - 1];
        _spoolPower = new T[engine.Spools.Length];
        _portFlow = new T[engine.Ports.Length];
        _portEnthalpy = new T[engine.Ports.Length];
        CompressorInlet = new FlowState<T>[engine.Compressors.Length];
        CompressorDelivery = new FlowState<T>[engine.Compressors.Length];
        CorrectedSpeed = new T[engine.Compressors.Length + 1];
        TurbineInlet = new FlowState<T>[engine.Turbines.Length];
        TurbineWork = new T[engine.Turbines.Length];
        TurbineOutlet = new FlowState<T>[engine.Turbines.Length];
        ExpansionRatio = new T[engine.Turbines.Length];
        TurbineEfficiency = new T[engine.Turbines.Length];
    }

    /// <summary>Inputs in the order of <see cref="InputLayout"/>; unknowns in the order speeds, positions, T4/1000.</summary>
    public T[] Inputs { get; }

    public T[] Unknowns { get; }

    /// <summary>Relative imbalances of flow, one fewer than the unknowns: the closing condition makes the number equal.</summary>
    public T[] Residuals { get; }

    public FlowState<T> FreeStream,
        FanFace,
        FanTip,
        FanHub,
        BypassExit,
        CombustorExit,
        CoreExit,
        Mixed;

    /// <summary>Core compressors: inlet behind its duct, outlet before and after what is taken at its end.</summary>
    public FlowState<T>[] CompressorInlet { get; }

    public FlowState<T>[] CompressorDelivery { get; }

    /// <summary>Relative corrected speed of the fan (0) and of core compressor k (k + 1).</summary>
    public T[] CorrectedSpeed { get; }

    /// <summary>Turbines: rotor inlet (vane air mixed in), rotor outlet, outlet with rotor air mixed in.</summary>
    public FlowState<T>[] TurbineInlet { get; }

    public FlowState<T>[] TurbineOutlet { get; }

    /// <summary>Work of each turbine, J per kg of its rotor inlet flow.</summary>
    public T[] TurbineWork { get; }

    /// <summary>What enters the combustor.</summary>
    public ref readonly FlowState<T> CombustorInlet => ref CompressorDelivery[^1];

    public T[] ExpansionRatio { get; }

    public T[] TurbineEfficiency { get; }

    /// <summary>Flow and enthalpy of what each port takes, kg/s and J/kg.</summary>
    public ReadOnlySpan<T> PortFlow => _portFlow;

    public ReadOnlySpan<T> PortEnthalpy => _portEnthalpy;

    /// <summary>Power that each spool's turbine gives, W, mechanical losses included.</summary>
    public ReadOnlySpan<T> SpoolPower => _spoolPower;

    public Nozzle.Jet<T> CoreJet,
        BypassJet;

    /// <summary>Performance: N, kg/s, m/s.</summary>
    public T NetThrust,
        InstalledThrust,
        GrossThrustCore,
        GrossThrustBypass,
        RamDrag,
        FuelFlow,
        Airspeed;

    /// <summary>Runs the pass for the current <see cref="Inputs"/> and <see cref="Unknowns"/>.</summary>
    public void Evaluate()
    {
        _residual = 0;
        var gas = new GasRelations<T>(_gas, Inputs[InputLayout.SpecificHumidity]);
        Array.Clear(_spoolPower);
        TakeIn(gas);
        if (_engine.Fan is { } fan)
            RunFan(gas, fan);
        else
            FanHub = FanFace;
        for (var k = 0; k < _engine.Compressors.Length; k++)
            RunCompressor(gas, k);
        RunBypassDuct(gas);
        Burn(gas);
        for (var k = 0; k < _engine.Turbines.Length; k++)
            RunTurbine(gas, k);
        Exhaust(gas);
    }

    /// <summary>Position of the fan (0) or core compressor k (k + 1) on its speed line: 0 choke, 1 surge.</summary>
    public T Position(int index) => Unknowns[BetaOffset + index];

    /// <summary>The value of an output of the last pass, in SI.</summary>
    public T Output(Quantity quantity)
    {
        switch (quantity)
        {
            case Quantity.NetThrust:
                return NetThrust;
            case Quantity.InstalledThrust:
                return InstalledThrust;
            case Quantity.FuelFlow:
                return FuelFlow;
            case Quantity.T4:
                return CombustorExit.Tt;
            case Quantity.T41:
                return TurbineInlet[0].Tt;
            case Quantity.T45:
                return TurbineOutlet[0].Tt;
            case Quantity.T5:
                return TurbineOutlet[^1].Tt;
            case Quantity.N1:
                return Unknowns[0];
            case Quantity.N2:
                return Unknowns[1];
            case Quantity.N3:
                return Unknowns[2];
            case Quantity.Epr:
                return TurbineOutlet[^1].P / FanFace.P;
            case Quantity.P3:
                return CompressorDelivery[^1].P;
            case Quantity.T3:
                return CompressorDelivery[^1].Tt;
            case Quantity.CorrectedN1:
                return CorrectedSpeed[_engine.HasFan ? 0 : 1];
            case Quantity.Lever:
                var control = _engine.Definition.Control;
                return (CorrectedSpeed[_engine.HasFan ? 0 : 1] - control.IdleSpeed)
                    / (control.FullSpeed - control.IdleSpeed);
            default:
                throw new ArgumentOutOfRangeException(nameof(quantity), quantity, "not an output of the flow path");
        }
    }

    private void TakeIn(in GasRelations<T> gas)
    {
        ref var pressure = ref Inputs[InputLayout.Pressure];
        ref var temperature = ref Inputs[InputLayout.Temperature];
        ref var mach = ref Inputs[InputLayout.Mach];
        Inlet.FreeStream(gas, pressure, temperature, mach, out FreeStream, out Airspeed, out var staticEnthalpy);
        FanFace = FreeStream;
        var inlet = _engine.Definition.Inlet;
        FanFace.P = inlet.RamEfficiency is { } ram
            ? Inlet.RamCompressed(gas, FreeStream, pressure, temperature, staticEnthalpy, ram)
            : Inlet.Recovered(FreeStream, inlet.PressureRecovery, mach);
    }

    private void RunFan(in GasRelations<T> gas, ScaledCompressor fan)
    {
        if (_sizing)
            Sizing.ScaleFan(_engine, gas, FanFace);
        Read(gas, fan, 0, FanFace, out var correctedFlow, out var rise, out var efficiency);
        FanFace.W = correctedFlow * FanFace.P / T.Sqrt(gas.GasConstant(FanFace.Y) * FanFace.Tt);
        FreeStream.W = FanFace.W;
        Compressor.Compress(gas, FanFace, rise + 1.0, efficiency, out FanTip);
        Compressor.Compress(
            gas,
            FanFace,
            rise * _engine.FanHubRise + 1.0,
            efficiency * _engine.FanHubEfficiency,
            out FanHub
        );
    }

    private void RunCompressor(in GasRelations<T> gas, int k)
    {
        var compressor = _engine.Compressors[k];
        ref var inlet = ref CompressorInlet[k];
        inlet = k == 0 ? FanHub : CompressorDelivery[k - 1];
        var duct = _engine.Definition.Compressors[k].InletDuctLoss;
        if (_sizing)
            Sizing.ScaleCompressor(_engine, gas, k, inlet);
        Read(gas, compressor, k + 1, inlet, out var correctedFlow, out var rise, out var efficiency);
        if (duct > 0.0)
            inlet.P *= Duct.PressureRatio(duct, correctedFlow / compressor.DesignFlow);
        var mapFlow = correctedFlow * inlet.P / T.Sqrt(gas.GasConstant(inlet.Y) * inlet.Tt);
        if (k == 0)
        {
            inlet.W = mapFlow;
            FanHub.W = mapFlow;
            if (!_engine.HasFan)
            {
                FanFace.W = mapFlow;
                FreeStream.W = mapFlow;
            }
            else
                LoadFanSpool();
        }
        else
            Residuals[_residual++] = inlet.W / mapFlow - 1.0;

        ref var outlet = ref CompressorDelivery[k];
        Compressor.Compress(gas, inlet, rise + 1.0, efficiency, out outlet);
        var power = inlet.W * (outlet.H - inlet.H);
        for (var i = 0; i < _engine.Ports.Length; i++)
        {
            if (_engine.Ports[i].Compressor != k)
                continue;
            TakeAir(i, k, inlet, outlet);
            power -= _portFlow[i] * (outlet.H - _portEnthalpy[i]);
            outlet.W -= _portFlow[i];
        }

        _spoolPower[compressor.Spool] += power;
    }

    private void LoadFanSpool()
    {
        FanTip.W = FanFace.W - FanHub.W;
        var power = FanTip.W * (FanTip.H - FanFace.H) + FanHub.W * (FanHub.H - FanFace.H);
        var gear = _engine.Definition.Fan!.GearEfficiency;
        if (gear < 1.0)
            power /= gear;
        _spoolPower[_engine.Fan!.Spool] += power;
    }

    private void TakeAir(int i, int k, in FlowState<T> inlet, in FlowState<T> outlet)
    {
        var port = _engine.Ports[i].Port;
        var flow = inlet.W * Inputs[_engine.Layout.PortFraction(i)];
        if (port.Scheduled)
            flow *= Opening(CorrectedSpeed[k + 1], port.OpenBelow, port.ShutAbove);
        _portFlow[i] = flow + Inputs[_engine.Layout.PortFlow(i)];
        if (port.WorkFraction >= 1.0)
            _portEnthalpy[i] = outlet.H;
        else
            _portEnthalpy[i] = inlet.H + (outlet.H - inlet.H) * port.WorkFraction;
    }

    /// <summary>Position of a scheduled valve: 1 below, 0 above, a smooth step between.</summary>
    private static T Opening(in T speed, double openBelow, double shutAbove)
    {
        var u = (shutAbove - speed.Value) / (shutAbove - openBelow);
        if (u <= 0.0)
            return T.Constant(0.0);
        return u >= 1.0
            ? T.Constant(1.0)
            : T.Chain(u * u * (3.0 - 2.0 * u), speed, -6.0 * u * (1.0 - u) / (shutAbove - openBelow));
    }

    private void RunBypassDuct(in GasRelations<T> gas)
    {
        if (!_engine.HasFan)
            return;
        BypassExit = FanTip;
        for (var i = 0; i < _engine.Ports.Length; i++)
            if (_engine.Ports[i].FromFan)
            {
                TakeAir(i, -1, FanTip, FanTip);
                BypassExit.W -= _portFlow[i];
            }

        for (var i = 0; i < _engine.Ports.Length; i++)
            if (_engine.Ports[i].Port.To == AirDestination.BypassDuct)
                Duct.Mix(gas, ref BypassExit, _portFlow[i], _portEnthalpy[i]);
        var loss = _engine.Definition.BypassDuctLoss;
        if (loss <= 0.0)
            return;
        var correctedFlow = Duct.CorrectedFlow(gas, BypassExit);
        if (_sizing)
            _engine.BypassDuctFlow = correctedFlow.Value;
        BypassExit.P *= Duct.PressureRatio(loss, correctedFlow / _engine.BypassDuctFlow);
    }

    private void Burn(in GasRelations<T> gas)
    {
        ref var air = ref CompressorDelivery[^1];
        var combustor = _engine.Definition.Combustor;
        var correctedFlow = Duct.CorrectedFlow(gas, air);
        if (_sizing)
            _engine.CombustorFlow = correctedFlow.Value;
        var pressureRatio = Duct.PressureRatio(combustor.PressureLoss, correctedFlow / _engine.CombustorFlow);
        var t4 = Unknowns[^1] * 1000.0;
        Combustor.Burn(gas, air, t4, pressureRatio, combustor.Efficiency, out CombustorExit, out FuelFlow);
        if (_sizing)
            DesignChecks.CheckCombustor(_engine.Definition, air.W.Value, air.Tt.Value, t4.Value, FuelFlow.Value);
    }

    private void RunTurbine(in GasRelations<T> gas, int k)
    {
        var turbine = _engine.Turbines[k];
        var spool = turbine.Spool;
        ref var inlet = ref TurbineInlet[k];
        inlet = k == 0 ? CombustorExit : TurbineOutlet[k - 1];
        MixReturning(gas, ref inlet, k, AirDestination.Vane);
        var duct = turbine.Definition.InletDuctLoss;
        var correctedFlow = Duct.CorrectedFlow(gas, inlet);
        if (duct > 0.0)
        {
            if (_sizing)
                turbine.DesignFlow = correctedFlow.Value;
            var pressureRatio = Duct.PressureRatio(duct, correctedFlow / turbine.DesignFlow);
            inlet.P *= pressureRatio;
            correctedFlow /= pressureRatio;
        }

        var definition = _engine.Spools[spool];
        _spoolPower[spool] =
            (_spoolPower[spool] + Inputs[_engine.Layout.PowerOfftake(spool)]) / definition.MechanicalEfficiency;
        var work = _spoolPower[spool] / inlet.W;
        if (_sizing)
            Sizing.ScaleTurbineWork(_engine, gas, k, inlet, work.Value);

        // U / sqrt(2 dh) over its design value.
        var velocityRatio = Unknowns[spool] / T.Sqrt(T.Max(work / turbine.DesignWork, T.Constant(1e-3)));
        TurbineEfficiency[k] =
            TurbineCharacteristic.EfficiencyRatio(velocityRatio, turbine.Definition.BestVelocityRatio)
            * Inputs[_engine.Layout.TurbineEfficiency(k)]
            * turbine.DesignEfficiency;
        var capacityFactor = Inputs[_engine.Layout.TurbineFlow(k)];
        if (turbine.Definition.ReynoldsExponent > 0.0)
        {
            var reynolds = Reynolds.Index(inlet);
            if (_sizing)
                turbine.DesignReynolds = reynolds.Value;
            Reynolds.Apply(
                TurbineEfficiency[k],
                reynolds / turbine.DesignReynolds,
                turbine.Definition.ReynoldsExponent,
                out TurbineEfficiency[k],
                out var flow
            );
            capacityFactor *= flow;
        }

        Turbine.Expand(gas, inlet, work, TurbineEfficiency[k], out TurbineOutlet[k], out ExpansionRatio[k]);
        TurbineWork[k] = work;

        var choked = TurbineCharacteristic.Capacity(ExpansionRatio[k], turbine.CriticalRatio);
        if (_sizing)
            turbine.Capacity = correctedFlow.Value / choked.Value;
        Residuals[_residual++] = correctedFlow / (choked * capacityFactor * turbine.Capacity) - 1.0;

        MixReturning(gas, ref TurbineOutlet[k], k, AirDestination.Rotor);
    }

    private void MixReturning(in GasRelations<T> gas, ref FlowState<T> stream, int turbine, AirDestination destination)
    {
        var flow = T.Constant(0.0);
        var enthalpyFlow = T.Constant(0.0);
        var any = false;
        for (var i = 0; i < _engine.Ports.Length; i++)
        {
            var port = _engine.Ports[i];
            if (port.Port.To != destination || port.Turbine != turbine)
                continue;
            flow += _portFlow[i];
            enthalpyFlow += _portFlow[i] * _portEnthalpy[i];
            any = true;
        }

        if (any && flow.Value > 0.0)
            Duct.Mix(gas, ref stream, flow, enthalpyFlow / flow);
    }

    private void Exhaust(in GasRelations<T> gas)
    {
        var definition = _engine.Definition;
        ref var ambient = ref Inputs[InputLayout.Pressure];
        CoreExit = TurbineOutlet[^1];
        if (definition.CoreDuctLoss > 0.0)
        {
            var correctedFlow = Duct.CorrectedFlow(gas, CoreExit);
            if (_sizing)
                _engine.CoreDuctFlow = correctedFlow.Value;
            CoreExit.P *= Duct.PressureRatio(definition.CoreDuctLoss, correctedFlow / _engine.CoreDuctFlow);
        }

        RamDrag = FanFace.W * Airspeed;
        if (definition.Mixer is { } mixer)
        {
            Mix(gas, mixer, ambient);
            GrossThrustBypass = T.Constant(0.0);
        }
        else
        {
            GrossThrustCore = Leave(gas, CoreExit, definition.CoreNozzle, ambient, out CoreJet, out var flow);
            if (_sizing)
                _engine.CoreNozzleArea = flow.Value;
            Residuals[_residual++] = flow / (Inputs[_engine.Layout.CoreNozzleArea] * _engine.CoreNozzleArea) - 1.0;
            GrossThrustBypass = T.Constant(0.0);
            if (_engine.HasFan)
            {
                GrossThrustBypass = Leave(gas, BypassExit, definition.BypassNozzle, ambient, out BypassJet, out flow);
                if (_sizing)
                    _engine.BypassNozzleArea = flow.Value;
                Residuals[_residual++] =
                    flow / (Inputs[_engine.Layout.BypassNozzleArea] * _engine.BypassNozzleArea) - 1.0;
            }
        }

        NetThrust = GrossThrustCore + GrossThrustBypass - RamDrag;
        Install(gas, ambient);
    }

    private void Install(in GasRelations<T> gas, in T ambient)
    {
        InstalledThrust = NetThrust;
        var nacelle = _engine.Definition.Nacelle;
        if (nacelle.ScrubbingLoss > 0.0)
            InstalledThrust -= GrossThrustBypass * nacelle.ScrubbingLoss;
        if (nacelle.DragArea <= 0.0)
            return;
        var density = ambient / (gas.GasConstant(FreeStream.Y) * Inputs[InputLayout.Temperature]);
        InstalledThrust -= density * Airspeed * Airspeed * (0.5 * nacelle.DragArea);
    }

    /// <summary>Expands a stream through its nozzle: gross thrust, and the geometric throat area that the flow needs.</summary>
    private static T Leave(
        in GasRelations<T> gas,
        in FlowState<T> stream,
        NozzleDefinition nozzle,
        in T ambient,
        out Nozzle.Jet<T> jet,
        out T area
    )
    {
        Nozzle.Expand(gas, stream, ambient, nozzle.Efficiency, nozzle.ExitAreaRatio, out jet);
        // Coefficients that are constants stay out of the arithmetic with derivatives.
        area = stream.W / jet.Flux;
        if (nozzle.DischargeCurve is { } discharge)
            area /= discharge.At(stream.P / ambient);
        else if (nozzle.DischargeCoefficient < 1.0)
            area /= nozzle.DischargeCoefficient;
        var speed = nozzle.VelocityCurve is { } velocity
            ? jet.Speed * velocity.At(stream.P / ambient)
            : jet.Speed * nozzle.VelocityCoefficient;
        return Nozzle.GrossThrust(jet, speed, stream.W, ambient);
    }

    /// <summary>
    /// Forced mixer and common nozzle. Static pressures must agree where the streams meet; the thrust lies between that of
    /// the streams each expanded alone and that of the ideally mixed one.
    /// </summary>
    private void Mix(in GasRelations<T> gas, MixerDefinition mixer, in T ambient)
    {
        if (_sizing)
            Sizing.ScaleMixer(_engine, gas, mixer, CoreExit, BypassExit);
        Mixer.StaticState(gas, CoreExit, _engine.MixerCoreArea, out var coreSpeed, out var corePressure);
        Mixer.StaticState(gas, BypassExit, _engine.MixerBypassArea, out var bypassSpeed, out var bypassPressure);
        Residuals[_residual++] = bypassPressure / corePressure - 1.0;
        var momentum =
            corePressure * _engine.MixerCoreArea
            + bypassPressure * _engine.MixerBypassArea
            + CoreExit.W * coreSpeed
            + BypassExit.W * bypassSpeed;
        Mixer.MixedState(
            gas,
            CoreExit,
            BypassExit,
            momentum,
            _engine.MixerCoreArea + _engine.MixerBypassArea,
            coreSpeed.Value,
            out Mixed
        );
        var correctedFlow = Duct.CorrectedFlow(gas, Mixed);
        if (_sizing)
            _engine.TailpipeFlow = correctedFlow.Value;
        var left = Duct.PressureRatio(mixer.PressureLoss, correctedFlow / _engine.TailpipeFlow);
        Mixed.P *= left;

        var nozzle = _engine.Definition.CoreNozzle;
        var whole = Leave(gas, Mixed, nozzle, ambient, out CoreJet, out var area);
        if (_sizing)
            _engine.CoreNozzleArea = area.Value;
        Residuals[_residual++] = area / (Inputs[_engine.Layout.CoreNozzleArea] * _engine.CoreNozzleArea) - 1.0;
        GrossThrustCore = whole;
        if (mixer.Effectiveness >= 1.0)
            return;
        var core = CoreExit;
        var bypass = BypassExit;
        core.P *= left;
        bypass.P *= left;
        var apart = Leave(gas, core, nozzle, ambient, out _, out _) + Leave(gas, bypass, nozzle, ambient, out _, out _);
        GrossThrustCore = whole * mixer.Effectiveness + apart * (1.0 - mixer.Effectiveness);
    }

    /// <summary>Looks up a compressor: corrected flow (m2), pressure ratio less one, isentropic efficiency.</summary>
    private void Read(
        in GasRelations<T> gas,
        ScaledCompressor compressor,
        int index,
        in FlowState<T> inlet,
        out T correctedFlow,
        out T rise,
        out T efficiency
    )
    {
        ref var speed = ref CorrectedSpeed[index];
        speed = Unknowns[compressor.Spool] * compressor.SpeedReference / T.Sqrt(gas.GasConstant(inlet.Y) * inlet.Tt);
        ref var beta = ref Unknowns[BetaOffset + index];
        compressor.Map.Read(speed.Value, beta.Value, out var m);
        ref var flowFactor = ref Inputs[_engine.Layout.CompressorFlow(index)];
        ref var efficiencyFactor = ref Inputs[_engine.Layout.CompressorEfficiency(index)];
        correctedFlow = flowFactor * Lane(m, 0, compressor.FlowScale, speed, beta);
        rise = Lane(m, 1, compressor.RiseScale, speed, beta);
        efficiency = efficiencyFactor * Lane(m, 2, compressor.EfficiencyScale, speed, beta);
        if (compressor.ReynoldsExponent <= 0.0)
            return;
        var reynolds = Reynolds.Index(inlet);
        if (_sizing)
            compressor.DesignReynolds = reynolds.Value;
        Reynolds.Apply(
            efficiency,
            reynolds / compressor.DesignReynolds,
            compressor.ReynoldsExponent,
            out efficiency,
            out var flow
        );
        correctedFlow *= flow;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Lane(in MapReading m, int lane, double scale, in T speed, in T beta) =>
        T.Chain(m.Value[lane] * scale, speed, m.PerSpeed[lane] * scale, beta, m.PerBeta[lane] * scale);

    // Positions follow the speeds; without a fan the first position is that of core compressor 0 (index 1).
    private int BetaOffset => _engine.Spools.Length - (_engine.HasFan ? 0 : 1);
}
