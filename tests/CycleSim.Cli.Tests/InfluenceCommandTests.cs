namespace CycleSim.Cli.Tests;

public class InfluenceCommandTests
{
    [Fact]
    public void Coefficients_are_printed_with_their_steps_and_the_caution()
    {
        var run = CommandLine.Run(
            "influence",
            "velda-27",
            "--altitude",
            "35000 ft",
            "--mach",
            "0.78",
            "--thrust",
            "22 kN"
        );
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "efficiency of hpc +1 %",
                "customer-bleed +1 pt of hpc flow",
                "SFC %",
                "T41 K",
                "margin hpc pt",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
    }

    // One step of a coefficient against two points solved anew, through the command line.
    [Fact]
    public void A_small_bleed_does_what_its_coefficient_says()
    {
        string[] point = ["--altitude", "35000 ft", "--mach", "0.78", "--thrust", "22 kN", "--json"];
        var influence = CommandLine.Run(["influence", "velda-27", .. point]);
        var slope = influence
            .Json.GetProperty("derivatives")
            .GetProperty("fuel_flow_kg_per_s")
            .GetProperty("air_customer-bleed_fraction")
            .GetDouble();
        var without = CommandLine.Run(["point", "velda-27", .. point]).Number("fuel_flow_kg_per_s");
        var with = CommandLine
            .Run(["point", "velda-27", "--bleed", "customer-bleed=0.1 %", .. point])
            .Number("fuel_flow_kg_per_s");
        Assert.Equal(1.0, (with - without) / 0.001 / slope, 0.01);
    }

    [Fact]
    public void A_worn_turbine_burns_more_and_runs_hotter()
    {
        string[] point = ["point", "velda-27", "--altitude", "0 m", "--thrust", "100 kN", "--json"];
        var fresh = CommandLine.Run(point);
        var worn = CommandLine.Run([.. point, "--worn", "hpt efficiency=-2 %"]);
        Assert.True(worn.Number("fuel_flow_kg_per_s") > fresh.Number("fuel_flow_kg_per_s"));
        Assert.True(worn.Number("T45_K") > fresh.Number("T45_K") + 5.0);
    }

    [Theory]
    [InlineData("is not a part of", "--worn", "hpx efficiency=-2 %")]
    [InlineData("between -50 and 50 %", "--worn", "hpt efficiency=-90 %")]
    [InlineData("takes no condition or load", "--design", "--bleed", "customer-bleed=1 %")]
    public void What_means_nothing_is_refused(string message, params string[] arguments)
    {
        string[] power = arguments.Contains("--design") ? [] : ["--altitude", "0 m", "--thrust", "100 kN"];
        var run = CommandLine.Run(["influence", "velda-27", .. power, .. arguments]);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void The_survey_says_where_each_compressor_is_nearest_to_surge()
    {
        var run = CommandLine.Run("surge-margin", "velda-27", "--json");
        Assert.Equal(0, run.ExitCode);
        var compressors = run.Json.GetProperty("compressors").EnumerateArray().ToList();
        Assert.Equal(["fan", "booster", "hpc"], compressors.Select(c => c.GetProperty("name").GetString()));
        Assert.All(
            compressors,
            c =>
                Assert.Equal(
                    c.GetProperty("thinnest").GetProperty("surge_margin_constant_flow").GetDouble()
                        - c.GetProperty("margin_required").GetDouble(),
                    c.GetProperty("margin_slack").GetDouble(),
                    1e-12
                )
        );
        Assert.Contains("needed %", CommandLine.Run("surge-margin", "velda-27").Output);
    }
}
