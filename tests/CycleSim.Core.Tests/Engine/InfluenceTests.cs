using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;

namespace CycleSim.Tests.Engine;

public class InfluenceTests
{
    private static readonly SizedEngine Twin = Sizing.Size(TestEngines.TwinSpool());

    // Points solved anew on either side of every input; central differences with Richardson's extrapolation.
    [Theory]
    [InlineData(Quantity.NetThrust, 25e3)]
    [InlineData(Quantity.T41, 1420.0)]
    public void Coefficients_are_those_of_points_solved_anew(Quantity quantity, double value)
    {
        var matcher = new Matcher(Twin);
        var flight = FlightCondition.AtIsaOffset(9000.0, 0.7, 5.0, 0.004);
        var inputs = Twin.Layout.Defaults(Twin.Definition, flight);
        inputs[Twin.Layout.PortFraction(3)] = 0.02;
        var problem = MatchingProblem.For(quantity, value);
        double[] Solve(int input, double step)
        {
            inputs.CopyTo(matcher.Inputs, 0);
            if (input >= 0)
                matcher.Inputs[input] += step;
            Assert.True(matcher.Solve(problem).Solved);
            return [.. Influence.At(matcher).OutputValues];
        }

        var values = Solve(-1, 0.0);
        var influence = Influence.At(matcher);
        for (var input = 0; input < Twin.Layout.Count; input++)
        {
            var step = 2e-4 * Scale(Twin, input, inputs[input]);
            var far = Solve(input, 2.0 * step)
                .Zip(Solve(input, -2.0 * step), (a, b) => (a - b) / (4.0 * step))
                .ToArray();
            var near = Solve(input, step).Zip(Solve(input, -step), (a, b) => (a - b) / (2.0 * step)).ToArray();
            for (var output = 0; output < values.Length; output++)
            {
                var difference = (4.0 * near[output] - far[output]) / 3.0;
                // To 1e-6 of what the output changes over the whole scale of the input.
                var allowed =
                    1e-6 * Math.Max(Math.Abs(difference), Math.Abs(values[output]) / Scale(Twin, input, inputs[input]));
                Assert.True(
                    Math.Abs(influence[output, input] - difference) <= allowed,
                    $"{influence.Outputs[output]} by {influence.Inputs[input]}: {influence[output, input]:E8} against {difference:E8}"
                );
            }
        }
    }

    [Fact]
    public void The_power_setting_itself_does_not_move()
    {
        var model = new EngineModel(Twin);
        model.At(FlightCondition.AtIsaOffset(9000.0, 0.7, 5.0), Quantity.NetThrust, 25e3);
        var influence = model.InfluenceOfLastPoint();
        Assert.All(influence.Inputs, input => Assert.Equal(0.0, influence.Of("net_thrust_N", input), 1e-6));
        Assert.True(influence.Of("sfc_kg_per_N_s", "efficiency_factor_hpc") < 0.0);
        Assert.True(influence.Of("T45_K", "efficiency_factor_hpt") < 0.0);
        Assert.True(influence.Of("T41_K", "air_customer_fraction") > 0.0);
        Assert.Contains("There is no", Assert.Throws<ArgumentException>(() => influence.Of("thrust", "mach")).Message);
    }

    private static double Scale(SizedEngine engine, int input, double value) =>
        input == InputLayout.SpecificHumidity ? 0.5 * value
        : input >= engine.Layout.PowerOfftake(0) && input < engine.Layout.PortFraction(0) ? 1e6
        : input >= engine.Layout.PortFraction(0) && input < engine.Layout.PortFlow(0) ? 0.5
        : value == 0.0 ? 1.0
        : value;
}
