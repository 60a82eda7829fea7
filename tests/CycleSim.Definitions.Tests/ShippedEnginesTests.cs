using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

/// <summary>What must hold for every engine that ships with the program.</summary>
public class ShippedEnginesTests
{
    public static TheoryData<string> Engines => [.. EngineLibrary.Names];

    // -1 000 to 43 000 ft, Mach 0 to 0.88 within the corridor of a transport (350 kt calibrated), ISA -35 to +35 K,
    // 10 to 100 % of the take-off rating, a third of them with bleed and power taken.
    [Theory]
    [MemberData(nameof(Engines))]
    public void Twenty_thousand_random_points_all_converge(string name)
    {
        var engine = Sizing.Size(EngineLibrary.Load(name).Engine);
        var rating = new Rating(engine, engine.Definition.Ratings[0]);
        var matcher = new Matcher(engine);
        var layout = engine.Layout;
        var random = new Random(20261201);
        var failures = new List<string>();
        for (var i = 0; i < 20000; i++)
        {
            var flight = RandomFlight(random);
            var inputs = layout.Defaults(engine.Definition, flight);
            if (i % 3 == 0)
            {
                for (var k = 0; k < engine.Ports.Length; k++)
                    if (engine.Ports[k].Port is { To: AirDestination.Overboard, Scheduled: false })
                        inputs[layout.PortFraction(k)] = 0.04 * random.NextDouble();
                inputs[layout.PowerOfftake(engine.Spools.Length - 1)] *= 2.0 * random.NextDouble();
            }

            var flat = rating.FlatThrust(flight.PressureAltitude, flight.Mach);
            var full = rating.Solve(inputs, flat, out _);
            if (!full.Solved)
            {
                failures.Add($"rating at {Text(flight)}: {Diagnosis.Of(engine, rating.Matcher, full)}");
                continue;
            }

            var wanted = rating.Matcher.Path.NetThrust.Value * (0.1 + 0.9 * random.NextDouble());
            inputs.CopyTo(matcher.Inputs, 0);
            var outcome = matcher.Solve(MatchingProblem.For(Quantity.NetThrust, wanted));
            if (!outcome.Solved || !(outcome.Residual <= 1e-10))
                failures.Add($"{wanted:F0} N at {Text(flight)}: {Diagnosis.Of(engine, matcher, outcome)}");
        }

        Assert.True(failures.Count == 0, $"{failures.Count} failed:\n" + string.Join("\n", failures.Take(10)));
    }

    [Theory]
    [MemberData(nameof(Engines))]
    public void Balances_close_at_every_power(string name)
    {
        var model = new EngineModel(EngineLibrary.Load(name).Engine);
        var rating = model.Rating(model.Engine.Definition.Ratings[0].Name);
        var random = new Random(11);
        for (var i = 0; i < 40; i++)
        {
            var dry = RandomFlight(random);
            var flight = dry.StaticTemperature > 200.0 ? dry.WithRelativeHumidity(0.4) : dry;
            var full = model.AtRating(flight, rating).NetThrust;
            var point = model.At(flight, Quantity.NetThrust, full * (0.15 + 0.85 * random.NextDouble()));
            Assert.InRange(point.Audit.LargestImbalance, 0.0, 1e-9);
            Assert.InRange(Math.Abs(point.Audit.EntropyClosure), 0.0, 1e-9);
            Assert.All(point.Audit.Components, line => Assert.True(line.EntropyProduction > -1e-6, line.Component));
        }
    }

    // Common practice, no source: a jet engine's SFC improves with altitude up to the tropopause, and thrust rises ever
    // faster towards the top of the lever's range.
    [Theory]
    [MemberData(nameof(Engines))]
    public void Engines_behave_as_the_trade_knows_them(string name)
    {
        var model = new EngineModel(EngineLibrary.Load(name).Engine);
        var last = double.PositiveInfinity;
        for (var h = 4000.0; h <= 11000.0; h += 1000.0)
        {
            var sfc = model.At(FlightCondition.AtIsaOffset(h, 0.7, 0.0), Quantity.Lever, 0.85).Sfc;
            Assert.True(sfc < last, $"SFC at {h} m");
            last = sfc;
        }

        double[] thrust =
        [
            .. new[] { 0.3, 0.5, 0.7, 0.9 }.Select(lever =>
                model.At(FlightCondition.AtIsaOffset(0.0, 0.0, 0.0), Quantity.Lever, lever).NetThrust
            ),
        ];
        Assert.True(thrust[1] - thrust[0] < thrust[2] - thrust[1]);
        Assert.True(thrust[2] - thrust[1] < thrust[3] - thrust[2]);
    }

    // Common practice, no source: the fan stream of a wide-body turbofan gives three quarters or more of its take-off thrust.
    [Fact]
    public void The_fan_of_the_wide_body_engine_carries_the_take_off()
    {
        var model = new EngineModel(EngineLibrary.Load("torvik-75").Engine);
        var point = model.AtRating(FlightCondition.AtIsaOffset(0.0, 0.0, 0.0), model.Rating("take-off"));
        Assert.True(point.Nozzles[1].GrossThrust / point.GrossThrust >= 0.75);
    }

    // Common practice, no source.
    [Fact]
    public void A_bleed_valve_opened_at_low_speed_moves_the_working_line_away_from_surge()
    {
        var model = new EngineModel(EngineLibrary.Load("velda-27").Engine);
        var flight = FlightCondition.AtIsaOffset(3000.0, 0.4, 0.0);
        var inputs = model.Inputs(flight);
        var valve = model.Engine.Ports.ToList().FindIndex(p => p.Port.Name == "handling-bleed");
        var open = model.At(flight, Quantity.CorrectedN1, 0.65, inputs).Compressors[1];
        inputs[model.Layout.PortFraction(valve)] = 0.0;
        var shut = model.At(flight, Quantity.CorrectedN1, 0.65, inputs).Compressors[1];
        Assert.True(open.SurgeMarginConstantFlow > shut.SurgeMarginConstantFlow + 0.01);
    }

    private static FlightCondition RandomFlight(Random random)
    {
        var altitude = (-1000.0 + 44000.0 * random.NextDouble()) * 0.3048;
        var pressure = StandardAtmosphere.Pressure(altitude);
        var fastest = Math.Min(0.88, Airspeed.MachFromCalibrated(350.0 * 1852.0 / 3600.0, pressure));
        var slowest = altitude > 6000.0 ? 0.3 : 0.0;
        var mach = slowest + (fastest - slowest) * random.NextDouble();
        return FlightCondition.AtIsaOffset(altitude, mach, -35.0 + 70.0 * random.NextDouble());
    }

    private static string Text(FlightCondition flight) =>
        $"{flight.PressureAltitude:F0} m, Mach {flight.Mach:F3}, ISA {flight.IsaOffset:F1} K";
}
