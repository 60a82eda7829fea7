namespace CycleSim.Cli.Tests;

public class HealthCommandsTests
{
    private static readonly string[] Ground = ["--altitude", "0 ft", "--mach", "0", "--isa", "5 K", "--N1", "97 %"];

    [Fact]
    public void A_worn_part_is_found_from_the_readings_of_its_own_point()
    {
        // The readings: the worn engine against the new one at the same N1.
        var fresh = CommandLine.Run(["point", "velda-27", .. Ground, "--json"]);
        var worn = CommandLine.Run(["point", "velda-27", .. Ground, "--worn", "hpt efficiency=-2 %", "--json"]);
        string Shift(string option, string name, string unit) =>
            FormattableString.Invariant($"{option}={worn.Number(name) - fresh.Number(name):R} {unit}");
        var run = CommandLine.Run([
            "diagnose",
            "velda-27",
            .. Ground,
            "--shift",
            Shift("EGT", "T45_K", "K"),
            "--shift",
            Shift("fuel-flow", "fuel_flow_kg_per_s", "kg/s"),
            "--shift",
            FormattableString.Invariant(
                $"EPR={worn.Number("engine_pressure_ratio") - fresh.Number("engine_pressure_ratio"):R}"
            ),
            "--json",
        ]);
        Assert.Equal(0, run.ExitCode);
        var best = run.Json.GetProperty("alone").EnumerateArray().First();
        Assert.Equal("hpt efficiency", best.GetProperty("name").GetString());
        Assert.Equal(-0.02, best.GetProperty("change").GetDouble(), 1e-5);
    }

    [Fact]
    public void Egt_margin_and_uncertainty_print_units_and_caution()
    {
        var margin = CommandLine.Run([
            "egt-margin",
            "velda-27",
            "--egt-limit",
            "1260 K",
            "--worn",
            "hpt efficiency=-2 %",
            "--temperatures",
            "C",
        ]);
        Assert.Equal(0, margin.ExitCode);
        foreach (var text in new[] { "EGT °C", "margin K", "nothing left at", "hpt efficiency", "not for dispatch" })
            Assert.Contains(text, margin.Output);

        var uncertain = CommandLine.Run([
            "uncertainty",
            "velda-27",
            .. Ground,
            "--on",
            "hpt efficiency: normal 0.5 %",
            "--draws",
            "500",
        ]);
        Assert.Equal(0, uncertain.ExitCode);
        foreach (var text in new[] { "first order", "drawn", "T45_K", "seed 1", "not for dispatch" })
            Assert.Contains(text, uncertain.Output);
    }

    [Theory]
    [InlineData("no limit on T45", "egt-margin", "velda-27")]
    [InlineData("is not a part", "egt-margin", "velda-27", "--egt-limit", "1260 K", "--worn", "hp turbine=-2 %")]
    [InlineData("say at what power", "diagnose", "velda-27", "--altitude", "0 ft", "--shift", "EGT=3 K")]
    [InlineData(
        "is no reading",
        "diagnose",
        "velda-27",
        "--altitude",
        "0 ft",
        "--N1",
        "95 %",
        "--shift",
        "vibration=3 K"
    )]
    [InlineData("held as the power", "diagnose", "velda-27", "--altitude", "0 ft", "--N1", "95 %", "--shift", "N1=1 %")]
    [InlineData("is a force", "diagnose", "velda-27", "--altitude", "0 ft", "--N1", "95 %", "--shift", "EGT=3 kN")]
    [InlineData(
        "distributions are",
        "uncertainty",
        "velda-27",
        "--altitude",
        "0 ft",
        "--N1",
        "95 %",
        "--on",
        "mach: 3 %"
    )]
    [InlineData("no input", "uncertainty", "velda-27", "--altitude", "0 ft", "--N1", "95 %")]
    public void Questions_that_make_no_sense_are_refused(string says, params string[] arguments)
    {
        var run = CommandLine.Run(arguments);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains(says, run.Error);
        Assert.Equal("", run.Output);
    }
}
