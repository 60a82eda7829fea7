using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;
using CycleSim.Tests.Engine;

namespace CycleSim.Tests.Matching;

public class RatingTests
{
    private static readonly EngineModel Twin = new(TestEngines.TwinSpool());
    private static readonly Rating TakeOff = Twin.Rating("take-off");

    [Theory]
    [InlineData(0.0, 0.0, 0.0)]
    [InlineData(1500.0, 0.0, 0.03)]
    [InlineData(3000.0, 0.25, 0.02)]
    public void The_break_is_where_thrust_and_limit_are_both_met(double altitude, double mach, double bleed)
    {
        var flight = FlightCondition.AtIsaOffset(altitude, mach, 10.0);
        var inputs = Twin.Inputs(flight);
        inputs[Twin.Layout.PortFraction(3)] = bleed;
        var flat = TakeOff.FlatThrust(altitude, mach);
        var outcome = TakeOff.Break(inputs, flat, out var breakTemperature, out var governing);
        Assert.True(outcome.Solved);
        var path = TakeOff.Matcher.Path;
        var limit = TakeOff.Limits[governing];
        Assert.Equal(1.0, path.NetThrust.Value / flat, 1e-9);
        Assert.Equal(1.0, path.Output(limit.Quantity).Value / limit.Value, 1e-9);

        // A dense search by halving on ordinary points must find the same temperature.
        double low = flight.StaticTemperature - 40.0,
            high = flight.StaticTemperature + 40.0;
        while (high - low > 1e-5)
        {
            var middle = 0.5 * (low + high);
            inputs[InputLayout.Temperature] = middle;
            Assert.True(TakeOff.Solve(inputs, flat, out var rules).Solved);
            if (rules < 0)
                low = middle;
            else
                high = middle;
        }

        Assert.Equal(breakTemperature, low, 1e-3);
    }

    [Fact]
    public void Bleed_brings_the_break_down_and_leaves_the_flat_thrust()
    {
        var flight = FlightCondition.AtIsaOffset(0.0, 0.0, 15.0);
        var flat = TakeOff.FlatThrust(0.0, 0.0);
        Assert.Equal(120e3, flat, 1e-3);
        var inputs = Twin.Inputs(flight);
        TakeOff.Break(inputs, flat, out var without, out _);
        inputs[Twin.Layout.PortFraction(3)] = 0.02;
        TakeOff.Break(inputs, flat, out var with, out _);
        Assert.Equal(303.15, without, 1e-6);
        Assert.InRange(with, 285.0, 302.0);
    }

    // Take-off lapse beyond the break: 0.7 to 1.0 % a kelvin (from memory, common practice).
    [Fact]
    public void Thrust_is_flat_to_the_break_and_lapses_beyond_it()
    {
        var flat = TakeOff.FlatThrust(0.0, 0.0);
        var last = double.PositiveInfinity;
        foreach (var isa in new[] { -30.0, -10.0, 0.0, 10.0, 14.9, 15.1, 20.0, 25.0, 30.0 })
        {
            var point = Twin.AtRating(FlightCondition.AtIsaOffset(0.0, 0.0, isa), TakeOff);
            if (isa < 15.0)
                Assert.Equal(flat, point.NetThrust, 1e-4 * flat);
            else
                Assert.True(point.NetThrust < last);
            last = point.NetThrust;
        }

        var hot = Twin.AtRating(FlightCondition.AtIsaOffset(0.0, 0.0, 25.0), TakeOff).NetThrust;
        Assert.InRange((1.0 - hot / flat) * 100.0 / 10.0, 0.7, 1.0);
    }

    [Fact]
    public void Any_two_of_thrust_flat_to_and_limit_give_the_third()
    {
        var t41 = TakeOff.ImpliedLimit!.Value;
        Assert.Equal(Quantity.T41, t41.Quantity);
        var byLimit = new Rating(
            Twin.Engine,
            new RatingDefinition
            {
                Name = "a",
                Thrust = 120e3,
                Limits = [t41],
            }
        );
        Assert.Equal(15.0, byLimit.FlatTo, 1e-6);
        var byFlatTo = new Rating(
            Twin.Engine,
            new RatingDefinition
            {
                Name = "b",
                FlatTo = 15.0,
                Limits = [t41],
            }
        );
        Assert.Equal(120e3, byFlatTo.FlatThrust(0.0, 0.0), 1e-3);
    }

    [Fact]
    public void Ratings_that_cannot_be_are_refused()
    {
        Limit[] t41 = [new Limit(Quantity.T41, 1700.0)];
        Refused(
            "any two of",
            new()
            {
                Name = "x",
                Thrust = 120e3,
                FlatTo = 15.0,
                Limits = t41,
            }
        );
        Refused("nothing that ends its flat part", new() { Name = "x", FlatTo = 15.0 });
        Refused("neither thrust nor flat_to", new() { Name = "x", Limits = t41 });
        Refused(
            "not to be had",
            new()
            {
                Name = "x",
                Thrust = 500e3,
                FlatTo = 15.0,
            }
        );
        Refused(
            "its own limit",
            new()
            {
                Name = "x",
                Thrust = 120e3,
                FlatTo = 15.0,
                Limits = [new Limit(Quantity.N1, 0.9)],
            }
        );
        Assert.Contains("it has 'take-off'", Assert.Throws<RatingException>(() => Twin.Rating("cruise")).Message);

        static void Refused(string message, RatingDefinition definition) =>
            Assert.Contains(message, Assert.Throws<RatingException>(() => new Rating(Twin.Engine, definition)).Message);
    }
}
