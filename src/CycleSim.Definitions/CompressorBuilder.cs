using CycleSim.Engine;
using CycleSim.Maps;

namespace CycleSim.Definitions;

/// <summary>Core compressors: of given pressure ratio and efficiency, or stacked from their stages.</summary>
internal static class CompressorBuilder
{
    private const string StageTable = "compressor.stage";

    public static CompressorDefinition? Build(TableReader table, string source, List<Problem> problems)
    {
        var stages = table.Node.Children.Where(n => n.Name == StageTable).ToList();
        if (stages.Count > 0)
            return Stacked(table, stages, source, problems);
        if (!table.Has("pressure_ratio"))
            table.Report(
                "pressure_ratio",
                "is missing. Expected a number without unit, for instance pressure_ratio = 12.0, or [[compressor.stage]] tables."
            );
        PlacedMap? map = null;
        if (table.Has("map"))
        {
            var folder = Path.GetDirectoryName(Path.GetFullPath(source)) ?? "";
            map = MapFile.Read(Path.Combine(folder, table.Text("map")), problems);
        }

        return Of(table, table.Number("pressure_ratio"), DefinitionBuilder.Efficiency(table, ""), map);
    }

    private static CompressorDefinition? Stacked(
        TableReader table,
        List<TomlTableNode> nodes,
        string source,
        List<Problem> problems
    )
    {
        foreach (var key in new[] { "pressure_ratio", "isentropic_efficiency", "polytropic_efficiency", "map" })
            if (table.Has(key))
                table.Report(
                    key,
                    "follows from the stages of this compressor; drop it, or the [[compressor.stage]] tables."
                );
        var before = problems.Count;
        var stages = new List<StageDefinition>();
        foreach (var node in nodes)
        {
            var stage = new TableReader(Schema.Find(StageTable)!, node, source, problems);
            stage.ExactlyOne("polytropic_efficiency", "pressure_ratio");
            var usual = new StageDefinition
            {
                FlowCoefficient = stage.Number("flow_coefficient"),
                WorkCoefficient = stage.Number("work_coefficient"),
                BladeSpeed = stage.Number("blade_speed"),
            };
            stages.Add(
                usual with
                {
                    PolytropicEfficiency = stage.Number("polytropic_efficiency", 0.0),
                    PressureRatio = stage.Number("pressure_ratio", 0.0),
                    PeakPressure = stage.Number("peak_pressure", usual.PeakPressure),
                    PeakFlow = stage.Number("peak_flow", usual.PeakFlow),
                    Shape = stage.Number("shape", 0.0),
                    StatorReset = stage.Number("stator_reset", 0.0),
                    Bleed = stage.Number("bleed", 0.0),
                }
            );
        }

        if (problems.Count > before)
            return null;
        try
        {
            var stack = new StageStack(stages);
            var efficiency = new DesignEfficiency(stack.Design.Efficiency);
            return Of(table, stack.Design.PressureRatio, efficiency, StackedMap.Build(stack)) with
            {
                StageWork = stack.WorkShares(),
            };
        }
        catch (ArgumentException error)
        {
            table.Report("", error.Message.Split(" (Parameter")[0]);
            return null;
        }
    }

    private static CompressorDefinition Of(
        TableReader table,
        double pressureRatio,
        DesignEfficiency efficiency,
        PlacedMap? map
    ) =>
        new()
        {
            Name = table.Text("name"),
            Spool = table.Text("spool"),
            PressureRatio = pressureRatio,
            Efficiency = efficiency,
            Map = map,
            InletDuctLoss = table.Number("inlet_duct_loss", 0.0),
            ReynoldsExponent = table.Number("reynolds_exponent", 0.0),
        };
}
