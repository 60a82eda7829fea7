using CycleSim.Air;
using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Gas;
using CycleSim.Maps;
using CycleSim.Matching;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>Writes up solved points: runs the flow path once more in plain doubles and reads everything off it.</summary>
public sealed class PointReporter
{
    private readonly SizedEngine _engine;
    private readonly FlowPath<Plain> _path;

    public PointReporter(SizedEngine engine)
    {
        _engine = engine;
        _path = new FlowPath<Plain>(engine);
    }

    /// <summary>The report of the point that a matcher has just solved.</summary>
    public OperatingPoint Report(Matcher matcher, MatchOutcome outcome, in FlightCondition flight, Limit setting)
    {
        for (var i = 0; i < matcher.Inputs.Length; i++)
            _path.Inputs[i] = new Plain(matcher.Inputs[i]);
        for (var i = 0; i < _engine.UnknownCount; i++)
            _path.Unknowns[i] = new Plain(matcher.Path.Unknowns[i].Value);
        _path.Evaluate();

        var p = _path;
        var gas = new GasRelations<Plain>(_engine.Definition.Gas, p.Inputs[InputLayout.SpecificHumidity]);
        var jetPower = JetPower();
        var fuelPower = p.FuelFlow.Value * _engine.Definition.Gas.HeatingValue;
        var airspeed = p.Airspeed.Value;
        return new OperatingPoint
        {
            EngineName = _engine.Definition.Name,
            Flight = flight,
            Setting = setting,
            NetThrust = p.NetThrust.Value,
            InstalledThrust = p.InstalledThrust.Value,
            GrossThrust = p.GrossThrustCore.Value + p.GrossThrustBypass.Value,
            RamDrag = p.RamDrag.Value,
            FuelFlow = p.FuelFlow.Value,
            FuelAirRatio = p.FuelFlow.Value / p.CombustorInlet.W.Value,
            BypassRatio = _engine.HasFan ? p.FanTip.W.Value / p.FanHub.W.Value : 0.0,
            OverallPressureRatio = p.CompressorDelivery[^1].P.Value / p.FanFace.P.Value,
            EnginePressureRatio = p.Output(Quantity.Epr).Value,
            LeverPosition = p.Output(Quantity.Lever).Value,
            T45 = p.Output(Quantity.T45).Value,
            Dissociation = Dissociation(gas),
            Airspeed = airspeed,
            ThermalEfficiency = jetPower / fuelPower,
            PropulsiveEfficiency = p.NetThrust.Value * airspeed / jetPower,
            Stations = Stations(gas),
            Compressors = Compressors(gas),
            Turbines = Turbines(),
            Spools = Spools(),
            FanRpm = FanRpm(),
            Nozzles = Nozzles(),
            Air = Streams(gas),
            Audit = PointAudit.Draw(_engine, _path, gas),
            Outcome = outcome,
        };
    }

    private Lazy<double> Dissociation(GasRelations<Plain> gas)
    {
        if (gas.Model is not ThermallyPerfectGas perfect)
            return new Lazy<double>(double.NaN);
        var air = _path.CombustorInlet;
        var pressure = _path.CombustorExit.P.Value;
        var ratio = _path.FuelFlow.Value / air.W.Value;
        var q = gas.SpecificHumidity.Value;
        return new Lazy<double>(() =>
        {
            var h = (air.H.Value + perfect.FuelEnthalpyFlow(ratio, 1.0)) / (1.0 + ratio);
            perfect.AtEnthalpy(h, perfect.BurntFraction(ratio, out _), q, out var complete);
            var waterAirRatio = q / (1.0 - q);
            var equilibrium = EquilibriumCombustion.Adiabatic(
                perfect.Fuel,
                ratio * (1.0 + waterAirRatio),
                waterAirRatio,
                air.Tt.Value,
                pressure
            );
            return complete.T - equilibrium.Temperature;
        });
    }

    // Kinetic power added to the air, from the momentum that the jets would have fully expanded.
    private double JetPower()
    {
        var p = _path;
        double Power(double thrust, double flow) => flow > 0.0 ? 0.5 * thrust * thrust / flow : 0.0;
        var mixes = _engine.Definition.Mixer is not null;
        return Power(p.GrossThrustCore.Value, mixes ? p.Mixed.W.Value : p.CoreExit.W.Value)
            + (_engine.HasFan && !mixes ? Power(p.GrossThrustBypass.Value, p.BypassExit.W.Value) : 0.0)
            - 0.5 * p.FanFace.W.Value * p.Airspeed.Value * p.Airspeed.Value;
    }

    private List<StationReport> Stations(in GasRelations<Plain> gas)
    {
        var list = new List<StationReport>();
        foreach (var (number, plane, s) in StationNames.List(_engine, _path))
        {
            var r = gas.GasConstant(s.Y).Value;
            list.Add(
                new StationReport(
                    number,
                    plane,
                    s.W.Value,
                    s.Tt.Value,
                    s.P.Value,
                    gas.Model.FuelAirRatioOf(s.Y.Value),
                    s.H.Value,
                    s.Phi.Value - r * Math.Log(s.P.Value)
                )
            );
        }

        return list;
    }

