using System.Globalization;
using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

public class StackedCompressorTests
{
    private const string Compressor = """
        pressure_ratio = 12.0
        polytropic_efficiency = 0.905
        inlet_duct_loss = "1 %"
        """;

    [Fact]
    public void An_engine_runs_on_a_compressor_stacked_from_its_stages()
    {
        var engine = Parse(Stages(7)).Engine;
        var model = new EngineModel(engine);
        var design = model.DesignPoint();
        Assert.Equal(engine.Compressors[1].PressureRatio, design.Compressors[2].PressureRatio, 1e-9);
        Assert.InRange(design.Compressors[2].PressureRatio, 10.0, 16.0);
        foreach (var lever in new[] { 0.55, 0.7, 0.85, 1.0 })
        {
            var point = model.At(FlightCondition.AtIsaOffset(3000.0, 0.4, 0.0), Quantity.Lever, lever);
            Assert.InRange(point.Audit.LargestImbalance, 0.0, 1e-9);
            Assert.InRange(point.Compressors[2].SurgeMarginConstantSpeed, 0.02, 0.6);
        }
    }

    [Theory]
    [InlineData("follows from the stages", "pressure_ratio = 12.0\n", "")]
    [InlineData("flow_coefficient", "", "flow_coefficient = 2.5")]
    [InlineData("Did you mean 'blade_speed'?", "", "blade_sped = \"375 m/s\"")]
    public void Mistakes_in_stages_are_reported(string message, string extra, string replacement)
    {
        var stages = Stages(7);
        if (extra.Length > 0)
            stages = extra + stages;
        if (replacement.StartsWith("flow", StringComparison.Ordinal))
            stages = stages.Replace("flow_coefficient = 0.51", replacement);
        if (replacement.StartsWith("blade", StringComparison.Ordinal))
            stages = stages.Replace("blade_speed = \"375 m/s\"", replacement);
        Assert.Contains(message, Assert.Throws<DefinitionException>(() => Parse(stages)).Message);
    }

    [Fact]
    public void A_compressor_needs_a_pressure_ratio_or_stages() =>
        Assert.Contains(
            "or [[compressor.stage]] tables",
            Assert.Throws<DefinitionException>(() => Parse("polytropic_efficiency = 0.9\n")).Message
        );

    // Seven stages of equal work: behind the third, three sevenths of it are done.
    [Fact]
    public void A_port_may_name_the_stage_behind_which_it_takes_its_air()
    {
        var engine = Parse(Stages(7), "stage = 3").Engine;
        var port = engine.AirPorts.Single(p => p.Name == "customer-bleed");
        Assert.Equal(3.0 / 7.0, port.WorkFraction, 1e-12);
        Assert.Equal(1.0, engine.Compressors[1].StageWork[^1], 1e-12);
    }

    [Theory]
    [InlineData("stage = 8", "8 does not exist; 'hpc' has 7 stages")]
    [InlineData("stage = 2.5", "whole number")]
    [InlineData("stage = 3\nwork_fraction = 0.4", "is given beside work_fraction")]
    public void A_stage_that_is_not_there_is_refused(string key, string message)
    {
        var problem = Assert.Single(Assert.Throws<DefinitionException>(() => Parse(Stages(7), key)).Problems);
        Assert.Equal("air[4].stage", problem.Key);
        Assert.Contains(message, problem.Message);
    }

    private static LoadedDefinition Parse(string compressor, string customerBleed = "work_fraction = 0.6")
    {
        var text = EngineLibrary.Text("velda-27").ReplaceLineEndings("\n");
        Assert.Contains(Compressor, text);
        Assert.Contains("work_fraction = 0.6", text);
        text = text.Replace(Compressor, compressor).Replace("work_fraction = 0.6", customerBleed);
        return DefinitionFile.Parse(text, "stacked");
    }

    private static string Stages(int count) =>
        "inlet_duct_loss = \"1 %\"\n"
        + string.Concat(
            Enumerable
                .Range(0, count)
                .Select(i =>
                    string.Create(
                        CultureInfo.InvariantCulture,
                        $"""

                        [[compressor.stage]]
                        flow_coefficient = 0.51
                        work_coefficient = 0.36
                        blade_speed = "375 m/s"
                        polytropic_efficiency = 0.905
                        stator_reset = {(i < 4 ? 1.2 : 0.0)}

                        """
                    )
                )
        );
}
