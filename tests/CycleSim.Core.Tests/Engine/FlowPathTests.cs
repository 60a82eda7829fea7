using CycleSim.Air;
using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;
using CycleSim.Scalars;

namespace CycleSim.Tests.Engine;

public class FlowPathTests
{
    private static readonly SizedEngine Twin = Sizing.Size(TestEngines.TwinSpool());

    public static TheoryData<double, double, double, double> Points =>
        new()
        {
            // altitude m, Mach, ISA offset K, T4 K
            { 0.0, 0.0, 0.0, 1600.0 },
            { 0.0, 0.25, 25.0, 1650.0 },
            { 3000.0, 0.4, -20.0, 1250.0 },
            { 10668.0, 0.8, 0.0, 1520.0 },
            { 12500.0, 0.85, 10.0, 1350.0 },
            { -300.0, 0.0, 35.0, 1100.0 },
        };

    [Theory]
    [MemberData(nameof(Points))]
    public void Mass_energy_and_entropy_balance_over_every_component(double h, double mach, double isa, double t4)
    {
        var engine = new EngineModel(Twin);
        var inputs = engine.Inputs(FlightCondition.AtIsaOffset(h, mach, isa).WithRelativeHumidity(0.5));
        inputs[engine.Layout.PortFraction(3)] = 0.03;
        inputs[engine.Layout.PowerOfftake(0)] = 50e3;
        var point = engine.At(
            FlightCondition.AtIsaOffset(h, mach, isa).WithRelativeHumidity(0.5),
            Quantity.T4,
            t4,
            inputs
        );
        Assert.InRange(point.Audit.LargestImbalance, 0.0, 1e-9);
        Assert.InRange(Math.Abs(point.Audit.EntropyClosure), 0.0, 1e-9);
        Assert.All(
            point.Audit.Components,
            line => Assert.True(line.EntropyProduction > -1e-6, $"{line.Component}: {line.EntropyProduction} W/K")
        );
        Assert.Equal(9, point.Audit.Components.Count);
    }

    // Everything at once that the plain twin-spool leaves out: gear loss, fan air, convergent-divergent nozzle, coefficients
    // over pressure ratio, nacelle.
    private static readonly SizedEngine Laden = Sizing.Size(
        TestEngines.TwinSpool() with
        {
            Fan = TestEngines.TwinSpool().Fan! with { GearRatio = 0.4, GearEfficiency = 0.99 },
            AirPorts =
            [
                .. TestEngines.TwinSpool().AirPorts,
                new AirPort
                {
                    Name = "precooler",
                    From = AirPort.Fan,
                    To = AirDestination.Overboard,
                    Fraction = 0.02,
                },
            ],
            CoreNozzle = new NozzleDefinition { ExitAreaRatio = 1.15, VelocityCoefficient = 0.99 },
            BypassNozzle = new NozzleDefinition
            {
                VelocityCurve = new CoefficientCurve([1.2, 1.8, 2.6], [0.985, 0.992, 0.994]),
                DischargeCurve = new CoefficientCurve([1.2, 1.8, 2.6], [0.95, 0.975, 0.985]),
            },
            Nacelle = new NacelleDefinition { DragArea = 0.1, ScrubbingLoss = 0.004 },
        }
    );

    [Theory]
    [MemberData(nameof(Points))]
    public void An_engine_with_every_loss_and_port_balances_too(double h, double mach, double isa, double t4)
    {
        var flight = FlightCondition.AtIsaOffset(h, mach, isa);
        var point = new EngineModel(Laden).At(flight, Quantity.T4, t4);
        Assert.InRange(point.Outcome.Residual, 0.0, 1e-10);
        Assert.InRange(point.Audit.LargestImbalance, 0.0, 1e-9);
        var precooler = point.Air.Single(a => a.Name == "precooler");
        Assert.Equal(0.02 * point.Station("13").MassFlow, precooler.MassFlow, 1e-9);
        Assert.Equal(point.Station("13").TotalTemperature, precooler.TotalTemperature, 1e-9);

        // Dynamic pressure from the atmosphere's density; scrubbing on what the bypass nozzle gives.
        var density = flight.StaticPressure / (287.05287 * flight.StaticTemperature);
        var drag = 0.5 * density * point.Airspeed * point.Airspeed * 0.1;
        var scrubbing = 0.004 * point.Nozzles.Single(n => n.Name == "bypass").GrossThrust;
        Assert.Equal(point.NetThrust - drag - scrubbing, point.InstalledThrust, 2e-5 * point.NetThrust);
    }

