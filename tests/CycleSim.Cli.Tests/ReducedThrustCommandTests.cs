namespace CycleSim.Cli.Tests;

public class ReducedThrustCommandTests
{
    private static readonly string[] Runway =
    [
        "reduced-thrust",
        "velda-27",
        "--altitude",
        "0 ft",
        "--temperature",
        "20 °C",
    ];

    [Fact]
    public void Settings_of_every_assumed_temperature_come_with_conditions_and_caution()
    {
        var run = CommandLine.Run([.. Runway, "--temperatures", "C"]);
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "full rating",
                "120.00 kN",
                "largest reduction",
                "assumed °C",
                "N1 converted",
                "AC 25-13, from memory",
                "standing water, snow, slush or ice",
                "anti-skid",
                "windshear",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
    }

    [Fact]
    public void A_wanted_thrust_and_its_assumed_temperature_are_one_question()
    {
        var thrust = CommandLine.Run([.. Runway, "--wanted-thrust", "100 kN", "--json"]).Json.GetProperty("settings")[
            0
        ];
        Assert.Equal(100e3, thrust.GetProperty("net_thrust_N").GetDouble(), 1e-3);
        var assumed = thrust.GetProperty("assumed_temperature_K").GetDouble();
        var back = CommandLine
            .Run([.. Runway, "--assumed", FormattableString.Invariant($"{assumed:F9} K"), "--json"])
            .Json.GetProperty("settings")[0];
        Assert.Equal(100e3, back.GetProperty("net_thrust_N").GetDouble(), 1e-3);
    }

    [Fact]
    public void Derate_and_assumed_temperature_combine()
    {
        var run = CommandLine.Run([.. Runway, "--derate", "10 %", "--wanted-reduction", "15 %"]);
        Assert.Equal(0, run.ExitCode);
        // 120 kN less 10 %, less 15 % of that: 91.8 kN by hand.
        Assert.Contains("91.80 kN", run.Output);
        Assert.Contains("against the full rating", run.Output);
        Assert.Contains("23.50 % below the full rating", run.Output);
    }

    [Fact]
    public void Rows_go_to_a_file()
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".csv");
        try
        {
            Assert.Equal(0, CommandLine.Run([.. Runway, "--step", "10 K", "--csv", path]).ExitCode);
            var lines = File.ReadAllLines(path);
            Assert.Contains(
                lines,
                l => l.StartsWith("kind,assumed_temperature_K,net_thrust_N", StringComparison.Ordinal)
            );
            Assert.Contains(lines, l => l.StartsWith("assumed temperature,313.15,", StringComparison.Ordinal));
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Theory]
    [InlineData(4, "more than the rating gives", "--wanted-thrust", "130 kN")]
    [InlineData(4, "not allowed under AC 25-13", "--wanted-thrust", "80 kN")]
    [InlineData(4, "not above the outside temperature", "--assumed", "15 °C")]
    [InlineData(4, "reduces nothing", "--assumed", "25 °C")]
    [InlineData(4, "largest reduction allowed here is 25.00 %", "--assumed", "66.5 °C")]
    [InlineData(4, "nothing is reduced", "--wanted-reduction", "0 %")]
    [InlineData(2, "use one of them", "--assumed", "45 °C", "--wanted-thrust", "100 kN")]
    [InlineData(2, "between 0 and 100 %", "--derate", "120 %")]
    [InlineData(2, "at most 500 settings", "--step", "0 K")]
    [InlineData(3, "it has 'take-off'", "--rating", "cruise")]
    public void Impossible_questions_are_answered_with_the_reason(int code, string message, params string[] arguments)
    {
        var run = CommandLine.Run([.. Runway, .. arguments]);
        Assert.Equal(code, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }

    [Theory]
    [InlineData("reduced-thrust", "--altitude", "0 ft")]
    [InlineData("penalties", "--altitude", "0 ft")]
    [InlineData("power-setting")]
    public void A_rating_without_limits_is_refused_with_what_it_lacks(string command, params string[] arguments)
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".toml");
        try
        {
            var text = Definitions.EngineLibrary.Text("velda-27");
            File.WriteAllText(path, text + "\n[[rating]]\nname = \"bare\"\nthrust = \"100 kN\"\n");
            var run = CommandLine.Run([command, path, .. arguments, "--rating", "bare"]);
            Assert.Equal(3, run.ExitCode);
            Assert.Contains("nothing that ends its flat part", run.Error);
            Assert.Equal("", run.Output);
        }
        finally
        {
            File.Delete(path);
        }
    }
}
