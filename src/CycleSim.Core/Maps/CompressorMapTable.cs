using System.Globalization;
using System.Text;

namespace CycleSim.Maps;

/// <summary>
/// A compressor map as a table of comma-separated values. Lines that begin with # are comments; then the header
/// <c>speed,beta,flow,pressure_ratio,efficiency</c>; then one row a point, in any order, decimal points.
/// <c>speed</c> is relative corrected speed (1 at design), <c>beta</c> the position along the speed line from 0 at its choked
/// end to 1 on the surge line, <c>flow</c> corrected flow in any unit, <c>pressure_ratio</c> total to total,
/// <c>efficiency</c> isentropic.
/// </summary>
/// <remarks>
/// Rules, checked on reading:
/// (1) numbers are finite, speed and flow above 0, beta from 0 to 1, pressure ratio above 1, efficiency above 0 and at most 1;
/// (2) the grid is complete and without repetition, with at least four speeds, 1 among their range, and four betas, 0 and 1
/// among them;
/// (3) along a speed line, with rising beta, the flow does not rise (it may stand still where the line is choked) and the
/// pressure ratio rises;
/// (4) at the same beta flow and pressure ratio rise with speed. With (3) this keeps speed lines from meeting anywhere in the
/// plane of flow and pressure ratio: a common point of two lines would lie at a higher or the same beta on the faster one,
/// where its pressure ratio is higher, or at a lower one, where its flow is;
/// (5) the curves that <see cref="CompressorMap"/> lays through the points keep to (1) and to the rise with speed of (4)
/// between them too, looked at in quarters of each step.
/// </remarks>
public static class CompressorMapTable
{
    private const int FewestLines = 4;
    private const int Parts = 4;

    private static readonly string[] Columns = ["speed", "beta", "flow", "pressure_ratio", "efficiency"];

    private static readonly string Header = string.Join(',', Columns);

    private readonly record struct Row(
        int Line,
        double Speed,
        double Beta,
        double Flow,
        double PressureRatio,
        double Efficiency
    );

    /// <summary>
    /// The map of a table. Its design point goes where the efficiency at design speed is highest.
    /// </summary>
    /// <param name="text">the whole table</param>
    /// <param name="name">what the messages call it, for instance the file</param>
    /// <exception cref="MapTableException">The table breaks a rule; all breaches of the first kind found are listed.</exception>
    public static PlacedMap Read(string text, string name)
    {
        var problems = new List<(int Line, string Message)>();
        void Stop()
        {
            if (problems.Count > 0)
                throw new MapTableException(name, [.. problems.OrderBy(p => p.Line)]);
        }

        var rows = Rows(text, problems);
        Stop();
        var speeds = rows.Select(r => r.Speed).Distinct().Order().ToArray();
        var betas = rows.Select(r => r.Beta).Distinct().Order().ToArray();
        var grid = Grid(rows, speeds, betas, problems);
        Stop();
        CheckExtent(speeds, betas, problems);
        CheckLines(grid, problems);
        Stop();
        var map = new CompressorMap(
            speeds,
            betas,
            Values(grid, r => r.Flow),
            Values(grid, r => r.PressureRatio),
            Values(grid, r => r.Efficiency)
        );
        CheckBetween(map, grid, problems);
        Stop();
        return new PlacedMap(map, BestPosition(map), speeds[0]);
    }

    /// <summary>The table of a map, at its grid points, with ten figures; <see cref="Read"/> makes the same map of it.</summary>
    /// <param name="map">any map</param>
    /// <param name="comment">for the top, lines of it; may be empty</param>
    /// <param name="efficiency">factor on the efficiency, for a map that gives it relative to design</param>
    public static string Write(CompressorMap map, string comment = "", double efficiency = 1.0)
    {
        var text = new StringBuilder();
        foreach (var line in comment.Split('\n', StringSplitOptions.RemoveEmptyEntries))
            text.Append("# ").Append(line.Trim()).Append('\n');
        text.Append(Header).Append('\n');
        foreach (var speed in map.Speeds)
        foreach (var beta in map.Betas)
        {
            map.Read(speed, beta, out var m);
            text.Append(
                CultureInfo.InvariantCulture,
                $"{speed:G10},{beta:G10},{m.Value[0]:G10},{m.Value[1] + 1.0:G10},{m.Value[2] * efficiency:G10}\n"
            );
        }

        return text.ToString();
    }