    [Fact]
    public void The_gear_takes_its_share_of_the_fan_power_from_the_turbine()
    {
        var geared = TestEngines.TwinSpool() with { Fan = TestEngines.TwinSpool().Fan! with { GearEfficiency = 0.98 } };
        double Turbine(EngineDefinition definition, out double fan)
        {
            var point = new EngineModel(definition).DesignPoint();
            fan = point.Compressors[0].Power;
            return point.Turbines[1].Power * 0.995;
        }

        var plain = Turbine(TestEngines.TwinSpool(), out var power);
        Assert.Equal(power * (1.0 / 0.98 - 1.0), Turbine(geared, out _) - plain, 1e-6 * power);
    }

    [Theory]
    [MemberData(nameof(Points))]
    public void Jacobian_with_every_loss_and_port_is_that_of_central_differences(
        double h,
        double mach,
        double isa,
        double t4
    ) => JacobianIsExact(Laden, h, mach, isa, t4);

    [Theory]
    [MemberData(nameof(Points))]
    public void Jacobian_is_that_of_central_differences(double h, double mach, double isa, double t4) =>
        JacobianIsExact(Twin, h, mach, isa, t4);

    private static void JacobianIsExact(SizedEngine engine, double h, double mach, double isa, double t4)
    {
        var matcher = new Matcher(engine);
        InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(h, mach, isa));
        Assert.True(matcher.Solve(MatchingProblem.For(Quantity.T4, t4)).Solved);
        var plain = new FlowPath<Plain>(engine);
        for (var i = 0; i < matcher.Inputs.Length; i++)
            plain.Inputs[i] = new Plain(matcher.Inputs[i]);
        Plain[] At(int unknown, double step)
        {
            for (var i = 0; i < engine.UnknownCount; i++)
                plain.Unknowns[i] = new Plain(matcher.Solution[i] + (i == unknown ? step : 0.0));
            plain.Evaluate();
            return [.. plain.Residuals, plain.NetThrust / 1e5, plain.FuelFlow];
        }

