namespace CycleSim.Cli.Tests;

public class RatingCommandsTests
{
    private static readonly string[] Hot = ["--altitude", "6000 ft", "--temperature", "38 °C"];

    [Fact]
    public void A_wanted_thrust_tells_the_limit_it_needs()
    {
        var run = CommandLine.Run(["required-rating", "velda-27", .. Hot, "--thrust", "95 kN", "--json"]);
        Assert.Equal(0, run.ExitCode);
        Assert.Equal("T41", run.Json.GetProperty("set_by").GetString());
        Assert.True(run.Number("rated_thrust_N") < 95e3);
        var t41 = run
            .Json.GetProperty("limits")
            .EnumerateArray()
            .Single(l => l.GetProperty("quantity").GetString() == "T41");
        Assert.True(t41.GetProperty("exceeded").GetBoolean());
        // The point at that limit gives the thrust.
        var needed = t41.GetProperty("needed").GetDouble();
        var text = needed.ToString("R", System.Globalization.CultureInfo.InvariantCulture) + " K";
        var point = CommandLine.Run(["point", "velda-27", .. Hot, "--mach", "0", "--T41", text, "--json"]);
        Assert.Equal(95e3, point.Number("net_thrust_N"), 0.1);
    }

    [Fact]
    public void A_map_shows_break_and_lapse_and_what_moves_the_break()
    {
        var run = CommandLine.Run([
            "rating-map",
            "velda-27",
            "--altitudes",
            "0 ft, 5000 ft",
            "--machs",
            "0, 0.2",
            "--temperatures",
            "C",
        ]);
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[] { "break °C", "lapse %/K", "30.00", "relative humidity", "100 kW", "not for dispatch" }
        )
            Assert.Contains(text, run.Output);
    }

    [Theory]
    [InlineData("--thrust is missing")]
    [InlineData("above zero", "--thrust", "0 kN")]
    [InlineData("is a mass flow", "--thrust", "3 kg/s")]
    [InlineData("has no rating 'climb'", "--thrust", "90 kN", "--rating", "climb")]
    public void Questions_that_make_no_sense_are_refused(string says, params string[] arguments)
    {
        var run = CommandLine.Run(["required-rating", "velda-27", .. Hot, .. arguments]);
        Assert.NotEqual(0, run.ExitCode);
        Assert.Contains(says, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void A_thrust_never_reached_is_answered_with_the_reason()
    {
        var run = CommandLine.Run(["required-rating", "velda-27", .. Hot, "--thrust", "600 kN"]);
        Assert.Equal(4, run.ExitCode);
        Assert.Contains("reaches the top of its map", run.Error);
    }

    [Fact]
    public void Rows_go_to_files_in_SI_with_provenance()
    {
        var folder = Directory.CreateTempSubdirectory("cyclesim-").FullName;
        try
        {
            var csv = Path.Combine(folder, "rating.csv");
            var parquet = Path.Combine(folder, "rating.parquet");
            var run = CommandLine.Run([
                "flat-rating",
                "velda-27",
                "--units",
                "us",
                "--csv",
                csv,
                "--parquet",
                parquet,
                "--step",
                "10 K",
            ]);
            Assert.Equal(0, run.ExitCode);
            var lines = File.ReadAllLines(csv);
            Assert.Contains(lines, l => l.StartsWith("# definition_sha256: ", StringComparison.Ordinal));
            Assert.Contains(lines, l => l.Contains("not for dispatch", StringComparison.Ordinal));
            var header = lines.Single(l => l.StartsWith("outside_temperature_K,", StringComparison.Ordinal));
            var thrust = Array.IndexOf(header.Split(','), "net_thrust_N");
            Assert.Equal(
                120e3,
                double.Parse(lines[^3].Split(',')[thrust], System.Globalization.CultureInfo.InvariantCulture),
                2e4
            );
            Assert.Equal("PAR1", System.Text.Encoding.ASCII.GetString(File.ReadAllBytes(parquet)[..4]));
            Assert.Equal(2, Directory.GetFiles(folder).Length);

            var nowhere = CommandLine.Run(["flat-rating", "velda-27", "--csv", Path.Combine(folder, "no", "a.csv")]);
            Assert.Equal(2, nowhere.ExitCode);
            Assert.Contains("--csv", nowhere.Error);
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }
}
