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

    // Data/nasa_tp1337_rotor37_100pct.csv (source in the file): a single transonic rotor at design speed, choking at 20.93 kg/s.
    // One stage through reading 4188 (2.157 at 20.43 kg/s) with three fitted parameters - peak, its flow, shape - against all
    // five readings: pressure ratio to 5 %, flow at the measured pressure ratio on the steep branch to 1 %, efficiency (the
    // ideal work of the pressure ratio over the measured temperature rise) to two points. The parabola is rounder than the
    // rotor, where shocks make the knee: that is what the 5 % are for.
    [Fact]
    public void A_transonic_rotor_keeps_the_shape_of_its_speed_line()
    {
        // psi = cp dT / U^2 from the temperature ratio 1.283, with 400 m/s taken for the mean line (tip 454 m/s); the axial
        // speed of 196 m/s is that of a specific flow of 200 kg/(s m2) (from memory).
        var rotor = new StageStack([
            new StageDefinition
            {
                FlowCoefficient = 0.49,
                WorkCoefficient = 1005.0 * 0.283 * 288.15 / (400.0 * 400.0),
                BladeSpeed = 400.0,
                PressureRatio = 2.157,
                PeakPressure = 1.055,
                PeakFlow = 0.89,
                Shape = -0.7,
            },
        ]);
        var line = rotor.SpeedLine(1.0);
        var rows = TestData.Rows("nasa_tp1337_rotor37_100pct.csv").ToList();
        Assert.Equal(5, rows.Count);
        foreach (var row in rows)
        {
            var (flow, ratio) = (row.Number("flow_kg_s") / 20.43, row.Number("rotor_PR"));
            var point = rotor.At(1.0, flow);
            Assert.NotNull(point);
            Assert.Equal(1.0, point.Value.PressureRatio / ratio, 0.05);
            Assert.Equal(row.Number("rotor_eta_recomputed_gamma1p4"), point.Value.Efficiency, 0.02);
            if (flow >= 1.0)
                Assert.Equal(1.0, line.MinBy(p => Math.Abs(p.Point.PressureRatio - ratio)).Flow / flow, 0.01);
        }
    }

    [Fact]
    public void Closing_the_stators_moves_a_part_speed_line_to_lower_flow()
    {
        var fixedStators = new StageStack([.. TenStages().Select(s => s with { StatorReset = 0.0 })]);
        Assert.True(Ten.SpeedLine(0.92)[^1].Flow < 0.98 * fixedStators.SpeedLine(0.92)[^1].Flow);
    }

    [Fact]
    public void At_and_above_design_speed_the_stators_stand_as_designed()
    {
        var fixedStators = new StageStack([.. TenStages().Select(s => s with { StatorReset = 0.0 })]);
        foreach (var speed in new[] { 1.0, 1.05 })
            Assert.Equal(fixedStators.At(speed, speed), Ten.At(speed, speed));
        Assert.NotEqual(fixedStators.At(0.95, 0.88), Ten.At(0.95, 0.88));
    }

    // Textbook practice (common practice, no source): a port opened between the stages at part speed lets the front stages
    // pass more flow at the same exit throttle and takes them away from stall.
    [Theory]
    [InlineData(0.86)]
    [InlineData(0.90)]
    public void Interstage_bleed_unloads_the_front_stages_at_part_speed(double speed)
    {
        var throttle = Ten.SpeedLine(0.984).MinBy(p => Math.Abs(p.Point.PressureRatio - 23.0)).Point.ExitCorrectedFlow;
        (double Flow, StackPoint Point) On(StageStack stack) =>
            stack.SpeedLine(speed).MinBy(p => Math.Abs(p.Point.ExitCorrectedFlow - throttle));
        var closed = On(Ten);
        var open = On(Ten.WithBleed(5, 0.08));
        Assert.True(open.Flow > 1.03 * closed.Flow);
        Assert.True(open.Point.LeastMargin > closed.Point.LeastMargin);
        Assert.Equal(0, closed.Point.Critical);
        Assert.True(Ten.WithBleed(5, 0.08).SpeedLine(speed)[^1].Flow > Ten.SpeedLine(speed)[^1].Flow);
        Assert.Equal(Ten.At(speed, closed.Flow), Ten.WithBleed(5, 0.0).At(speed, closed.Flow));
    }

    [Fact]
    public void Towards_choke_the_efficiency_falls_all_the_way()
    {
        foreach (var speed in new[] { 0.86, 0.92, 1.0, 1.05 })
        {
            var line = Ten.SpeedLine(speed, 500);
            var best = line.Select(p => p.Point.Efficiency).Max();
            var beyond = line.SkipWhile(p => p.Point.Efficiency < best).Select(p => p.Point.Efficiency).ToList();
            Assert.True(beyond.Count > 5);
            Assert.Equal(beyond.OrderDescending(), beyond);
        }
    }

    [Fact]
    public void Stacking_twice_gives_the_same_map() =>
        Assert.Equal(
            CompressorMapTable.Write(StackedMap.Build(new StageStack(TenStages())).Map),
            CompressorMapTable.Write(StackedMap.Build(Ten).Map)
        );

    // The rules of a user's table hold for a stacked map too: above all, its speed lines do not cross.
    [Theory]
    [InlineData(0.0, 0.80, 0.0)]
    [InlineData(1.2, 0.80, 0.0)]
    [InlineData(1.2, 0.75, 0.0)]
    [InlineData(1.4, 0.80, 0.3)]
    public void A_stacked_map_keeps_the_rules_of_a_table(double reset, double peakFlow, double shape)
    {
        var stages = TenStages()
            .Select((s, i) => s with { StatorReset = i < 5 ? reset : 0.0, PeakFlow = peakFlow, Shape = shape });
        var map = StackedMap.Build(new StageStack([.. stages])).Map;
        var read = CompressorMapTable.Read(CompressorMapTable.Write(map), "stacked").Map;
        Assert.Equal(map.Speeds, read.Speeds);
    }

    [Fact]
    public void Stages_too_steep_for_overspeed_end_the_map_there()
    {
        var steep = TenStages().Select(s => s with { PeakFlow = 0.9, Shape = -0.5 });
        var stacked = StackedMap.Build(new StageStack([.. steep]));
        Assert.InRange(stacked.Map.HighestSpeed, 1.0, 1.075);
        Assert.InRange(stacked.LowestFoundedSpeed, 0.8, 1.0);
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
        Refused("the shape must lie", [TenStages()[0] with { Shape = -1.0 }]);
        Refused("the stator reset must lie", [TenStages()[0] with { StatorReset = double.NaN }]);
        Refused("number above zero", [TenStages()[0] with { PolytropicEfficiency = double.NaN }]);
        Refused("bleed more than comes in", [TenStages()[0] with { Bleed = 0.6 }, TenStages()[1] with { Bleed = 0.6 }]);

        static void Refused(string message, StageDefinition[] stages) =>
            Assert.Contains(message, Assert.Throws<ArgumentException>(() => new StageStack(stages)).Message);
    }

    [Theory]
    [InlineData(0, 0.05, "no such stage; expected 1 to 10")]
    [InlineData(11, 0.05, "no such stage; expected 1 to 10")]
    [InlineData(5, -0.01, "expected 0 or more")]
    [InlineData(5, double.NaN, "expected 0 or more")]
    [InlineData(5, 0.97, "all ports together take")]
    public void A_port_that_cannot_be_is_refused(int stage, double share, string message) =>
        Assert.Contains(message, Assert.Throws<ArgumentException>(() => Ten.WithBleed(stage, share)).Message);

    [Theory]
    [InlineData(0.0, 1.0)]
    [InlineData(1.0, -0.5)]
    [InlineData(double.NaN, 1.0)]
    [InlineData(1.0, double.PositiveInfinity)]
    public void A_stack_is_not_asked_without_speed_or_flow(double speed, double flow) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => Ten.At(speed, flow));

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
