using CsCheck;
using CycleSim.Maps;
using CycleSim.Scalars;

namespace CycleSim.Tests.Maps;

public class TurbineCharacteristicTests
{
    // Data/nasa_cr168189_turbine_rig.csv (source in the file): at an expansion ratio of about 4, efficiency adjusted to one
    // clearance against velocity ratio over design. The law with its usual best velocity ratio of 1.08 must follow the slope
    // to 0.3 points, the scatter of the measurement.
    [Fact]
    public void Efficiency_follows_the_rig_over_the_velocity_ratio()
    {
        var rows = TestData
            .Rows("nasa_cr168189_turbine_rig.csv")
            .Where(r => r["eta_adjusted_to_0p019in_pct"].Length > 0 && Math.Abs(r.Number("pressure_ratio") - 4.0) < 0.1)
            .Select(r =>
                (
                    Ratio: r.Number("velocity_ratio_relative_to_design(own)"),
                    Efficiency: r.Number("eta_adjusted_to_0p019in_pct")
                )
            )
            .ToList();
        var atDesign = rows.Where(r => Math.Abs(r.Ratio - 1.0) < 0.005).Average(r => r.Efficiency);
        Assert.True(rows.Count >= 7 && rows.Any(r => r.Ratio < 0.93) && rows.Any(r => r.Ratio > 1.03));
        foreach (var (ratio, efficiency) in rows)
        {
            var law = TurbineCharacteristic.EfficiencyRatio(new Plain(ratio), 1.08).Value * atDesign;
            Assert.True(Math.Abs(law - efficiency) <= 0.3, $"{ratio:F3}: {law:F2} against {efficiency:F2} %");
        }
    }

    // The same rig over expansion ratios of 3.5 to 4.75: flow 17.05 to 17.38, choked within 1.1 %.
    [Fact]
    public void A_single_stage_is_choked_where_the_rig_was()
    {
        var flows = TestData
            .Rows("nasa_cr168189_turbine_rig.csv")
            .Select(r => (Ratio: r.Number("pressure_ratio"), Flow: r.Number("W_sqrtT_over_P_lbm_sqrtR_s_psia")))
            .ToList();
        var mean = flows.Average(f => f.Flow);
        foreach (var (ratio, flow) in flows)
            Assert.Equal(flow / mean, TurbineCharacteristic.Capacity(new Plain(ratio), 1.0 / 1.9).Value, 0.011);
    }

    // Stodola's ellipse W sqrt(T)/P = C sqrt(1 - (Pout/Pin)^2) is the limit of very many stages (Gas Turbine Theory).
    [Theory]
    [InlineData(1.2)]
    [InlineData(2.0)]
    [InlineData(4.0)]
    public void Without_a_critical_ratio_it_is_the_ellipse(double ratio) =>
        Assert.Equal(
            Math.Sqrt(1.0 - 1.0 / (ratio * ratio)),
            TurbineCharacteristic.Capacity(new Plain(ratio), 0.0).Value,
            1e-12
        );

    [Fact]
    public void Capacity_and_efficiency_have_the_slopes_of_central_differences() =>
        Gen.Select(Gen.Double[1.001, 6.0], Gen.Double[0.05, 0.55])
            .Sample(
                (ratio, critical) =>
                {
                    const double Step = 1e-6;
                    double C(double r) => TurbineCharacteristic.Capacity(new Plain(r), critical).Value;
                    double E(double r) => TurbineCharacteristic.EfficiencyRatio(new Plain(r), 1.08).Value;
                    var exact = TurbineCharacteristic.Capacity(Dual.Variable(ratio, 0), critical).Partial(0);
                    var exactE = TurbineCharacteristic.EfficiencyRatio(Dual.Variable(ratio, 0), 1.08).Partial(0);
                    var difference = (C(ratio + Step) - C(ratio - Step)) / (2.0 * Step);
                    return Math.Abs(exact - difference) < 1e-4 * Math.Max(1.0, Math.Abs(difference))
                        && Math.Abs(exactE - (E(ratio + Step) - E(ratio - Step)) / (2.0 * Step)) < 1e-6;
                },
                iter: 2000
            );
}
