using CycleSim.Maps;

namespace CycleSim.Tests.Maps;

/// <summary>
/// The ten-stage compressor of Data/nasa_e3_hpc_stages_pitch.csv (source in the file), stacked from its stage data: stage
/// pressure ratios and the stage-average temperature rises. Characteristics are the usual ones for every stage; variable
/// stators on stages 1 to 5 close by 1.2 % of their flow coefficient per per cent of speed (assumed, the schedule is not
/// published here); bleed 1.3 % behind stage 5, 2.3 % behind stage 7 as printed.
/// </summary>
public class StageStackTests
{
    private static readonly StageStack Ten = new(TenStages());

    // Design report: 25.0 at the aerodynamic design point, 0.847 adiabatic.
    [Fact]
    public void Design_pressure_ratio_and_efficiency_are_those_of_the_report()
    {
        Assert.Equal(1.0, Ten.Design.PressureRatio / 25.0, 0.02);
        Assert.Equal(0.847, Ten.Design.Efficiency, 0.01);
    }

    [Fact]
    public void The_pressure_ratio_is_the_product_of_the_stages() =>
        Assert.Equal(
            1.0,
            Ten.Design.PressureRatio / TenStages().Aggregate(1.0, (product, s) => product * s.PressureRatio),
            1e-9
        );

    // Engine test NASA CR-168211 (read from figures): flow on the operating line over speed, 54.4 kg/s at 98.4 %. The line is
    // taken as one of constant exit corrected flow through the pressure ratio of 23.0 printed for 98.4 %.
    [Theory]
    [InlineData(0.86, 34.0)]
    [InlineData(0.90, 40.0)]
    [InlineData(0.92, 45.0)]
    [InlineData(0.94, 49.0)]
    [InlineData(0.955, 51.0)]
    public void The_operating_line_passes_the_measured_flows(double speed, double published)
    {
        var reference = Ten.SpeedLine(0.984).MinBy(p => Math.Abs(p.Point.PressureRatio - 23.0));
        var on = Ten.SpeedLine(speed)
            .MinBy(p => Math.Abs(p.Point.ExitCorrectedFlow - reference.Point.ExitCorrectedFlow));
        Assert.Equal(1.0, on.Flow / reference.Flow / (published / 54.4), 0.06);
    }

    // Margins of 10 to 35 % at design speed are usual (common practice, no source).
    [Fact]
    public void The_surge_line_leaves_a_plausible_margin()
    {
        var line = Ten.SpeedLine(1.0);
        var surge = line[0];
        var margin = surge.Point.PressureRatio / surge.Flow / (Ten.Design.PressureRatio / 1.0) - 1.0;
        Assert.InRange(margin, 0.10, 0.35);
    }

    // Textbook practice (common practice, no source): front stages stall at low speed, rear stages at high.
    [Fact]
    public void Front_stages_stall_first_at_low_speed_and_rear_ones_at_high()
    {
        Assert.Equal(0, Ten.SpeedLine(0.86)[0].Point.Critical);
        Assert.True(Ten.SpeedLine(1.0)[0].Point.Critical >= 5);
    }

    // Data/nasa_tp1337_rotor37_100pct.csv (source in the file): a single transonic rotor whose line spans 6 % of flow. One
    // stage through reading 4188 (2.157 at 20.43 kg/s), with one steep characteristic, follows the others to 4 % of pressure
    // ratio up to 99 % of the choking flow. In the last per cent (20.83 and 20.93 kg/s) the rotor falls faster, by 8 % of
    // pressure ratio and more: shocks, which the parabola does not know.
    [Fact]
    public void A_transonic_rotor_keeps_the_shape_of_its_speed_line()
    {
        // psi = cp dT / U^2 from the temperature ratio 1.283, with 400 m/s taken for the mean line (tip 454 m/s).
        var rotor = new StageStack([
            new StageDefinition
            {
                FlowCoefficient = 0.45,
                WorkCoefficient = 1005.0 * 0.283 * 288.15 / (400.0 * 400.0),
                BladeSpeed = 400.0,
                PressureRatio = 2.157,
                PeakPressure = 1.03,
                PeakFlow = 0.96,
            },
        ]);
        var rows = TestData.Rows("nasa_tp1337_rotor37_100pct.csv").Where(r => r.Number("flow_kg_s") < 20.8).ToList();
        Assert.Equal(3, rows.Count);
        foreach (var row in rows)
        {
            var point = rotor.At(1.0, row.Number("flow_kg_s") / 20.43);
            Assert.NotNull(point);
            Assert.Equal(1.0, point.Value.PressureRatio / row.Number("rotor_PR"), 0.04);
        }
    }

    [Fact]
    public void Closing_the_stators_moves_a_part_speed_line_to_lower_flow()
    {
        var fixedStators = new StageStack([.. TenStages().Select(s => s with { StatorReset = 0.4 })]);
        Assert.True(Ten.SpeedLine(0.92)[^1].Flow < fixedStators.SpeedLine(0.92)[^1].Flow);
    }

    [Fact]
    public void A_stacked_map_holds_the_design_point_and_rises_towards_surge()
    {
        var stacked = StackedMap.Build(Ten);
        stacked.Map.Read(1.0, stacked.DesignBeta, out var design);
        Assert.Equal(1.0, design.Value[1] / (Ten.Design.PressureRatio - 1.0), 1e-9);
        Assert.Equal(1.0, design.Value[0], 0.01);
        Assert.Equal(Ten.Design.Efficiency, design.Value[2], 0.005);
        Assert.InRange(stacked.DesignBeta, 0.3, 0.95);
        Assert.InRange(stacked.LowestFoundedSpeed, 0.5, 0.86);
        foreach (var speed in stacked.Map.Speeds)
            for (var beta = 0.05; beta <= 1.0; beta += 0.05)
            {
                stacked.Map.Read(speed, beta - 0.05, out var before);
                stacked.Map.Read(speed, beta, out var after);
                Assert.True(after.Value[1] > before.Value[1], $"pressure at {speed:F3}, {beta:F2}");
                Assert.True(after.Value[0] <= before.Value[0] + 1e-4, $"flow at {speed:F3}, {beta:F2}");
            }
    }

    [Fact]
    public void Stages_that_cannot_be_are_refused()
    {
        Refused("at least one stage", []);
        Refused("Stage 1: the flow coefficient", [TenStages()[0] with { FlowCoefficient = 0.0 }]);
        Refused("either a pressure ratio or an efficiency", [TenStages()[0] with { PolytropicEfficiency = 0.9 }]);
        Refused("needs more work", [TenStages()[0] with { PressureRatio = 2.5 }]);
        Refused("bleed more than comes in", [TenStages()[0] with { Bleed = 0.6 }, TenStages()[1] with { Bleed = 0.6 }]);

        static void Refused(string message, StageDefinition[] stages) =>
            Assert.Contains(message, Assert.Throws<ArgumentException>(() => new StageStack(stages)).Message);
    }

    private static StageDefinition[] TenStages() =>
        [
            .. TestData
                .Rows("nasa_e3_hpc_stages_pitch.csv")
                .Select(
                    (row, i) =>
                        new StageDefinition
                        {
                            FlowCoefficient = row.Number("phi_Cz_over_U"),
                            WorkCoefficient = row.Number("psi_from_stage_average_dT"),
                            BladeSpeed = row.Number("U_m_s"),
                            PressureRatio = row.Number("stage_PR_pitch"),
                            StatorReset = i < 5 ? 1.2 : 0.0,
                            Bleed =
                                i == 4 ? 0.013
                                : i == 6 ? 0.023
                                : 0.0,
                        }
                ),
        ];
}
