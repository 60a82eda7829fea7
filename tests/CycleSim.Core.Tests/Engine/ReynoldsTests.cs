using CycleSim.Air;
using CycleSim.Components;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Scalars;

namespace CycleSim.Tests.Engine;

public class ReynoldsTests
{
    // (1 - eta)/(1 - eta_ref) = (Re_ref/Re)^n by hand: half the Reynolds number, n = 0.2 takes 0.90 to 1 - 0.1 x 2^0.2 = 0.88513.
    [Fact]
    public void Loss_goes_with_the_power_of_the_Reynolds_number()
    {
        Reynolds.Apply(new Plain(0.9), new Plain(0.5), 0.2, out var efficiency, out var flow);
        Assert.Equal(0.88513, efficiency.Value, 1e-5);
        Assert.Equal(1.0 - 0.5 * (1.0 - 0.88513 / 0.9), flow.Value, 1e-5);
    }

    // RNI = delta / (theta^0.5 mu/mu0) (from memory): at 35 000 ft, Mach 0, ISA: 0.2353/(0.8714 x 0.8011) = 0.3371.
    [Fact]
    public void Index_is_that_of_the_trade()
    {
        static double At(double h) =>
            Reynolds
                .Index(
                    new FlowState<Plain>
                    {
                        P = new Plain(StandardAtmosphere.Pressure(h)),
                        Tt = new Plain(StandardAtmosphere.Temperature(h)),
                    }
                )
                .Value;
        Assert.Equal(0.3371, At(10668.0) / At(0.0), 0.0002);
    }

    [Fact]
    public void A_high_cold_day_costs_fuel_only_where_the_effect_is_asked_for()
    {
        var without = TestEngines.TwinSpool();
        var with = without with
        {
            Compressors = [.. without.Compressors.Select(c => c with { ReynoldsExponent = 0.12 })],
            Turbines = [.. without.Turbines.Select(t => t with { ReynoldsExponent = 0.2 })],
        };
        double Sfc(EngineDefinition d, double h) =>
            new EngineModel(d).At(FlightCondition.AtIsaOffset(h, 0.8, 0.0), Quantity.CorrectedN1, 0.97).Sfc;
        Assert.Equal(new EngineModel(without).DesignPoint().Sfc, new EngineModel(with).DesignPoint().Sfc, 1e-12);
        Assert.True(Sfc(with, 13000.0) > Sfc(without, 13000.0) * 1.002);
        Assert.True(Sfc(with, 6000.0) < Sfc(without, 6000.0) * 0.998);
    }
}
