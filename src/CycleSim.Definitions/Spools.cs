namespace CycleSim.Definitions;

/// <summary>Checks who turns whom.</summary>
internal static class Spools
{
    public static void Check(
        TableReader fan,
        List<TableReader> compressors,
        List<TableReader> turbines,
        List<TableReader> spools
    )
    {
        var names = spools.Select(s => s.Text("name")).ToList();
        var driven = (fan.Present ? new[] { fan } : []).Concat(compressors).ToList();
        var allFound = true;
        foreach (var table in driven.Concat(turbines))
        {
            var spool = table.Text("spool");
            if (spool.Length == 0 || names.Contains(spool))
                continue;
            allFound = false;
            table.Report(
                "spool",
                $"'{Spelling.OneLine(spool)}' is not the name of a [[spool]]; there are {string.Join(", ", names)}."
                    + Spelling.Suggest(spool, names)
            );
        }

        if (allFound)
            CheckLoads(driven, turbines, spools);
        if (spools.Count > 3)
            spools[3].Report("", "is a fourth spool; an engine has at most three.");
        if (compressors.Count > 3)
            compressors[3].Report("", "is a fourth compressor of the core stream; there are at most three.");
    }

    private static void CheckLoads(List<TableReader> driven, List<TableReader> turbines, List<TableReader> spools)
    {
        foreach (var spool in spools.Where(s => s.Text("name").Length > 0))
        {
            var name = spool.Text("name");
            var count = turbines.Count(t => t.Text("spool") == name);
            if (count == 0)
                spool.Report(
                    "name",
                    $"spool '{name}' has no turbine to turn it; give a [[turbine]] spool = \"{name}\"."
                );
            if (count > 1)
                spool.Report("name", $"spool '{name}' has {count} turbines; give it one with the stages of all.");
            if (driven.All(d => d.Text("spool") != name))
                spool.Report("name", $"spool '{name}' turns neither fan nor compressor.");
        }

        // N1 and the lever speak of the first spool.
        if (spools.Count > 1 && driven.Count > 0 && driven[0].Text("spool") is { Length: > 0 } low)
            if (spools[0].Text("name") is { Length: > 0 } first && first != low)
                spools[0]
                    .Report(
                        "name",
                        $"spool '{first}' stands first, but {driven[0].Node.Path} turns with '{low}'; the low-pressure spool comes "
                            + $"first, as its speed is N1. Move [[spool]] '{low}' to the top of the spools."
                    );
    }
}
