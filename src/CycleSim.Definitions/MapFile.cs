using System.Globalization;
using CycleSim.Maps;

namespace CycleSim.Definitions;

/// <summary>
/// Reads a compressor map from a table of comma-separated values: lines that begin with # are comments, then the header
/// speed,beta,flow,pressure_ratio,efficiency, then one row a point, in any order. speed is relative corrected speed (1 at
/// design), beta the position along the speed line from 0 at its choked end to 1 on the surge line; every speed has the same
/// betas. flow is corrected flow in any unit: the map is scaled to the design point.
/// </summary>
/// <remarks>
/// Checked: the grid is complete, with at least four speeds (1 among their range) and four betas from 0 to 1; numbers are
/// finite; pressure ratios above 1, efficiencies above 0 and at most 1; along a line flow does not rise and the pressure ratio
/// rises with beta; speed lines do not cross: at every beta flow and pressure ratio rise with speed.
/// </remarks>
internal static class MapFile
{
    private static readonly string[] Columns = ["speed", "beta", "flow", "pressure_ratio", "efficiency"];

    private readonly record struct Row(
        int Line,
        double Speed,
        double Beta,
        double Flow,
        double Ratio,
        double Efficiency
    );

    /// <summary>The map, or null with the problems added.</summary>
    public static PlacedMap? Read(string path, List<Problem> problems)
    {
        var before = problems.Count;
        string[] lines;
        try
        {
            lines = File.ReadAllLines(path);
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            problems.Add(new Problem(path, 0, 0, "", $"cannot be read: {error.Message}"));
            return null;
        }

        var rows = Rows(path, lines, problems);
        if (problems.Count > before)
            return null;
        var speeds = rows.Select(r => r.Speed).Distinct().Order().ToArray();
        var betas = rows.Select(r => r.Beta).Distinct().Order().ToArray();
        if (Grid(path, rows, speeds, betas, problems) is not { } grid)
            return null;
        CheckLines(path, grid, problems);
        if (problems.Count > before)
            return null;

        double[,] Values(Func<Row, double> pick)
        {
            var values = new double[speeds.Length, betas.Length];
            for (var i = 0; i < speeds.Length; i++)
            for (var j = 0; j < betas.Length; j++)
                values[i, j] = pick(grid[i, j]);
            return values;
        }

        var map = new CompressorMap(
            speeds,
            betas,
            Values(r => r.Flow),
            Values(r => r.Ratio),
            Values(r => r.Efficiency)
        );
        return new PlacedMap(map, BestPosition(map), speeds[0]);
    }

    private static List<Row> Rows(string path, string[] lines, List<Problem> problems)
    {
        var rows = new List<Row>();
        var header = false;
        for (var i = 0; i < lines.Length; i++)
        {
            var text = lines[i].Trim();
            if (text.Length == 0 || text.StartsWith('#'))
                continue;
            var cells = text.Split(',').Select(c => c.Trim()).ToArray();
            if (!header)
            {
                if (!cells.SequenceEqual(Columns))
                {
                    problems.Add(
                        new Problem(
                            path,
                            i + 1,
                            1,
                            "",
                            $"the header must read {string.Join(",", Columns)}; it reads '{text}'."
                        )
                    );
                    return rows;
                }

                header = true;
                continue;
            }

            var numbers = new double[Columns.Length];
            var good = cells.Length == Columns.Length;
            for (var k = 0; good && k < numbers.Length; k++)
                good =
                    double.TryParse(cells[k], NumberStyles.Float, CultureInfo.InvariantCulture, out numbers[k])
                    && double.IsFinite(numbers[k]);
            if (!good)
            {
                problems.Add(
                    new Problem(
                        path,
                        i + 1,
                        1,
                        "",
                        $"'{text}' is not five numbers, for instance 1.0,0.5,42.0,12.1,0.86."
                    )
                );
                continue;
            }

            var row = new Row(i + 1, numbers[0], numbers[1], numbers[2], numbers[3], numbers[4]);
            if (!(row.Speed > 0.0) || !(row.Flow > 0.0))
                problems.Add(new Problem(path, row.Line, 1, "", "speed and flow must be above zero."));
            if (row.Beta is not (>= 0.0 and <= 1.0))
                problems.Add(new Problem(path, row.Line, 1, "", "beta must lie between 0 and 1."));
            if (!(row.Ratio > 1.0))
                problems.Add(new Problem(path, row.Line, 1, "", "pressure_ratio must be above 1."));
            if (row.Efficiency is not (> 0.0 and <= 1.0))
                problems.Add(new Problem(path, row.Line, 1, "", "efficiency must lie above 0 and at most at 1."));
            rows.Add(row);
        }

        if (!header)
            problems.Add(new Problem(path, 0, 0, "", $"has no header; expected {string.Join(",", Columns)}."));
        return rows;
    }

