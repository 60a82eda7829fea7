using System.CommandLine;
using System.Globalization;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Studies;
using Spectre.Console;

namespace CycleSim.Cli;

/// <summary>Many points over any inputs, to the terminal or to files.</summary>
internal static class SweepCommand
{
    // More rows than a screen or two are for a file.
    private const int MostRowsShown = 60;

    public static Command Create()
    {
        var common = new CommonOptions();
        var over = new Option<string[]>("--over") { Description = "An axis, NAME=VALUES; may be repeated." };
        var rating = CommonOptions.Text("--rating", "Power of a rating at every point, for instance max-climb.");
        var outputs = CommonOptions.Text(
            "--outputs",
            "Columns wanted, for instance net_thrust_N,T41_K; or 'all'; the usual ones without it."
        );
        var limits = CommonOptions.Text(
            "--limits",
            "Rating whose limits the points are held against; that of the power, else the first one, without it."
        );
        var vmo = CommonOptions.Text("--vmo", "Leaves out what is faster, calibrated, for instance \"350 kt\".");
        var mmo = CommonOptions.Text("--mmo", "Leaves out what is beyond this Mach number, for instance 0.86.");
        var ceiling = CommonOptions.Text("--ceiling", "Leaves out what is higher, for instance \"41000 ft\".");
        var vmin = CommonOptions.Text("--vmin", "Leaves out what is slower, calibrated, for instance \"150 kt\".");
        var threads = new Option<int>("--threads") { Description = "Threads; one for each core without it." };
        var part = CommonOptions.Text(
            "--part",
            "Works out only a part, for instance 3/64, to its own Parquet file; 'cyclesim join' puts parts together."
        );
        var command = new Command(
            "sweep",
            $"""
            Operating points over any inputs: nested or paired axes, to the terminal, JSON, CSV or Parquet.

            {SweepSyntax.Help}

            A sweep to a file that was stopped, by Ctrl-C or harder, goes on from what it had when it is asked for again.

            Examples:
              cyclesim sweep velda-27 --over "altitude=0 ft..40000 ft by 10000 ft" --over mach=0.3,0.5,0.78 --rating max-climb
              cyclesim sweep velda-27 --over "altitude=0 ft..41000 ft by 1000 ft" --over "mach=0..0.86 by 0.02" --over "lever=20 %..100 % in 17" --vmo "350 kt" --parquet cruise.parquet
              cyclesim sweep velda-27 --altitude "35000 ft" --mach 0.78 --over "share max-climb=30 %..100 % in 8" --outputs sfc_kg_per_N_s,T41_K
              cyclesim sweep velda-27 --altitude "0 ft" --over "bleed customer-bleed=0 %..5 % in 6" --rating take-off --csv bleed.csv
            """
        )
        {
            over,
            rating,
            outputs,
            limits,
            vmo,
            mmo,
            ceiling,
            vmin,
            threads,
            part,
            common.Engine,
            common.Altitude,
            common.Mach,
            common.CalibratedAirspeed,
            common.Isa,
            common.Temperature,
            common.Humidity,
            common.Bleed,
            common.Open,
            common.Shut,
            common.Offtake,
            common.Worn,
            common.Json,
            common.Csv,
            common.Parquet,
        };
        command.SetAction(
            async (result, cancellation) =>
            {
                var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
                var engine = Sizing.Size(loaded.Engine);
                var syntax = new SweepSyntax(engine);
                var plan = SweepPlan.Of(
                    engine,
                    $"{loaded.Hash}, cyclesim {Documents.Version}",
                    [
                        .. (result.GetValue(over) ?? []).Select(syntax.Level),
                        .. result.GetValue(rating) is { } name
                            ? [syntax.Level("rating=" + name)]
                            : Array.Empty<SweepLevel>(),
                    ],
                    [.. Held(result, common)],
                    result.GetValue(outputs)?.Split(',', StringSplitOptions.TrimEntries),
                    new SweepCorridor(
                        Bound(result, vmo, Dimension.Speed, double.PositiveInfinity),
                        result.GetValue(mmo) is { } m ? CommonOptions.Plain("--mmo", m) : double.PositiveInfinity,
                        Bound(result, ceiling, Dimension.Length, double.PositiveInfinity),
                        Bound(result, vmin, Dimension.Speed, 0.0)
                    ),
                    result.GetValue(limits) ?? "",
                    common.Loads(result, engine)
                );
                var question = new Question(plan, loaded, result, common, result.GetValue(threads));
                return await Task.Run(
                    () => question.Answer(result.GetValue(part), cancellation),
                    CancellationToken.None
                );
            }
        );
        return command;
    }

    public static JsonArray Columns(IReadOnlyList<Studies.TableColumn> columns) =>
        Documents.Array(
            columns,
            c => new JsonObject
            {
                ["name"] = c.Name,
                ["unit"] = c.Unit,
                ["values"] = new JsonArray([
                    .. c.IsText ? c.Texts.Select(t => (JsonNode?)t) : c.Numbers.Select(Documents.Number),
                ]),
            }
        );

    private static double Bound(ParseResult result, Option<string?> option, Dimension dimension, double otherwise) =>
        result.GetValue(option) is null ? otherwise : CommonOptions.Quantity(result, option, dimension, "");