    private static List<Row> Rows(string text, List<(int, string)> problems)
    {
        var rows = new List<Row>();
        var header = false;
        var number = 0;
        foreach (var raw in text.Split('\n'))
        {
            number++;
            var line = raw.Trim();
            if (line.Length == 0 || line.StartsWith('#'))
                continue;
            if (header)
                AddRow(line, number, rows, problems);
            else if (line.Split(',').Select(c => c.Trim()).SequenceEqual(Columns))
                header = true;
            else
            {
                problems.Add((number, $"the header must read {Header}; it reads '{line}'."));
                return rows;
            }
        }

        if (!header)
            problems.Add((0, $"has no header; expected {Header}, then one row a point."));
        else if (rows.Count == 0 && problems.Count == 0)
            problems.Add((0, "has no rows; expected one a point, for instance 1.0,0.5,42.0,12.1,0.86."));
        return rows;
    }

    private static void AddRow(string line, int number, List<Row> rows, List<(int, string)> problems)
    {
        var cells = line.Split(',');
        var numbers = new double[Columns.Length];
        var good = cells.Length == Columns.Length;
        for (var k = 0; good && k < numbers.Length; k++)
            good =
                double.TryParse(cells[k], NumberStyles.Float, CultureInfo.InvariantCulture, out numbers[k])
                && double.IsFinite(numbers[k]);
        if (!good)
        {
            problems.Add((number, $"'{line}' is not five numbers, for instance 1.0,0.5,42.0,12.1,0.86."));
            return;
        }

        var row = new Row(number, numbers[0], numbers[1], numbers[2], numbers[3], numbers[4]);
        rows.Add(row);
        void Expect(bool holds, string what)
        {
            if (!holds)
                problems.Add((number, what));
        }

        Expect(row.Speed > 0.0, $"speed must be above 0; it is {cells[0].Trim()}.");
        Expect(row.Beta is >= 0.0 and <= 1.0, $"beta must lie between 0 and 1; it is {cells[1].Trim()}.");
        Expect(row.Flow > 0.0, $"flow must be above 0; it is {cells[2].Trim()}.");
        Expect(row.PressureRatio > 1.0, $"pressure_ratio must be above 1; it is {cells[3].Trim()}.");
        Expect(
            row.Efficiency is > 0.0 and <= 1.0,
            $"efficiency must lie above 0 and at most at 1; it is {cells[4].Trim()}."
        );
    }

    private static Row[,] Grid(List<Row> rows, double[] speeds, double[] betas, List<(int, string)> problems)
    {
        var grid = new Row[speeds.Length, betas.Length];
        foreach (var row in rows)
        {
            ref var cell = ref grid[Array.IndexOf(speeds, row.Speed), Array.IndexOf(betas, row.Beta)];
            if (cell.Line > 0)
                problems.Add(
                    (
                        row.Line,
                        $"gives speed {Text(row.Speed)}, beta {Text(row.Beta)} again; the first is in line {cell.Line}."
                    )
                );
            cell = row;
        }

        // A value that most lines do not have is more likely mistyped than missing from all the others.
        var atSpeed = rows.GroupBy(r => r.Speed).ToDictionary(g => g.Key, g => g.ToList());
        var atBeta = rows.GroupBy(r => r.Beta).ToDictionary(g => g.Key, g => g.Count());
        bool OddSpeed(double speed) => 2 * atSpeed[speed].Count < betas.Length;
        bool OddBeta(double beta) => 2 * atBeta[beta] < speeds.Length;
        foreach (var row in rows)
            if (OddSpeed(row.Speed))
                problems.Add((row.Line, $"speed {Text(row.Speed)} has few of the betas; expected each of them."));
            else if (OddBeta(row.Beta))
                problems.Add((row.Line, $"beta {Text(row.Beta)} is given at few speeds; expected at each of them."));

        for (var i = 0; i < speeds.Length; i++)
        for (var j = 0; j < betas.Length; j++)
            if (grid[i, j].Line == 0 && !OddSpeed(speeds[i]) && !OddBeta(betas[j]))
                problems.Add(
                    (
                        atSpeed[speeds[i]][^1].Line,
                        $"the table has no row for speed {Text(speeds[i])}, beta {Text(betas[j])}; "
                            + "expected among those of its speed, which end in this line."
                    )
                );
        return grid;
    }

