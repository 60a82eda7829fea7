using System.Globalization;
using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Maps;
using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

public class MapFileTests
{
    [Fact]
    public void An_engine_runs_on_a_map_of_its_users()
    {
        var model = new EngineModel(WithMap(Table()).Engine);
        var design = model.DesignPoint();
        Assert.Equal(12.0, design.Compressors[2].PressureRatio, 1e-9);
        foreach (var lever in new[] { 0.5, 0.7, 0.9 })
            Assert.InRange(
                model.At(FlightCondition.AtIsaOffset(2000.0, 0.3, 0.0), Quantity.Lever, lever).Audit.LargestImbalance,
                0.0,
                1e-9
            );
    }

    [Theory]
    [InlineData("the header must read", 1, "speed,beta,flow,ratio,efficiency")]
    [InlineData("is not five numbers", 2, "0.4,0,one,2,0.8")]
    [InlineData("pressure_ratio must be above 1", 2, "0.4,0,0.2,0.9,0.8")]
    [InlineData("efficiency must lie above 0", 2, "0.4,0,0.2,1.2,1.8")]
    [InlineData("again; the first is in line", 3, "0.4,0,0.2,1.2,0.8")]
    [InlineData("has no row for speed", 3, "# left out")]
    [InlineData("crosses that of", 2, "0.4,0,5,1.1,0.8")]
    [InlineData("does not rise with beta", 2, "0.4,0,5,9,0.8")]
    public void A_table_that_cannot_be_a_map_is_refused_with_its_line(string message, int line, string text)
    {
        var lines = Table();
        lines[line] = text;
        if (line == 3 && !text.StartsWith('#'))
            lines[line] = lines[2];
        var error = Assert.Throws<DefinitionException>(() => WithMap(lines));
        Assert.Contains(error.Problems, p => p.Message.Contains(message));
        Assert.Contains("hpc-map.csv", error.Message);
    }

    [Fact]
    public void A_map_that_is_not_there_is_named()
    {
        var error = Assert.Throws<DefinitionException>(() => WithMap(null));
        Assert.Contains("cannot be read", error.Message);
    }

    // Comment, header, rows from the general shape at a pressure ratio of 12: a table like any user's.
    private static string[] Table()
    {
        var map = CompressorShape.Build(12.0);
        var lines = new List<string> { "# test map", "speed,beta,flow,pressure_ratio,efficiency" };
        foreach (var speed in map.Speeds.Where(s => s > 0.39))
        foreach (var beta in map.Betas.Where((_, j) => j % 2 == 0))
        {
            map.Read(speed, beta, out var m);
            lines.Add(
                string.Create(
                    CultureInfo.InvariantCulture,
                    $"{speed:F2},{beta},{m.Value[0]:F8},{m.Value[1] + 1.0:F8},{0.86 * m.Value[2]:F8}"
                )
            );
        }

        return [.. lines];
    }

    private static LoadedDefinition WithMap(string[]? lines)
    {
        var folder = Directory.CreateTempSubdirectory();
        try
        {
            if (lines is not null)
                File.WriteAllLines(Path.Combine(folder.FullName, "hpc-map.csv"), lines);
            var path = Path.Combine(folder.FullName, "engine.toml");
            File.WriteAllText(
                path,
                EngineLibrary
                    .Text("velda-27")
                    .Replace("pressure_ratio = 12.0", "pressure_ratio = 12.0\nmap = \"hpc-map.csv\"")
            );
            return DefinitionFile.Load(path);
        }
        finally
        {
            folder.Delete(true);
        }
    }
}
