using System.Text.Json;

namespace CycleSim.Cli.Tests;

public class JsonReferenceTests
{
    // Every name in the documents stands in JSON.md, so that the page cannot fall behind.
    [Fact]
    public void Every_name_is_described()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "CycleSim.sln")))
            folder = folder.Parent;
        var page = File.ReadAllText(Path.Combine(folder!.FullName, "src", "CycleSim.Cli", "JSON.md"));
        var names = new HashSet<string>();
        Collect(CommandLine.Run("flat-rating", "velda-27", "--json").Json, names);
        Collect(CommandLine.Run("point", "velda-27", "--design", "--json").Json, names);
        Collect(CommandLine.Run("engines", "--json").Json, names);
        Collect(CommandLine.Run("surge-margin", "velda-27", "--json").Json, names);
        Collect(
            CommandLine
                .Run(
                    "penalties",
                    "velda-27",
                    "--altitude",
                    "0 m",
                    "--load",
                    "packs: customer-bleed=1 %, high=50 kW",
                    "--json"
                )
                .Json,
            names
        );
        Collect(
            CommandLine.Run("power-setting", "velda-27", "--load", "packs: customer-bleed=1 %", "--json").Json,
            names
        );
        Collect(
            CommandLine
                .Run(
                    "power-setting",
                    "velda-27",
                    "--set-at",
                    "60 kt",
                    "--altitudes",
                    "0 ft",
                    "--outside",
                    "30 °C",
                    "--json"
                )
                .Json,
            names
        );
        Collect(
            CommandLine.Run("reduced-thrust", "velda-27", "--altitude", "0 m", "--assumed", "45 °C", "--json").Json,
            names
        );
        Assert.True(names.Count > 80, $"{names.Count} names");
        Assert.All(names, name => Assert.Contains($"`{name}`", page));
    }

    private static void Collect(JsonElement element, HashSet<string> names)
    {
        if (element.ValueKind == JsonValueKind.Object)
            foreach (var property in element.EnumerateObject())
            {
                names.Add(property.Name);
                Collect(property.Value, names);
            }
        else if (element.ValueKind == JsonValueKind.Array)
            foreach (var item in element.EnumerateArray())
                Collect(item, names);
    }
}