    private static void CheckExtent(double[] speeds, double[] betas, List<(int, string)> problems)
    {
        if (speeds.Length < FewestLines || betas.Length < FewestLines || betas[0] > 0.0 || betas[^1] < 1.0)
            problems.Add(
                (
                    0,
                    "needs at least four speeds and four betas, the betas from 0 (choked end) to 1 (surge line); "
                        + $"it has {speeds.Length} and {betas.Length}, from {Text(betas[0])} to {Text(betas[^1])}."
                )
            );
        if (speeds[0] > 1.0 || speeds[^1] < 1.0)
            problems.Add(
                (0, $"must cover speed 1, the design speed; it goes from {Text(speeds[0])} to {Text(speeds[^1])}.")
            );
    }

    private static void CheckLines(Row[,] grid, List<(int, string)> problems)
    {
        for (var i = 0; i < grid.GetLength(0); i++)
        for (var j = 0; j < grid.GetLength(1); j++)
        {
            var here = grid[i, j];
            void Report(string message) => problems.Add((here.Line, message));
            if (j > 0 && here.Flow > grid[i, j - 1].Flow)
                Report(
                    $"the flow rises with beta along the line of speed {Text(here.Speed)}, from "
                        + $"{Text(grid[i, j - 1].Flow)} to {Text(here.Flow)}; it must fall towards surge."
                );
            if (j > 0 && here.PressureRatio <= grid[i, j - 1].PressureRatio)
                Report(
                    $"the pressure ratio does not rise with beta along the line of speed {Text(here.Speed)}: "
                        + $"{Text(grid[i, j - 1].PressureRatio)}, then {Text(here.PressureRatio)}."
                );
            if (i > 0 && (here.Flow <= grid[i - 1, j].Flow || here.PressureRatio <= grid[i - 1, j].PressureRatio))
                Report(
                    $"the line of speed {Text(here.Speed)} crosses that of {Text(grid[i - 1, j].Speed)} (line "
                        + $"{grid[i - 1, j].Line}) at beta {Text(here.Beta)}: flow and pressure ratio must both rise with speed."
                );
        }
    }

    private static void CheckBetween(CompressorMap map, Row[,] grid, List<(int, string)> problems)
    {
        for (var i = 0; i < grid.GetLength(0) - 1; i++)
        for (var j = 0; j < grid.GetLength(1) - 1; j++)
            if (Breach(map, grid[i, j], grid[i + 1, j + 1]) is { } breach)
                problems.Add(
                    (
                        grid[i, j].Line,
                        $"the curves through the rows of speeds {Text(grid[i, j].Speed)} and {Text(grid[i + 1, j].Speed)} "
                            + $"{breach} between beta {Text(grid[i, j].Beta)} and {Text(grid[i, j + 1].Beta)}; "
                            + "smooth the rows about there or give more of them."
                    )
                );
    }

    private static string? Breach(CompressorMap map, Row low, Row high)
    {
        for (var a = 0; a <= Parts; a++)
        for (var b = 0; b <= Parts; b++)
        {
            map.Read(
                low.Speed + (high.Speed - low.Speed) * a / Parts,
                low.Beta + (high.Beta - low.Beta) * b / Parts,
                out var m
            );
            // At the rows themselves the numbers are known to be good and may lie on a bound: allow for rounding.
            const double Rounding = 1e-9;
            if (!(m.Value[0] > 0.0) || !(m.Value[1] > 0.0))
                return "fall to a flow of 0 or a pressure ratio of 1";
            if (!(m.Value[2] > 0.0) || m.Value[2] > 1.0 + Rounding)
                return "leave the efficiencies from 0 to 1";
            if (m.PerSpeed[0] < -Rounding || m.PerSpeed[1] < -Rounding)
                return "cross, flow or pressure ratio falling with rising speed,";
        }

        return null;
    }

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

    private static double[,] Values(Row[,] grid, Func<Row, double> pick)
    {
        var values = new double[grid.GetLength(0), grid.GetLength(1)];
        for (var i = 0; i < grid.GetLength(0); i++)
        for (var j = 0; j < grid.GetLength(1); j++)
            values[i, j] = pick(grid[i, j]);
        return values;
    }

    private static string Text(double value) => value.ToString("G6", CultureInfo.InvariantCulture);
}