    private static Row[,]? Grid(string path, List<Row> rows, double[] speeds, double[] betas, List<Problem> problems)
    {
        if (speeds.Length < 4 || betas.Length < 4 || betas[0] != 0.0 || betas[^1] != 1.0)
        {
            problems.Add(
                new Problem(
                    path,
                    0,
                    0,
                    "",
                    "needs at least four speeds and four betas, the betas from 0 (choked end) to 1 (surge line)."
                )
            );
            return null;
        }

        if (speeds[0] > 1.0 || speeds[^1] < 1.0)
        {
            problems.Add(new Problem(path, 0, 0, "", "must cover speed 1, the design speed."));
            return null;
        }

        var grid = new Row[speeds.Length, betas.Length];
        foreach (var row in rows)
        {
            ref var cell = ref grid[Array.IndexOf(speeds, row.Speed), Array.IndexOf(betas, row.Beta)];
            if (cell.Line > 0)
                problems.Add(
                    new Problem(
                        path,
                        row.Line,
                        1,
                        "",
                        $"gives speed {row.Speed:G6}, beta {row.Beta:G6} again; the first is in line {cell.Line}."
                    )
                );
            cell = row;
        }

        for (var i = 0; i < speeds.Length; i++)
        for (var j = 0; j < betas.Length; j++)
            if (grid[i, j].Line == 0)
                problems.Add(
                    new Problem(
                        path,
                        0,
                        0,
                        "",
                        $"has no row for speed {speeds[i]:G6}, beta {betas[j]:G6}; every speed needs every beta."
                    )
                );
        return problems.Any(p => p.Source == path) ? null : grid;
    }

    private static void CheckLines(string path, Row[,] grid, List<Problem> problems)
    {
        for (var i = 0; i < grid.GetLength(0); i++)
        for (var j = 0; j < grid.GetLength(1); j++)
        {
            var here = grid[i, j];
            void Report(string message) => problems.Add(new Problem(path, here.Line, 1, "", message));
            if (j > 0 && here.Flow > grid[i, j - 1].Flow)
                Report(
                    $"the flow rises with beta along the line of speed {here.Speed:G6}; it must fall towards surge."
                );
            if (j > 0 && here.Ratio <= grid[i, j - 1].Ratio)
                Report($"the pressure ratio does not rise with beta along the line of speed {here.Speed:G6}.");
            if (i > 0 && (here.Flow <= grid[i - 1, j].Flow || here.Ratio <= grid[i - 1, j].Ratio))
                Report(
                    $"the line of speed {here.Speed:G6} crosses that of {grid[i - 1, j].Speed:G6} at beta {here.Beta:G6}: flow and pressure ratio must both rise with speed."
                );
        }
    }

    /// <summary>The design point goes where the efficiency of the design speed is highest.</summary>
    private static double BestPosition(CompressorMap map)
    {
        double best = 0.5,
            highest = 0.0;
        for (var beta = 0.02; beta < 0.985; beta += 0.005)
        {
            map.Read(1.0, beta, out var m);
            if (m.Value[2] > highest)
                (best, highest) = (beta, m.Value[2]);
        }

        return best;
    }
}
