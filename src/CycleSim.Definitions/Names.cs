using System.Text.RegularExpressions;

namespace CycleSim.Definitions;

/// <summary>Checks the names by which tables, the command line and outputs refer to parts of the engine.</summary>
internal static partial class Names
{
    public static void Check(
        TableReader top,
        List<TableReader> compressors,
        List<TableReader> turbines,
        params List<TableReader>[] others
    )
    {
        // Outputs list fan, compressors and turbines side by side, so these share one set of names.
        List<TableReader> components = [.. compressors, .. turbines];
        foreach (var table in components.Where(t => t.Text("name") == "fan"))
            table.Report("name", "'fan' is the name of the fan; give another.");
        foreach (var list in others.Prepend(components))
            CheckDistinct(list);
        foreach (var table in others.SelectMany(o => o).Concat(components).Prepend(top))
            if (table.Text("name") is { Length: > 0 } name && !Word().IsMatch(name))
                table.Report(
                    "name",
                    $"'{Spelling.OneLine(name)}' cannot be a name. Expected words of letters, digits, '-' and '_', a letter first."
                );
    }

    private static void CheckDistinct(List<TableReader> list)
    {
        var seen = new Dictionary<string, int>(StringComparer.OrdinalIgnoreCase);
        foreach (var table in list.OrderBy(t => t.Node.Line))
        {
            var name = table.Text("name");
            if (name.Length > 0 && !seen.TryAdd(name, table.Node.Line))
                table.Report("name", $"'{name}' is already the name of the one in line {seen[name]}.");
        }
    }

    [GeneratedRegex("^[A-Za-z][A-Za-z0-9_-]*( [A-Za-z0-9_-]+)*$")]
    private static partial Regex Word();
}
