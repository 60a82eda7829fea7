using CsCheck;
using CycleSim.Maps;

namespace CycleSim.Tests.Maps;

public class CompressorMapTests
{
    private static readonly CompressorMap Map = CompressorShape.Build(8.0);

    [Fact]
    public void Readings_have_the_slopes_of_central_differences() =>
        Gen.Select(Gen.Double[0.21, 1.24], Gen.Double[0.01, 0.99])
            .Sample(
                (speed, beta) =>
                {
                    const double Step = 1e-6;
                    Map.Read(speed, beta, out var m);
                    Map.Read(speed + Step, beta, out var faster);
                    Map.Read(speed - Step, beta, out var slower);
                    Map.Read(speed, beta + Step, out var higher);
                    Map.Read(speed, beta - Step, out var lower);
                    for (var lane = 0; lane < 3; lane++)
                        if (
                            Math.Abs((faster.Value[lane] - slower.Value[lane]) / (2 * Step) - m.PerSpeed[lane]) > 1e-3
                            || Math.Abs((higher.Value[lane] - lower.Value[lane]) / (2 * Step) - m.PerBeta[lane]) > 1e-3
                        )
                            return false;
                    return true;
                },
                iter: 5000
            );

    [Fact]
    public void Values_and_slopes_are_continuous_across_grid_lines()
    {
        foreach (var speed in Map.Speeds.Skip(1).SkipLast(1))
        foreach (var beta in new[] { 0.13, 0.5, 0.87 })
        {
            Map.Read(speed - 1e-10, beta, out var below);
            Map.Read(speed + 1e-10, beta, out var above);
            for (var lane = 0; lane < 3; lane++)
            {
                Assert.Equal(below.Value[lane], above.Value[lane], 1e-8);
                Assert.Equal(below.PerSpeed[lane], above.PerSpeed[lane], 1e-6);
                Assert.Equal(below.PerBeta[lane], above.PerBeta[lane], 1e-6);
            }
        }
    }

    [Fact]
    public void Along_a_speed_line_flow_falls_and_pressure_rises_towards_surge()
    {
        foreach (var speed in Map.Speeds)
            for (var beta = 0.02; beta <= 1.0; beta += 0.02)
            {
                Map.Read(speed, beta - 0.02, out var before);
                Map.Read(speed, beta, out var after);
                Assert.True(after.Value[0] <= before.Value[0] + 1e-9, $"flow at {speed:F2}, {beta:F2}");
                Assert.True(after.Value[1] > before.Value[1], $"pressure at {speed:F2}, {beta:F2}");
            }
    }

    [Fact]
    public void The_design_point_is_where_it_should_be()
    {
        Map.Read(1.0, CompressorShape.DesignBeta, out var m);
        Assert.Equal(1.0, m.Value[0], 1e-3);
        Assert.Equal(8.0, m.Value[1] + 1.0, 0.01);
        Assert.Equal(1.0, m.Value[2], 1e-3);
    }
}
