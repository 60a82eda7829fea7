namespace CycleSim.Cli.Tests;

public class FlatRatingCommandTests
{
    [Fact]
    public void The_main_job_prints_thrust_break_and_caution()
    {
        var run = CommandLine.Run("flat-rating", "velda-27");
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "flat thrust",
                "120.00 kN",
                "break temperature",
                "303.15 K",
                "N1 %",
                "EPR",
                "% of the flat thrust per K",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
    }

    [Fact]
    public void Json_rows_are_flat_to_the_break_and_fall_beyond_it()
    {
        var run = CommandLine.Run("flat-rating", "velda-27", "--json");
        var flat = run.Number("flat_thrust_N");
        var breakAt = run.Number("break_temperature_K");
        Assert.Equal(120e3, flat, 1e-3);
        // The definition says flat to ISA + 15 K: 303.15 K at sea level.
        Assert.Equal(303.15, breakAt, 1e-6);
        var last = double.PositiveInfinity;
        foreach (var row in run.Json.GetProperty("rows").EnumerateArray())
        {
            var thrust = row.GetProperty("net_thrust_N").GetDouble();
            if (row.GetProperty("outside_temperature_K").GetDouble() < breakAt - 0.01)
            {
                Assert.Equal("flat", row.GetProperty("set_by").GetString());
                Assert.Equal(1.0, thrust / flat, 1e-9);
            }
            else
                Assert.True(thrust < last * (1.0 + 1e-9));
            last = thrust;
            Assert.NotEmpty(row.GetProperty("stations").EnumerateArray());
        }
    }

    [Fact]
    public void Bleed_lowers_the_break_and_temperatures_are_as_asked()
    {
        var run = CommandLine.Run(
            "flat-rating",
            "velda-27",
            "--altitude",
            "6000 ft",
            "--bleed",
            "customer-bleed=2 %",
            "--from",
            "20 °C",
            "--to",
            "40 °C",
            "--step",
            "2 K",
            "--temperatures",
            "C"
        );
        Assert.Equal(0, run.ExitCode);
        Assert.Contains("OAT °C", run.Output);
        var json = CommandLine.Run(
            "flat-rating",
            "velda-27",
            "--altitude",
            "6000 ft",
            "--bleed",
            "customer-bleed=2 %",
            "--json"
        );
        Assert.InRange(json.Number("break_isa_offset_K"), -5.0, 14.0);
    }

    [Theory]
    [InlineData(3, "it has 'take-off'", "--rating", "cruise")]
    [InlineData(2, "must not lie above", "--from", "300 K", "--to", "280 K")]
    [InlineData(2, "above zero", "--step", "0 K")]
    [InlineData(2, "0 and 100 %", "--humidity", "140 %")]
    [InlineData(2, "Argument 'metric' not recognized", "--units", "metric")]
    public void Questions_without_meaning_are_refused(int code, string message, params string[] arguments)
    {
        var run = CommandLine.Run(["flat-rating", "velda-27", .. arguments]);
        Assert.Equal(code, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void A_gas_without_humidity_is_not_asked_for_a_humid_day()
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".toml");
        try
        {
            File.WriteAllText(
                path,
                Definitions
                    .EngineLibrary.Text("velda-27")
                    .Replace(
                        "model = \"thermally perfect\"",
                        "model = \"constant\"\nair_cp = \"1005 J/(kg K)\"\nair_gamma = 1.4\nburnt_cp = \"1148 J/(kg K)\"\nburnt_gamma = 1.333"
                    )
            );
            var run = CommandLine.Run("flat-rating", path, "--humidity", "60 %");
            Assert.Equal(4, run.ExitCode);
            Assert.Contains("carries no humidity", run.Error);
            Assert.Equal("", run.Output);
            Assert.Equal(0, CommandLine.Run("flat-rating", path).ExitCode);
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Fact]
    public void Engines_are_listed_and_shown()
    {
        Assert.Contains("velda-27", CommandLine.Run("engines").Output);
        Assert.Contains("[design]", CommandLine.Run("engines", "--show", "velda-27").Output);
        Assert.Contains("\"definition_sha256\"", CommandLine.Run("engines", "--json").Output);
    }

    [Theory]
    [InlineData("--help")]
    [InlineData("point", "--help")]
    [InlineData("flat-rating", "--help")]
    public void Help_shows_examples(params string[] arguments)
    {
        var run = CommandLine.Run(arguments);
        Assert.Equal(0, run.ExitCode);
        Assert.Contains("Examples:", run.Output);
    }
}
