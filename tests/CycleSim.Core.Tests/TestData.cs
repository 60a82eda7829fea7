using System.Globalization;

namespace CycleSim.Tests;

/// <summary>Reads the check tables beside the tests: a comment with the source, a header, rows.</summary>
internal static class TestData
{
    public static IEnumerable<Dictionary<string, string>> Rows(string file)
    {
        var lines = File.ReadLines(Path.Combine(AppContext.BaseDirectory, "Data", file)).Where(l => !l.StartsWith('#'));
        string[]? header = null;
        foreach (var line in lines)
        {
            var cells = line.Split(',');
            if (header is null)
                header = cells;
            else
                yield return header.Zip(cells).ToDictionary(p => p.First, p => p.Second);
        }
    }

    public static double Number(this Dictionary<string, string> row, string column) =>
        double.Parse(row[column], CultureInfo.InvariantCulture);
}
