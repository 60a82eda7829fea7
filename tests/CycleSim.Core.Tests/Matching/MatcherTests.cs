using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;
using CycleSim.Tests.Engine;

namespace CycleSim.Tests.Matching;

public class MatcherTests
{
    private static readonly SizedEngine Twin = Sizing.Size(TestEngines.TwinSpool());

    public static TheoryData<Quantity> Settings =>
        [
            Quantity.NetThrust,
            Quantity.FuelFlow,
            Quantity.T4,
            Quantity.T41,
            Quantity.T45,
            Quantity.T5,
            Quantity.N1,
            Quantity.N2,
            Quantity.Epr,
            Quantity.P3,
            Quantity.T3,
            Quantity.CorrectedN1,
            Quantity.Lever,
        ];

    [Theory]
    [MemberData(nameof(Settings))]
    public void Any_output_can_set_the_power(Quantity quantity)
    {
        var matcher = new Matcher(Twin);
        InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(2000.0, 0.3, 10.0));
        Assert.True(matcher.Solve(MatchingProblem.For(Quantity.T4, 1500.0)).Solved);
        var thrust = matcher.Path.NetThrust.Value;
        var value = matcher.Path.Output(quantity).Value;
        Assert.True(matcher.Solve(MatchingProblem.For(quantity, value)).Solved);
        Assert.Equal(1.0, matcher.Path.NetThrust.Value / thrust, 1e-8);
    }

    [Fact]
    public void A_solution_allocates_nothing()
    {
        var matcher = new Matcher(Twin);
        var problem = MatchingProblem.For(Quantity.NetThrust, 60e3);
        InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(1000.0, 0.2, 0.0));
        Assert.True(matcher.Solve(problem).Solved);
        var before = GC.GetAllocatedBytesForCurrentThread();
        for (var i = 0; i < 100; i++)
        {
            matcher.Solve(problem);
            matcher.SolveNext(problem);
        }

        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }

    [Fact]
    public void The_same_point_has_the_same_bits_in_any_order()
    {
        var matcher = new Matcher(Twin);
        double Thrust(double t4)
        {
            InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(5000.0, 0.5, 0.0));
            Assert.True(matcher.Solve(MatchingProblem.For(Quantity.T4, t4)).Solved);
            return matcher.Path.NetThrust.Value;
        }

        var first = Thrust(1400.0);
        Thrust(1100.0);
        Thrust(1600.0);
        Assert.Equal(first, Thrust(1400.0));
    }

    [Fact]
    public void Along_a_line_of_points_the_solutions_are_those_found_one_by_one()
    {
        var line = new Matcher(Twin);
        var single = new Matcher(Twin);
        foreach (var altitude in new[] { 0.0, 2500.0, 9000.0 })
            for (var thrust = 24e3; thrust > 6e3; thrust *= 0.93)
            {
                var problem = MatchingProblem.For(Quantity.NetThrust, thrust);
                foreach (var matcher in new[] { line, single })
                    InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(altitude, 0.45, 0.0));
                var next = line.SolveNext(problem);
                Assert.True(next.Solved && next.Residual <= Matcher.Tolerance);
                Assert.True(single.Solve(problem).Solved);
                Assert.Equal(1.0, line.Path.FuelFlow.Value / single.Path.FuelFlow.Value, 1e-8);
            }
    }

    [Fact]
    public void Thrust_beyond_the_engine_is_refused_with_the_reason()
    {
        var engine = new EngineModel(Twin);
        var error = Assert.Throws<NoSolutionException>(() =>
            engine.At(FlightCondition.AtIsaOffset(0.0, 0.0, 15.0), Quantity.NetThrust, 400e3)
        );
        Assert.Contains("net thrust = 400.00 kN cannot be reached", error.Message);
        Assert.Contains("of its map", error.Message);
    }

    [Theory]
    [InlineData(Quantity.NetThrust, -5.0, "must be above zero")]
    [InlineData(Quantity.T4, double.NaN, "must be above zero")]
    [InlineData(Quantity.N3, 1.0, "has no spool for N3")]
    public void A_setting_that_means_nothing_is_refused(Quantity quantity, double value, string message)
    {
        var error = Assert.Throws<NoSolutionException>(() =>
            new EngineModel(Twin).At(FlightCondition.AtIsaOffset(0.0, 0.0, 0.0), quantity, value)
        );
        Assert.Contains(message, error.Message);
    }

    [Fact]
    public void Freed_inputs_and_conditions_must_agree_in_number()
    {
        var error = Assert.Throws<ArgumentException>(() =>
            MatchingProblem.Pose([new Limit(Quantity.T4, 1500.0)], [], [InputLayout.Mach])
        );
        Assert.Contains("1 freed inputs need 2 conditions", error.Message);
    }

    [Fact]
    public void A_freed_bleed_meets_a_prescribed_pair_of_outputs()
    {
        var matcher = new Matcher(Twin);
        InputLayout.SetFlight(matcher.Inputs, FlightCondition.AtIsaOffset(0.0, 0.0, 15.0));
        var bleed = Twin.Layout.PortFraction(3);
        matcher.Inputs[bleed] = 0.04;
        Assert.True(matcher.Solve(MatchingProblem.For(Quantity.T41, 1600.0)).Solved);
        var thrust = matcher.Path.NetThrust.Value;
        matcher.Inputs[bleed] = 0.0;
        var problem = MatchingProblem.Pose(
            [new Limit(Quantity.T41, 1600.0), new Limit(Quantity.NetThrust, thrust)],
            [],
            [bleed]
        );
        Assert.True(matcher.Solve(problem).Solved);
        Assert.Equal(0.04, matcher.Inputs[bleed], 1e-8);
    }
}
