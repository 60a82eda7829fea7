namespace CycleSim.Cli.Tests;

public class PenaltiesCommandTests
{
    private static readonly string[] TakeOff = ["penalties", "velda-27", "--altitude", "0 m", "--isa", "15 K"];

    [Fact]
    public void Units_loads_sum_and_ranking_are_shown_with_the_caution()
    {
        var run = CommandLine.Run([
            .. TakeOff,
            "--load",
            "packs: customer-bleed=1.2 kg/s",
            "--load",
            "electrical: high=90 kW",
        ]);
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "customer-bleed 1 %",
                "customer-bleed 1 kg/s",
                "high 1 kW",
                "packs: full less first order",
                "all together less the sum of each alone",
                "served cheapest",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
    }

    [Fact]
    public void Loads_cost_fuel_at_constant_thrust_and_thrust_at_the_limit()
    {
        var run = CommandLine.Run([.. TakeOff, "--load", "packs: customer-bleed=2 %, high=40 kW", "--json"]);
        var load = run.Json.GetProperty("loads")[0];
        var thrust = load.GetProperty("at_thrust").GetProperty("full");
        Assert.True(thrust.GetProperty("sfc_change").GetDouble() > 0.0);
        Assert.Equal(0.0, thrust.GetProperty("net_thrust_change").GetDouble(), 1e-9);
        var limit = load.GetProperty("at_limit").GetProperty("full");
        Assert.True(limit.GetProperty("net_thrust_change").GetDouble() < 0.0);
        Assert.Equal(0.0, limit.GetProperty("T41_change_K").GetDouble(), 1e-6);
        Assert.True(load.GetProperty("break_change_K").GetDouble() < 0.0);
    }

    [Fact]
    public void A_port_that_is_normally_shut_opens_to_what_the_definition_lets_through()
    {
        var open = CommandLine.Run([.. TakeOff, "--load", "anti-ice: nacelle-anti-ice=open", "--json"]);
        // 0.4 kg/s in the definition.
        var flow = CommandLine.Run([.. TakeOff, "--load", "anti-ice: nacelle-anti-ice=0.4 kg/s", "--json"]);
        Assert.Equal(flow.Json.GetProperty("loads")[0].ToString(), open.Json.GetProperty("loads")[0].ToString());
    }

    [Fact]
    public void Rows_go_to_a_file()
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".csv");
        try
        {
            Assert.Equal(0, CommandLine.Run([.. TakeOff, "--csv", path]).ExitCode);
            var lines = File.ReadAllLines(path);
            Assert.Contains(
                lines,
                l => l.StartsWith("group,name,held,answer,net_thrust_change", StringComparison.Ordinal)
            );
            Assert.Contains(lines, l => l.StartsWith("per unit,high 1 kW,T41,full,-", StringComparison.Ordinal));
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Theory]
    [InlineData(2, "it has vane-cooling", "--load", "packs: cabin=1 kg/s")]
    [InlineData(2, "it has low, high", "--load", "generator: customer-bleed=90 kW")]
    [InlineData(2, "takes nothing", "--load", "packs:")]
    [InlineData(2, "more than nothing", "--load", "packs: customer-bleed=0 kg/s")]
    [InlineData(2, "more than nothing", "--load", "packs: customer-bleed=-1 %")]
    [InlineData(2, "less than 100 %", "--load", "packs: customer-bleed=120 %")]
    [InlineData(2, "this engine has nacelle-anti-ice", "--load", "packs: customer-bleed=open")]
    [InlineData(2, "neither air", "--load", "packs: customer-bleed=3 K")]
    [InlineData(2, "not of the form", "--load", "customer-bleed=1 kg/s")]
    [InlineData(2, "two loads are called 'a'", "--load", "a: high=1 kW", "--load", "a: high=2 kW")]
    [InlineData(2, "a pressure", "--least-pressure", "250 K")]
    [InlineData(2, "above zero", "--thrust", "0 kN")]
    [InlineData(3, "it has 'take-off'", "--rating", "cruise")]
    [InlineData(4, "cannot be reached", "--thrust", "900 kN")]
    public void Questions_without_meaning_are_refused(int code, string message, params string[] arguments)
    {
        var run = CommandLine.Run([.. TakeOff, .. arguments]);
        Assert.Equal(code, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }
}