    private List<CompressorReport> Compressors(in GasRelations<Plain> gas)
    {
        var list = new List<CompressorReport>();
        if (_engine.Fan is { } fan)
        {
            var power =
                _path.FanTip.W.Value * (_path.FanTip.H.Value - _path.FanFace.H.Value)
                + _path.FanHub.W.Value * (_path.FanHub.H.Value - _path.FanFace.H.Value);
            list.Add(Compressor(gas, fan, 0, _path.FanFace, _path.FanTip, power));
        }

        for (var k = 0; k < _engine.Compressors.Length; k++)
        {
            var inlet = _path.CompressorInlet[k];
            var outlet = _path.CompressorDelivery[k];
            list.Add(
                Compressor(gas, _engine.Compressors[k], k + 1, inlet, outlet, PointAudit.Power(_engine, _path, k))
            );
        }

        return list;
    }

    private CompressorReport Compressor(
        in GasRelations<Plain> gas,
        ScaledCompressor compressor,
        int index,
        in FlowState<Plain> inlet,
        in FlowState<Plain> outlet,
        double power
    )
    {
        var ratio = outlet.P.Value / inlet.P.Value;
        var lnRatio = gas.GasConstant(inlet.Y).Value * Math.Log(ratio);
        var ideal = gas.EnthalpyAtEntropy(new Plain(inlet.Phi.Value + lnRatio), inlet.Y).Value;
        var theta = inlet.Tt.Value / 288.15;
        var delta = inlet.P.Value / 101325.0;
        var beta = _path.Unknowns[_engine.Spools.Length + index - (_engine.HasFan ? 0 : 1)].Value;
        var speed = _path.CorrectedSpeed[index].Value;
        var (constantFlow, constantSpeed) = SurgeMargin.Of(compressor, speed, beta);
        return new CompressorReport(
            compressor.Name,
            ratio,
            (ideal - inlet.H.Value) / (outlet.H.Value - inlet.H.Value),
            lnRatio / (outlet.Phi.Value - inlet.Phi.Value),
            inlet.W.Value * Math.Sqrt(theta) / delta,
            speed,
            beta,
            power,
            constantFlow,
            constantSpeed
        );
    }

    private List<TurbineReport> Turbines()
    {
        var list = new List<TurbineReport>();
        for (var k = 0; k < _engine.Turbines.Length; k++)
        {
            var turbine = _engine.Turbines[k];
            var inlet = _path.TurbineInlet[k];
            var work = _path.TurbineWork[k].Value;
            var ratio = _path.ExpansionRatio[k].Value;
            list.Add(
                new TurbineReport(
                    turbine.Definition.Name,
                    ratio,
                    _path.TurbineEfficiency[k].Value,
                    work,
                    work * inlet.W.Value,
                    1.0 / ratio <= turbine.CriticalRatio
                )
            );
        }

        return list;
    }

    private double FanRpm() =>
        _engine.Fan is { } fan && _engine.Spools[fan.Spool].Speed > 0.0
            ? _engine.Spools[fan.Spool].Speed * _path.Unknowns[fan.Spool].Value * _engine.Definition.Fan!.GearRatio
            : double.NaN;

    private List<SpoolReport> Spools()
    {
        var list = new List<SpoolReport>();
        for (var k = 0; k < _engine.Spools.Length; k++)
        {
            var spool = _engine.Spools[k];
            var speed = _path.Unknowns[k].Value;
            list.Add(
                new SpoolReport(
                    spool.Name,
                    speed,
                    spool.Speed > 0.0 ? spool.Speed * speed : double.NaN,
                    _path.SpoolPower[k].Value,
                    _path.Inputs[_engine.Layout.PowerOfftake(k)].Value
                )
            );
        }

        return list;
    }

    private List<NozzleReport> Nozzles()
    {
        var ambient = _path.Inputs[InputLayout.Pressure].Value;
        var definition = _engine.Definition;
        var mixes = definition.Mixer is not null;
        var list = new List<NozzleReport>
        {
            One(
                mixes ? "mixed" : "core",
                _path.CoreJet,
                mixes ? _path.Mixed.P.Value : _path.CoreExit.P.Value,
                definition.CoreNozzle,
                _engine.CoreNozzleArea,
                _path.GrossThrustCore.Value
            ),
        };
        if (_engine.HasFan && !mixes)
            list.Add(
                One(
                    "bypass",
                    _path.BypassJet,
                    _path.BypassExit.P.Value,
                    definition.BypassNozzle,
                    _engine.BypassNozzleArea,
                    _path.GrossThrustBypass.Value
                )
            );
        return list;

        NozzleReport One(
            string name,
            in Nozzle.Jet<Plain> jet,
            double total,
            NozzleDefinition nozzle,
            double area,
            double thrust
        ) =>
            new(
                name,
                total / ambient,
                jet.Choked,
                jet.Speed.Value,
                jet.ExitTemperature.Value,
                jet.ExitPressure.Value,
                area * (nozzle.DischargeCurve?.At(new Plain(total / ambient)).Value ?? nozzle.DischargeCoefficient),
                area,
                thrust
            );
    }

    private List<StreamReport> Streams(in GasRelations<Plain> gas)
    {
        var list = new List<StreamReport>();
        for (var i = 0; i < _engine.Ports.Length; i++)
        {
            var port = _engine.Ports[i];
            var state = PointAudit.PortState(_engine, _path, gas, i);
            var to = port.Port.To switch
            {
                AirDestination.Overboard => "overboard",
                AirDestination.BypassDuct => "bypass duct",
                AirDestination.Vane => port.Port.Turbine + " vane",
                _ => port.Port.Turbine + " rotor",
            };
            list.Add(
                new StreamReport(port.Port.Name, port.Port.From, to, state.W.Value, state.Tt.Value, state.P.Value)
            );
        }

        return list;
    }
}
