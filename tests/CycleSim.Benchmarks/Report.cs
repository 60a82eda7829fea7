namespace CycleSim.Benchmarks;

/// <summary>The table of the comparison and what is demanded of the solver.</summary>
internal static class Report
{
    public static void Print(
        Sweep sweep,
        List<Measurement> measurements,
        List<Measurement> others,
        List<(double Property, double Plain, double Dual)> times
    )
    {
        var points = sweep.Points.Count;
        Console.WriteLine(
            $"{sweep.Engine.Definition.Name}: {points} points, {sweep.Skipped} without solution left out, "
                + $"{sweep.Engine.UnknownCount} unknowns, largest residual 1e-10, {times.Count} rounds, medians"
        );
        Console.WriteLine();
        Console.WriteLine(
            $"{"method", -16}{"start", -6}{"failed", 7}{"astray", 7}{"points/s", 10}{"us/point", 10}{"plain/pt", 10}{"dual/pt", 9}"
                + $"{"steps/pt", 10}{"most", 6}{"bytes/pt", 10}{"time/ours", 11}{"differs by", 12}"
        );
        foreach (var m in measurements)
            PrintRow(m, Matcher(measurements, m.Contestant.Warm), points);

        Console.WriteLine();
        Console.WriteLine(
            "failed: not within tolerance, or astray (another root, off the maps); their time counts. steps: Newton steps of "
                + "the matcher, trial steps of the libraries."
        );
        var property = Measurement.Median(times.Select(t => t.Property));
        Console.WriteLine();
        Console.WriteLine($"one evaluation of h, s, cp of burnt gas  {property, 9:F1} ns");
        Console.WriteLine(
            $"one pass without derivatives             {Measurement.Median(times.Select(t => t.Plain)), 9:F0} ns"
        );
        Console.WriteLine(
            $"one pass with derivatives                {Measurement.Median(times.Select(t => t.Dual)), 9:F0} ns"
        );
        Console.WriteLine(
            $"with over without derivatives            {Measurement.Median(times.Select(t => t.Dual / t.Plain)), 9:F2}"
        );
        Console.WriteLine();
        PrintDemands(measurements, points, property);
        PrintOthers(Matcher(measurements, true), others);
    }

    private static void PrintOthers(Measurement ours, List<Measurement> others)
    {
        Console.WriteLine();
        Console.WriteLine(
            "Warm points of the other arrangements, over a point of the twin-spool engine in the same round:"
        );
        foreach (var other in others)
        {
            var points = other.Contestant.Sweep.Points.Count;
            var share = (double)ours.Contestant.Sweep.Points.Count / points;
            Console.WriteLine(
                $"  {other.Contestant.Sweep.Engine.Definition.Name, -12}{points, 6} points, {other.Tally.Failures} failed, "
                    + $"{Measurement.Median(other.Seconds) / points * 1e6:F2} us/point, {(double)other.Bytes / points:F0} bytes/point"
            );
            AtMost(
                $"  {other.Contestant.Sweep.Engine.Definition.Name} over twin-spool",
                other.TimeOver(ours) * share,
                2.0
            );
        }
    }

    private static void PrintRow(Measurement m, Measurement ours, int points)
    {
        var seconds = Measurement.Median(m.Seconds);
        var tally = m.Tally;
        Console.WriteLine(
            $"{m.Contestant.Method, -16}{(m.Contestant.Warm ? "warm" : "cold"), -6}{tally.Failures, 7}{tally.OtherRoots, 7}"
                + $"{points / seconds, 10:F0}{seconds / points * 1e6, 10:F2}{(double)tally.PlainEvaluations / points, 10:F2}"
                + $"{(double)tally.DualEvaluations / points, 9:F2}{(double)tally.Iterations / points, 10:F2}"
                + $"{tally.MostIterations, 6}{(double)m.Bytes / points, 10:F0}{m.TimeOver(ours), 11:F2}{tally.Difference, 12:E1}"
        );
    }

    private static void PrintDemands(List<Measurement> measurements, int points, double property)
    {
        var warm = Matcher(measurements, true);
        var cold = Matcher(measurements, false);
        var pointTime = Measurement.Median(warm.Seconds) / points * 1e9;
        AtMost("warm point over one property evaluation", pointTime / property, 1200.0);
        foreach (var m in measurements)
            if (m.Contestant is not MatcherContestant && m.Contestant.Warm)
            {
                var demand = m.Contestant is BroydenContestant ? 4.0 : 3.0;
                AtLeast($"faster than {m.Contestant.Method}, warm", m.TimeOver(warm), demand);
            }

        AtMost("steps a point from the design point", (double)cold.Tally.Iterations / points, 8.0);
        AtMost("bytes a point, warm", (double)warm.Bytes / points, 0.0);
        AtMost("bytes a point, cold", (double)cold.Bytes / points, 0.0);
    }

    private static Measurement Matcher(List<Measurement> measurements, bool warm) =>
        measurements.First(m => m.Contestant is MatcherContestant && m.Contestant.Warm == warm);

    private static void AtMost(string what, double value, double limit) =>
        PrintDemand(what, value, "at most", limit, value <= limit);

    private static void AtLeast(string what, double value, double limit) =>
        PrintDemand(what, value, "at least", limit, value >= limit);

    private static void PrintDemand(string what, double value, string sense, double limit, bool met) =>
        Console.WriteLine($"{what, -41}{value, 9:F2}  {sense, -8}{limit, 6:F0}  {(met ? "met" : "not met")}");
}
