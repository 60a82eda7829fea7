using CycleSim.Engine;

namespace CycleSim.Definitions;

/// <summary>Air taken from compressors: where from, where to, how much.</summary>
internal static class AirPorts
{
    public static AirPort Build(
        TableReader air,
        List<TableReader> compressors,
        List<CompressorDefinition?> built,
        List<TableReader> turbines,
        bool hasBypass
    )
    {
        var from = air.Text("from");
        var compressorNames = compressors.Select(c => c.Text("name")).ToList();
        // A compressor of the fan's name has its own message.
        var fromFan = hasBypass && from == AirPort.Fan && !compressorNames.Contains(AirPort.Fan);
        if (hasBypass)
            compressorNames.Add(AirPort.Fan);
        if (from.Length > 0 && !compressorNames.Contains(from))
            air.Report(
                "from",
                $"'{Spelling.OneLine(from)}' is no place that air can come from; there are {string.Join(", ", compressorNames)}.{Spelling.Suggest(from, compressorNames)}"
            );
        var (destination, turbine) = Destination(air, turbines, hasBypass);
        if (air.Has("open_below") != air.Has("shut_above"))
            air.Report("", "needs open_below and shut_above together, or neither.");
        else if (air.Number("open_below", 0.0) >= air.Number("shut_above", 1.0))
            air.Report("open_below", "must lie below shut_above.");
        if (!air.Has("fraction") && !air.Has("flow"))
            air.Report("", "needs fraction or flow; \"0 %\" for a port that is shut.");
        if (fromFan)
            CheckFanAir(air, destination);
        return new AirPort
        {
            Name = air.Text("name"),
            From = from,
            To = destination,
            Turbine = turbine,
            WorkFraction = air.Has("stage")
                ? BehindStage(air, from, built.FirstOrDefault(c => c?.Name == from))
                : air.Number("work_fraction", 1.0),
            Fraction = air.Number("fraction", 0.0),
            Flow = air.Number("flow", 0.0),
            OpenBelow = air.Number("open_below", 0.0),
            ShutAbove = air.Number("shut_above", 0.0),
            NormallyShut = air.Text("normally") == "shut",
        };
    }

    private static void CheckFanAir(TableReader air, AirDestination destination)
    {
        foreach (var key in new[] { "work_fraction", "stage" })
            if (air.Has(key))
                air.Report(key, "is for a core compressor; air from the fan leaves behind it. Drop this key.");
        if (destination != AirDestination.Overboard)
            air.Report("to", "cannot be reached from the fan stream; fan air goes \"overboard\".");
    }

    private static double BehindStage(TableReader air, string from, CompressorDefinition? compressor)
    {
        if (air.Has("work_fraction"))
            air.Report("stage", "is given beside work_fraction; give one of the two.");
        // A compressor that was refused has its own message.
        if (compressor is null || double.IsNaN(air.Number("stage")))
            return double.NaN;
        var stage = (int)air.Number("stage");
        if (compressor.StageWork.Count == 0)
            air.Report(
                "stage",
                $"needs the stages of '{from}'; give it [[compressor.stage]] tables, or say work_fraction here."
            );
        else if (stage > compressor.StageWork.Count)
            air.Report("stage", $"{stage} does not exist; '{from}' has {compressor.StageWork.Count} stages.");
        else
            return compressor.StageWork[stage - 1];
        return double.NaN;
    }

    private static (AirDestination To, string? Turbine) Destination(
        TableReader air,
        List<TableReader> turbines,
        bool hasBypass
    )
    {
        var to = air.Text("to");
        if (to is "" or "overboard")
            return (AirDestination.Overboard, null);
        if (to == "bypass duct")
        {
            if (!hasBypass)
                air.Report("to", "'bypass duct' does not exist in an engine without [fan]; say \"overboard\".");
            return (AirDestination.BypassDuct, null);
        }

        var names = turbines.Select(t => t.Text("name")).ToList();
        foreach (var name in names.Where(n => n.Length > 0))
        {
            if (to == name + " vane")
                return (AirDestination.Vane, name);
            if (to == name + " rotor")
                return (AirDestination.Rotor, name);
        }

        var possible = (hasBypass ? new[] { "overboard", "bypass duct" } : ["overboard"])
            .Concat(names.SelectMany(n => new[] { n + " vane", n + " rotor" }))
            .ToList();
        air.Report(
            "to",
            $"'{Spelling.OneLine(to)}' is no place for air to go; there are {string.Join(", ", possible.Select(p => $"\"{p}\""))}.{Spelling.Suggest(to, possible)}"
        );
        return (AirDestination.Overboard, null);
    }

    public static void CheckFlows(List<TableReader> compressors, List<TableReader> air)
    {
        foreach (var from in compressors.Select(c => c.Text("name")).Append(AirPort.Fan))
        {
            var taken = air.Where(a => a.Text("from") == from && a.Has("fraction")).ToList();
            var sum = taken.Sum(a => a.Number("fraction", 0.0));
            if (sum >= 1.0)
                taken[^1]
                    .Report(
                        "fraction",
                        $"brings what is taken from '{from}' to {sum * 100.0:F0} % of its flow; less than 100 % is there."
                    );
        }
    }
}
