using System.Diagnostics;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Studies;

namespace CycleSim.Benchmarks;

/// <summary>
/// What a sweep of 100 000 points to a Parquet file costs beside the solver alone: the same points of torvik-75 in the same
/// order, with the same starts, on the same number of threads, results thrown away.
/// </summary>
internal static class StudySweep
{
    private const int Rounds = 7;

    private static readonly double[] Altitudes = SweepValues.Count(0.0, 12000.0, 20),
        Machs = SweepValues.Count(0.0, 0.8, 10),
        Offsets = SweepValues.Count(-20.0, 25.0, 10),
        Levers = SweepValues.Count(0.55, 1.0, 50);

    public static void Run()
    {
        var loaded = EngineLibrary.Load("torvik-75");
        var engine = Sizing.Size(loaded.Engine);
        var plan = SweepPlan.Of(
            engine,
            loaded.Hash,
            [
                SweepLevel.Over(SweepInput.Altitude, Altitudes),
                SweepLevel.Over(SweepInput.Mach, Machs),
                SweepLevel.Over(SweepInput.IsaOffset, Offsets),
                SweepLevel.Over(SweepInput.Power(Quantity.Lever), Levers),
            ],
            []
        );
        var threads = Environment.ProcessorCount;
        var file = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".parquet");
        List<double> ratios = [],
            memory = [];
        try
        {
            for (var round = 0; round <= Rounds; round++)
            {
                var alone = Seconds(() => Solve(engine, threads));
                SweepSummary? summary = null;
                var whole = Seconds(() =>
                    summary = Studies.Sweep.Write(plan, [], new SweepFiles(file, null), threads: threads)
                );
                var inMemory = Seconds(() => Studies.Sweep.Run(plan, threads: threads));
                // The first round is for the compiler.
                if (round > 0)
                {
                    ratios.Add(whole / alone);
                    memory.Add(inMemory / alone);
                }

                Console.WriteLine(
                    FormattableString.Invariant(
                        $"{plan.Rows} points, {summary!.Solved} solved, {threads} threads; processor time: solver alone {alone:F2} s, sweep in memory {inMemory:F2} s, sweep to Parquet {whole:F2} s"
                    )
                );
            }

            Console.WriteLine(
                FormattableString.Invariant(
                    $"Sweep to Parquet over solver alone: {Measurement.Median(ratios):F2} (median of {Rounds}; {ratios.Min():F2} to {ratios.Max():F2}); in memory {Measurement.Median(memory):F2}."
                )
            );
            using var process = Process.GetCurrentProcess();
            Console.WriteLine(
                FormattableString.Invariant(
                    $"File {new FileInfo(file).Length / 1e6:F1} MB, {plan.Outputs.Count} outputs; peak memory {process.PeakWorkingSet64 / 1e6:F0} MB."
                )
            );
        }
        finally
        {
            File.Delete(file);
        }
    }

    // Processor time of all threads: what others do on the machine meanwhile does not count.
    private static double Seconds(Action act)
    {
        var start = Environment.CpuUsage.TotalTime;
        act();
        return (Environment.CpuUsage.TotalTime - start).TotalSeconds;
    }

    private static void Solve(SizedEngine engine, int threads)
    {
        var problems = Levers.Select(lever => MatchingProblem.For(Quantity.Lever, lever)).ToArray();
        var next = -1;
        var workers = Enumerable.Range(0, threads).Select(_ => new Thread(Work)).ToList();
        workers.ForEach(w => w.Start());
        workers.ForEach(w => w.Join());

        // A block is as many lines as the sweep's.
        void Work()
        {
            var matcher = new Matcher(engine);
            var start = new double[engine.UnknownCount];
            var lines = Altitudes.Length * Machs.Length * Offsets.Length;
            var perBlock = SweepPlan.BlockSize / Levers.Length;
            for (int block; (block = Interlocked.Increment(ref next)) * perBlock < lines; )
            {
                var started = false;
                for (var line = block * perBlock; line < Math.Min(lines, (block + 1) * perBlock); line++)
                {
                    var offset = Offsets[line % Offsets.Length];
                    var mach = Machs[line / Offsets.Length % Machs.Length];
                    var altitude = Altitudes[line / Offsets.Length / Machs.Length];
                    var flight = FlightCondition.AtIsaOffset(altitude, mach, offset);
                    engine.Layout.Defaults(engine.Definition, flight).CopyTo(matcher.Inputs, 0);
                    for (var k = 0; k < problems.Length; k++)
                    {
                        var outcome =
                            k > 0 ? matcher.SolveNext(problems[k])
                            : started ? matcher.Solve(problems[k], start)
                            : matcher.Solve(problems[k]);
                        if (k == 0 && outcome.Solved)
                        {
                            matcher.Solution.CopyTo(start);
                            started = true;
                        }
                    }
                }
            }
        }
    }
}