        var differentiated = matcher.DifferentiateByUnknowns().Path;
        for (var unknown = 0; unknown < engine.UnknownCount; unknown++)
        {
            const double Step = 1e-5;
            var up = At(unknown, Step);
            var down = At(unknown, -Step);
            Dual[] exact = [.. differentiated.Residuals, differentiated.NetThrust / 1e5, differentiated.FuelFlow];
            for (var row = 0; row < exact.Length; row++)
            {
                var difference = (up[row].Value - down[row].Value) / (2.0 * Step);
                Assert.Equal(difference, exact[row].Partial(unknown), 2e-6 * Math.Max(1.0, Math.Abs(difference)));
            }
        }
    }

    // With constant specific heats, no absolute offtakes and equal Mach number the equations know only ratios: the same
    // corrected speed must give the same corrected everything at any altitude and temperature.
    [Fact]
    public void Corrected_parameters_are_alike_at_alike_corrected_speed()
    {
        var engine = new EngineModel(TestEngines.TwinSpool(TestEngines.Textbook, offtake: 0.0));
        var random = new Random(7);
        foreach (var (mach, lowest) in new[] { (0.0, 0.4), (0.45, 0.65), (0.8, 0.75) })
        foreach (var speed in new[] { lowest, 0.85, 0.95, 1.03 })
        {
            var a = engine.At(FlightCondition.AtIsaOffset(0.0, mach, 0.0), Quantity.CorrectedN1, speed);
            for (var i = 0; i < 10; i++)
            {
                var other = FlightCondition.AtIsaOffset(
                    -1000.0 + 14000.0 * random.NextDouble(),
                    mach,
                    -35.0 + 70.0 * random.NextDouble()
                );
                var b = engine.At(other, Quantity.CorrectedN1, speed);
                Alike(Corrected(a), Corrected(b));
            }
        }

        static double[] Corrected(OperatingPoint p)
        {
            var face = p.Station("2");
            var theta = face.TotalTemperature / 288.15;
            var delta = face.TotalPressure / 101325.0;
            return
            [
                p.NetThrust / delta,
                p.GrossThrust / delta,
                face.MassFlow * Math.Sqrt(theta) / delta,
                p.T4 / theta,
                p.T45 / theta,
                p.BypassRatio,
                p.OverallPressureRatio,
                p.EnginePressureRatio,
                p.Spools[1].RelativeSpeed / Math.Sqrt(theta),
                .. p.Compressors.Select(c => c.PressureRatio),
                .. p.Compressors.Select(c => c.SurgeMarginConstantSpeed),
                .. p.Turbines.Select(t => t.ExpansionRatio),
            ];
        }

        static void Alike(double[] a, double[] b)
        {
            for (var i = 0; i < a.Length; i++)
                Assert.Equal(1.0, b[i] / a[i], 1e-9);
        }
    }

    [Fact]
    public void The_design_point_comes_out_of_matching_as_it_went_into_sizing()
    {
        var point = new EngineModel(Twin).DesignPoint();
        Assert.Equal(168.0, point.Station("2").MassFlow, 1e-7);
        Assert.Equal(5.8, point.BypassRatio, 1e-9);
        Assert.Equal(1520.0, point.T4, 1e-7);
        Assert.Equal(1.66, point.Station("13").TotalPressure / point.Station("2").TotalPressure, 1e-9);
        Assert.Equal(12.0, point.Compressors[2].PressureRatio, 1e-9);
        Assert.Equal(0.905, point.Compressors[2].PolytropicEfficiency, 1e-9);
        Assert.Equal(0.89, point.Turbines[0].IsentropicEfficiency, 1e-9);
        Assert.All(point.Spools, s => Assert.Equal(1.0, s.RelativeSpeed, 1e-9));
    }

    [Fact]
    public void Size_follows_a_wanted_thrust()
    {
        var definition = TestEngines.TwinSpool();
        var sized = Sizing.Size(
            definition with
            {
                Design = definition.Design with { MassFlow = 0.0, NetThrust = 31000.0 },
            }
        );
        Assert.Equal(31000.0, sized.DesignThrust, 1e-6);
    }

    [Fact]
    public void Rotor_inlet_temperature_may_be_given_instead_of_T4()
    {
        var definition = TestEngines.TwinSpool();
        var sized = Sizing.Size(
            definition with
            {
                Design = definition.Design with { CombustorExitTemperature = 0.0, RotorInletTemperature = 1450.0 },
            }
        );
        Assert.Equal(1450.0, new EngineModel(sized).DesignPoint().T41, 1e-6);
    }

    [Fact]
    public void Thrust_falls_with_altitude_and_SFC_improves_up_to_the_tropopause()
    {
        var engine = new EngineModel(Twin);
        double thrust = double.PositiveInfinity,
            sfc = double.PositiveInfinity;
        for (var h = 3000.0; h <= 11000.0; h += 1000.0)
        {
            var p = engine.At(FlightCondition.AtIsaOffset(h, 0.75, 0.0), Quantity.CorrectedN1, 0.98);
            Assert.True(p.NetThrust < thrust, $"thrust at {h} m");
            Assert.True(p.Sfc < sfc, $"SFC at {h} m");
            (thrust, sfc) = (p.NetThrust, p.Sfc);
        }
    }

    [Theory]
    [InlineData(700.0, "not above the compressor delivery")]
    [InlineData(860.0, "more than the gas holds")]
    [InlineData(2800.0, "stoichiometric")]
    public void A_design_point_that_contradicts_itself_is_refused(double t4, string message)
    {
        var definition = TestEngines.TwinSpool();
        var impossible = definition with
        {
            Design = definition.Design with { CombustorExitTemperature = t4 },
            Compressors =
            [
                definition.Compressors[0],
                definition.Compressors[1] with
                {
                    PressureRatio = t4 > 2000.0 ? 3.0 : 12.0,
                },
            ],
        };
        Assert.Contains(message, Assert.Throws<SizingException>(() => Sizing.Size(impossible)).Message);
    }
}
