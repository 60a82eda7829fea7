using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Tests.Engine;

namespace CycleSim.Tests.Matching;

public class FuelStepTests
{
    private static readonly FlightCondition Ground = FlightCondition.AtIsaOffset(0.0, 0.2, 10.0);

    [Theory]
    [InlineData(0.6)]
    [InlineData(0.9)]
    public void No_step_is_the_settled_point(double lever)
    {
        var model = new EngineModel(TestEngines.TwinSpool());
        var settled = model.At(Ground, Quantity.Lever, lever);
        var same = model.AfterFuelStep(settled, 1.0);
        Assert.Equal(settled.NetThrust, same.NetThrust, 1e-6 * settled.NetThrust);
        Assert.Equal(settled.T4, same.T4, 1e-6);
        for (var k = 0; k < 2; k++)
            Assert.Equal(settled.Spools[k].Offtake, same.Spools[k].Offtake, 1.0);
    }

    [Theory]
    [InlineData(0.6, 1.25)]
    [InlineData(0.9, 1.10)]
    [InlineData(0.9, 0.80)]
    public void A_step_leaves_the_speeds_and_closes_every_balance(double lever, double ratio)
    {
        var model = new EngineModel(TestEngines.TwinSpool());
        var settled = model.At(Ground, Quantity.Lever, lever);
        var after = model.AfterFuelStep(settled, ratio);
        Assert.Equal(settled.FuelFlow * ratio, after.FuelFlow, 1e-9 * settled.FuelFlow);
        for (var k = 0; k < 2; k++)
            Assert.Equal(settled.Spools[k].RelativeSpeed, after.Spools[k].RelativeSpeed);
        Assert.InRange(after.Audit.LargestImbalance, 0.0, 1e-9);
        Assert.InRange(after.Outcome.Residual, 0.0, 1e-10);

        // Common practice, no source: fuel ahead of the speeds accelerates the high-pressure spool, and moves the
        // high-pressure compressor's working point towards surge; fuel behind them away from it.
        var more = ratio > 1.0;
        Assert.Equal(more, after.Spools[1].Offtake > settled.Spools[1].Offtake);
        Assert.Equal(
            more,
            after.Compressors[2].SurgeMarginConstantSpeed < settled.Compressors[2].SurgeMarginConstantSpeed
        );
    }

    [Fact]
    public void A_step_beyond_surge_says_which_compressor_surges()
    {
        var model = new EngineModel(TestEngines.TwinSpool());
        var settled = model.At(Ground, Quantity.Lever, 0.9);
        var none = Assert.Throws<NoSolutionException>(() => model.AfterFuelStep(settled, 2.9));
        Assert.Contains("beyond the surge line of", none.Message);
        Assert.Contains(
            "0.2 to 3",
            Assert.Throws<NoSolutionException>(() => model.AfterFuelStep(settled, 3.5)).Message
        );
    }

    [Fact]
    public void Settled_points_are_found_as_before_after_a_step()
    {
        var model = new EngineModel(TestEngines.TwinSpool());
        var before = model.At(Ground, Quantity.Lever, 0.8);
        model.AfterFuelStep(before, 1.1);
        var again = model.At(Ground, Quantity.Lever, 0.8);
        Assert.Equal(before.FuelFlow, again.FuelFlow, 1e-9 * before.FuelFlow);
    }
}
