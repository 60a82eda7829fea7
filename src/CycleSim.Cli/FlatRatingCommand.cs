using System.CommandLine;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Thrust of a rating against outside temperature, and where its flat part breaks.</summary>
internal static class FlatRatingCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text("--rating", "Rating of the definition; its first one without it.");
        var from = CommonOptions.Text(
            "--from",
            "Coldest outside temperature of the table, for instance \"-20 °C\"; ISA - 40 K without it."
        );
        var to = CommonOptions.Text(
            "--to",
            "Hottest outside temperature of the table, for instance \"50 °C\"; ISA + 35 K without it."
        );
        var step = CommonOptions.Text("--step", "Step of the table, for instance \"2 K\"; 5 K without it.");
        var command = new Command(
            "flat-rating",
            """
            Thrust of a rating against outside temperature: flat thrust, break temperature, lapse beyond it, power settings.

            Examples:
              cyclesim flat-rating velda-27
              cyclesim flat-rating velda-27 --altitude "6000 ft" --temperatures C
              cyclesim flat-rating velda-27 --rating max-climb --altitude "35000 ft" --mach 0.78
              cyclesim flat-rating velda-27 --bleed "customer-bleed=2 %" --from "20 °C" --to "45 °C" --step "1 K"
              cyclesim flat-rating velda-27 --csv take-off.csv --parquet take-off.parquet
            """
        )
        {
            rating,
            from,
            to,
            step,
            common.Csv,
            common.Parquet,
        };
        common.AddTo(command, temperature: false);
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var altitude = common.AltitudeOf(result, "0 m");
            var standard = CommonOptions.Checked(() => StandardAtmosphere.Temperature(altitude));
            var mach = common.MachOf(result, altitude, standard);
            CommonOptions.Checked(() => FlightCondition.AtIsaOffset(altitude, mach, 0.0));
            var temperatures = Temperatures(
                Optional(result, from, Dimension.Temperature, standard - 40.0),
                Optional(result, to, Dimension.Temperature, standard + 35.0),
                Optional(result, step, Dimension.TemperatureDifference, 5.0)
            );
            var model = new EngineModel(loaded.Engine);
            var study = FlatRating.Run(
                model,
                CommonOptions.RatingOf(result, rating, loaded),
                altitude,
                mach,
                temperatures,
                common.HumidityOf(result),
                common.Loads(result, model.Engine)
            );
            Exports.Write(result, common, study.Table(Exports.Provenance(result, loaded)));
            if (result.GetValue(common.Json))
                Documents.Print(Documents.Of(study, loaded));
            else
                Print(
                    study,
                    loaded,
                    common.Display(result),
                    result.GetValue(common.Altitude) ?? "0 m",
                    common.LoadsAsOptions(result)
                );
            return ExitCode.Done;
        });
        return command;
    }

    private static double Optional(ParseResult result, Option<string?> option, Dimension dimension, double otherwise) =>
        result.GetValue(option) is null ? otherwise : CommonOptions.Quantity(result, option, dimension, "");

    private static double[] Temperatures(double from, double to, double step)
    {
        if (!(from <= to))
            throw new UsageException("--from must not lie above --to.");
        if (!(step > 0.0) || (to - from) / step > 2000.0)
            throw new UsageException("--step must be above zero and leave at most 2000 rows.");
        if (from < FlightCondition.LowestTemperature || to > FlightCondition.HighestTemperature)
            throw new UsageException(
                $"--from and --to must lie between {FlightCondition.LowestTemperature:F0} and {FlightCondition.HighestTemperature:F0} K."
            );
        var count = (int)Math.Floor((to - from) / step + 1e-9) + 1;
        return [.. Enumerable.Range(0, count).Select(i => from + i * step)];
    }

    private static void Print(FlatRatingResult s, LoadedDefinition loaded, Display d, string altitude, string loads)
    {
        Layout.Line(
            $"{s.Engine}, rating {s.Rating}: {d.Altitude(s.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(s.Mach, 3)}"
        );
        Layout.Line();
        Layout.Pairs(
            ("flat thrust", $"{d.Force(s.FlatThrust)} {d.ForceUnit}"),
            (
                "break temperature",
                $"{d.Temperature(s.BreakTemperature, 2)} {d.TemperatureUnit} (ISA {d.Difference(s.BreakIsaOffset)} {d.DifferenceUnit}), where {PointLayout.Setting(s.BreakLimit, d)}"
            ),
            ("lapse beyond it", $"{Display.Percent(s.LapsePerKelvin)} % of the flat thrust per K, over the first 10 K"),
            (
                "limits",
                string.Join(
                    "; ",
                    s.Limits.Select(l =>
                        PointLayout.Setting(l, d)
                        + (s.ImpliedLimit == l ? " (from thrust and flat_to of the definition)" : "")
                    )
                )
            )
        );
        Layout.Line();
        var first = s.Rows.FirstOrDefault(r => r.Point is not null)?.Point;
        var spools = first?.Spools.Count ?? 0;
        Layout.Table(
            "Power setting and thrust against outside temperature (speeds in % of design)",
            [
                $"OAT {d.TemperatureUnit}",
                $"ISA {d.DifferenceUnit}",
                "set by",
                $"net thrust {d.ForceUnit}",
                "of flat %",
                .. Enumerable.Range(1, spools).Select(n => $"N{n} %"),
                "EPR",
                $"T41 {d.TemperatureUnit}",
                $"T45 {d.TemperatureUnit}",
                $"fuel {d.FuelFlowUnit}",
                $"SFC {d.SfcUnit}",
            ],
            s.Rows.Select(r =>
                (string[])
                    [
                        d.Temperature(r.OutsideTemperature, 2),
                        d.Difference(r.IsaOffset),
                        .. r.Point is { } p
                            ? new[] { r.Governing, d.Force(p.NetThrust), Display.Percent(p.NetThrust / s.FlatThrust) }
                                .Concat(p.Spools.Select(k => Display.Percent(k.RelativeSpeed)))
                                .Concat([
                                    Display.Fixed(p.EnginePressureRatio, 4),
                                    d.Temperature(p.T41),
                                    d.Temperature(p.T45),
                                    d.FuelFlow(p.FuelFlow),
                                    d.Sfc(p.Sfc),
                                ])
                            : ["none", .. Enumerable.Repeat("-", 7 + spools)],
                    ]
            ),
            left: 0
        );
        var without = s.Rows.Where(r => r.Point is null).ToList();
        foreach (var row in without.Take(5))
            Layout.Line($"No point at {d.Temperature(row.OutsideTemperature)} {d.TemperatureUnit}: {row.Reason}");
        if (without.Count > 5)
            Layout.Line($"... and {without.Count - 5} more; --json gives every reason.");
        Layout.Line(
            $"The stations behind a row: cyclesim point {loaded.Source} --rating {s.Rating} --altitude \"{altitude}\" --mach {Display.Fixed(s.Mach, 4)} --temperature \"{Display.Fixed(s.BreakTemperature, 2)} K\"{loads}"
        );
        Layout.Line(
            FormattableString.Invariant(
                $"Break solved directly in {s.BreakIterations} iterations, largest relative imbalance {s.BreakResidual:E1}."
            )
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }
}
