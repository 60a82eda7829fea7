namespace CycleSim.Cli.Tests;

public class ManoeuvreCommandTests
{
    private const string Low = "altitude=0 ft, mach=0.2, lever=30 %",
        High = "altitude=0 ft, mach=0.2, lever=95 %";

    [Fact]
    public void Every_place_shows_margins_before_and_after_the_step()
    {
        var run = CommandLine.Run([
            "manoeuvre",
            "torvik-75",
            "--waypoint",
            Low,
            "--waypoint",
            High,
            "--places",
            "3",
            "--fuel-step",
            "12 %",
            "--json",
        ]);
        Assert.Equal(0, run.ExitCode);
        var places = run.Json.GetProperty("places").EnumerateArray().ToList();
        Assert.Equal(4, places.Count);
        foreach (var place in places)
        {
            var hpc = place
                .GetProperty("compressors")
                .EnumerateArray()
                .Single(c => c.GetProperty("name").GetString() == "hpc");
            Assert.True(
                hpc.GetProperty("surge_margin_after_step").GetDouble()
                    < hpc.GetProperty("surge_margin_settled").GetDouble()
            );
        }
    }

    [Theory]
    [InlineData("at least two", Low)]
    [InlineData("same quantity", Low, "altitude=0 ft, mach=0.2, thrust=100 kN")]
    [InlineData("sets the power twice", Low + ", N1=80 %", High)]
    [InlineData("needs altitude, mach and a power", "altitude=0 ft, lever=50 %", High)]
    [InlineData("flaps is not known", "flaps=5", High)]
    [InlineData("has no unit", "altitude=35000, mach=0.8, lever=50 %", High)]
    public void Waypoints_that_make_no_manoeuvre_are_refused(string says, params string[] waypoints)
    {
        var run = CommandLine.Run(["manoeuvre", "velda-27", .. waypoints.SelectMany(w => new[] { "--waypoint", w })]);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains(says, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void Allowances_of_the_command_line_take_the_place_of_the_usual_ones()
    {
        var run = CommandLine.Run([
            "surge-margin",
            "velda-27",
            "--allowance",
            "hpc transient=12 %",
            "--allowance",
            "fan crosswind=2 %",
            "--json",
        ]);
        Assert.Equal(0, run.ExitCode);
        var hpc = Compressor(run, "hpc");
        // 4, 1, 12, 1 and 2 % systematic; 2.5 and 1.5 % random: 20 % and the root of 8.5, by hand.
        Assert.Equal(0.20 + Math.Sqrt(8.5e-4), hpc.GetProperty("margin_required").GetDouble(), 1e-12);
        var crosswind = Compressor(run, "fan")
            .GetProperty("allowances")
            .EnumerateArray()
            .Single(a => a.GetProperty("name").GetString() == "crosswind");
        Assert.Equal(0.02, crosswind.GetProperty("allowance").GetDouble());

        var unknown = CommandLine.Run(["surge-margin", "velda-27", "--allowance", "core transient=12 %"]);
        Assert.Equal(2, unknown.ExitCode);
        Assert.Contains("fan, booster, hpc", unknown.Error);
    }

    private static System.Text.Json.JsonElement Compressor(CommandLine run, string name) =>
        run.Json.GetProperty("compressors").EnumerateArray().Single(c => c.GetProperty("name").GetString() == name);
}
