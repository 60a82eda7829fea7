using System.CommandLine;
using System.Globalization;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Tables of thrust and fuel flow for aircraft performance work.</summary>
internal static class TablesCommand
{
    private const int MostRowsShown = 80;

    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text("--rating", "Rating of the table; the definition's first one without it.");
        var corrected = new Option<bool>("--corrected")
        {
            Description = "Corrected thrust and fuel flow over Mach and corrected N1 instead of a rating.",
        };
        var altitudes = CommonOptions.Text(
            "--altitudes",
            "Pressure altitudes; 0 ft to 40000 ft by 5000 ft without it."
        );
        var machs = CommonOptions.Text("--machs", "Mach numbers; 0 to 0.8 by 0.1 without it.");
        var offsets = CommonOptions.Text("--isa-offsets", "Offsets from standard; -20 K to 20 K by 10 K without it.");
        var speeds = CommonOptions.Text(
            "--speeds",
            "With --corrected: corrected N1 over its design value; 50 % to 105 % by 5 % without it."
        );
        var others = CommonOptions.Text(
            "--against",
            "With --corrected: altitudes at which the table is compared; 0 ft and 39000 ft without it."
        );
        var threads = new Option<int>("--threads") { Description = "Threads; one for each core without it." };
        var command = new Command(
            "tables",
            """
            Thrust and fuel flow for aircraft performance work: a rating over altitude, Mach number and ISA offset, or corrected
            thrust and fuel flow over Mach number and corrected N1, with what reading them linearly costs in accuracy.

            Lists, steps and numbers of values are written as in 'cyclesim sweep'.

            Examples:
              cyclesim tables velda-27 --rating max-climb --csv climb.csv
              cyclesim tables velda-27 --rating take-off --altitudes "0 ft..8000 ft by 2000 ft" --machs "0..0.3 by 0.05" --isa-offsets "0 K,15 K,30 K" --parquet take-off.parquet
              cyclesim tables velda-27 --corrected --altitude "30000 ft" --machs "0.2..0.8 in 7" --csv corrected.csv
            """
        )
        {
            rating,
            corrected,
            altitudes,
            machs,
            offsets,
            speeds,
            others,
            threads,
            common.Engine,
            common.Altitude,
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
                var identity = $"{loaded.Hash}, cyclesim {Documents.Version}";
                var loads = common.Loads(result, engine);
                var number = result.GetValue(threads);

                double[] Axis(Option<string?> option, Dimension dimension, string otherwise) =>
                    SweepSyntax.List(option.Name, result.GetValue(option) ?? otherwise, dimension);

                PerformanceTable Work()
                {
                    var m = Axis(machs, Dimension.Number, "0..0.8 by 0.1");
                    if (!result.GetValue(corrected))
                    {
                        foreach (var option in new[] { speeds, others, common.Altitude })
                            if (result.GetValue(option) is not null)
                                throw new UsageException($"{option.Name} goes with --corrected.");
                        return PerformanceTables.Rated(
                            engine,
                            identity,
                            RequiredRatingCommand.RatingName(result, rating, loaded),
                            Axis(altitudes, Dimension.Length, "0 ft..40000 ft by 5000 ft"),
                            m,
                            Axis(offsets, Dimension.TemperatureDifference, "-20 K..20 K by 10 K"),
                            loads,
                            number,
                            cancellation
                        );
                    }

                    foreach (var option in new[] { rating, altitudes, offsets })
                        if (result.GetValue(option) is not null)
                            throw new UsageException($"{option.Name} does not go with --corrected.");
                    return PerformanceTables.Corrected(
                        engine,
                        identity,
                        m,
                        Axis(speeds, Dimension.Share, "50 %..105 % by 5 %"),
                        common.AltitudeOf(result, "20000 ft"),
                        Axis(others, Dimension.Length, "0 ft,39000 ft"),
                        loads,
                        number,
                        cancellation
                    );
                }

                try
                {
                    var table = await Task.Run(Work, CancellationToken.None);
                    Exports.Write(result, common, table.Table(Exports.Provenance(result, loaded)));
                    if (result.GetValue(common.Json))
                        Documents.Print(Document(table, loaded));
                    else
                        Print(table, loaded, result.GetValue(common.Csv) ?? result.GetValue(common.Parquet));
                    return ExitCode.Done;
                }
                catch (OperationCanceledException)
                {
                    Console.Error.WriteLine("Stopped; nothing was written.");
                    return ExitCode.Stopped;
                }
            }
        );
        return command;
    }

    private static void Print(PerformanceTable s, LoadedDefinition loaded, string? file)
    {
        var rows = s.Columns[0].Count;
        if (rows <= MostRowsShown)
            Layout.Table(
                s.Title + ", in SI as the names say",
                [.. s.Columns.Select(c => c.Name)],
                Enumerable
                    .Range(0, rows)
                    .Select(row =>
                        s.Columns.Select(c =>
                                c.IsText ? c.Texts[row]
                                : double.IsNaN(c.Numbers[row]) ? "-"
                                : c.Numbers[row].ToString("G6", CultureInfo.InvariantCulture)
                            )
                            .ToArray()
                    ),
                left: 0
            );
        else
        {
            Layout.Line($"{s.Title}: {rows} rows.");
            Layout.Line(file is null ? "Too many to show; ask for --csv, --parquet or --json." : $"Written: {file}");
        }

        if (s.WithoutSolution > 0)
            Layout.Line($"{s.WithoutSolution} points have no solution; the column 'reason' says why.");
        Layout.Line($"Basis: {s.Basis}.");
        foreach (var error in s.Errors)
            Layout.Line(error.ToString());
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(PerformanceTable s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["title"] = s.Title;
        document["basis"] = s.Basis;
        document["points_without_solution"] = s.WithoutSolution;
        document["interpolation_errors"] = Documents.Array(
            s.Errors,
            e => new JsonObject
            {
                ["column"] = e.Column,
                ["against"] = e.Against,
                ["largest"] = Documents.Number(e.Largest),
                ["rms"] = Documents.Number(e.Rms),
                ["where"] = e.Where,
                ["places"] = e.Places,
            }
        );
        document["columns"] = SweepCommand.Columns(s.Columns);
        return document;
    }
}