    private static IEnumerable<KeyValuePair<SweepInput, double>> Held(ParseResult result, CommonOptions common)
    {
        foreach (
            var option in new[]
            {
                common.Altitude,
                common.Mach,
                common.CalibratedAirspeed,
                common.Isa,
                common.Temperature,
                common.Humidity,
            }
        )
            if (result.GetValue(option) is { } text)
                yield return SweepSyntax.Held(option.Name[2..], text);
    }

    private sealed record Question(
        SweepPlan Plan,
        LoadedDefinition Loaded,
        ParseResult Result,
        CommonOptions Common,
        int Threads
    )
    {
        private string? Parquet => Result.GetValue(Common.Parquet);

        private string? Csv => Result.GetValue(Common.Csv);

        private bool Json => Result.GetValue(Common.Json);

        public int Answer(string? part, CancellationToken cancellation)
        {
            if (part is not null && (Parquet is null || Csv is not null))
                throw new UsageException("--part goes to a Parquet file and nothing else; name it with --parquet.");
            try
            {
                if (Parquet is not null || Csv is not null)
                    Write(part is null ? SweepPart.Whole : SweepPart.Read(part), cancellation);
                else
                    Show(cancellation);
                return ExitCode.Done;
            }
            catch (OperationCanceledException)
            {
                Console.Error.WriteLine(
                    Parquet is null && Csv is null
                        ? "Stopped."
                        : $"Stopped; what is finished waits in {new SweepFiles(Parquet, Csv).Unfinished}. The same command goes on from there."
                );
                return ExitCode.Stopped;
            }
        }

        private void Write(SweepPart part, CancellationToken cancellation)
        {
            var provenance = Exports.Provenance(Result, Loaded).Where(e => e.Key != "command_line").ToList();
            SweepSummary summary;
            try
            {
                summary = WithProgress(progress =>
                    Sweep.Write(Plan, provenance, new SweepFiles(Parquet, Csv), part, Threads, progress, cancellation)
                );
            }
            catch (Exception error) when (error is IOException or UnauthorizedAccessException)
            {
                throw new UsageException($"{Parquet ?? Csv}: {error.Message}");
            }

            if (Json)
                Documents.Print(Document(summary));
            else
                Print(summary);
        }

        private void Show(CancellationToken cancellation)
        {
            var sweep = WithProgress(progress => Sweep.Run(Plan, Threads, progress, cancellation));
            if (Json)
            {
                var document = Document(sweep.Summary);
                document["columns"] = Columns(sweep.Columns);
                Documents.Print(document);
                return;
            }

            if (sweep.Summary.Points <= MostRowsShown)
                Layout.Table(
                    "Rows, in SI as the names say",
                    [.. sweep.Columns.Select(c => c.Name)],
                    Enumerable
                        .Range(0, sweep.Summary.Points)
                        .Select(row =>
                            sweep
                                .Columns.Select(c =>
                                    c.IsText ? c.Texts[row]
                                    : double.IsNaN(c.Numbers[row]) ? "-"
                                    : c.Numbers[row].ToString("G6", CultureInfo.InvariantCulture)
                                )
                                .ToArray()
                        ),
                    left: 0
                );
            else
                Layout.Line($"{sweep.Summary.Points} rows are too many to show; ask for --csv, --parquet or --json.");
            Print(sweep.Summary);
        }

        private T WithProgress<T>(Func<Action<long>?, T> run)
        {
            if (Console.IsErrorRedirected)
                return run(null);
            var console = AnsiConsole.Create(new AnsiConsoleSettings { Out = new AnsiConsoleOutput(Console.Error) });
            return console
                .Progress()
                .AutoClear(true)
                .Columns(
                    new TaskDescriptionColumn(),
                    new ProgressBarColumn(),
                    new PercentageColumn(),
                    new RemainingTimeColumn()
                )
                .Start(context =>
                {
                    var task = context.AddTask("points", maxValue: Plan.Rows);
                    return run(points => task.Value = points);
                });
        }

        private void Print(SweepSummary s)
        {
            Layout.Line(
                FormattableString.Invariant(
                    $"{s.Points} points, {s.Solved} solved, {s.Points - s.Solved} without solution, {s.OutsideCorridor} outside the corridor; {s.PointsPerSecond:F0} points per second."
                )
            );
            if (s.Resumed > 0)
                Layout.Line($"{s.Resumed} of them were there from an earlier run.");
            foreach (var ending in s.WithoutSolution)
                Layout.Line($"  {ending.Value, 8}  {ending.Key}");
            foreach (var file in new[] { Parquet, Csv })
                if (file is not null)
                    Layout.Line($"Written: {file}");
            Layout.Line($"Definition {Loaded.Source}, SHA-256 {Loaded.Hash[..16]}, cyclesim {Documents.Version}.");
            Layout.Line(Layout.Caution);
        }

        private JsonObject Document(SweepSummary s)
        {
            var document = Documents.Provenance(Loaded);
            document["sweep"] = Plan.Definition;
            document["sweep_sha256"] = Plan.Hash;
            document["points"] = s.Points;
            document["points_solved"] = s.Solved;
            document["points_outside_corridor"] = s.OutsideCorridor;
            document["endings"] = Documents.Array(
                s.WithoutSolution,
                e => new JsonObject { ["outcome"] = e.Key, ["count"] = e.Value }
            );
            return document;
        }
    }
}
