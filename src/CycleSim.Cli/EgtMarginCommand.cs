using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>EGT margin of a new and a worn engine, and what each worn part costs of it.</summary>
internal static class EgtMarginCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text("--rating", "Rating of the definition; its first one without it.");
        var limit = CommonOptions.Text(
            "--egt-limit",
            "Limit of the gas temperature behind the first turbine (T45), for instance \"950 °C\"; that of the rating without it."
        );
        var command = new Command(
            "egt-margin",
            """
            EGT margin at full rated thrust at the corner of the flat rating, new and worn; what each worn part costs of it; the
            outside temperature at which nothing is left.

            Examples:
              cyclesim egt-margin velda-27 --egt-limit "1260 K" --worn "hpt efficiency=-2 %" --worn "hpc efficiency=-1 %" --temperatures C
            """
        )
        {
            common.Engine,
            rating,
            limit,
            common.Altitude,
            common.Mach,
            common.Worn,
            common.UnitSystem,
            common.Temperatures,
            common.Json,
            common.Csv,
            common.Parquet,
        };
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var altitude = common.AltitudeOf(result, "0 m");
            var mach = result.GetValue(common.Mach) is { } text ? CommonOptions.Plain("--mach", text) : 0.0;
            CommonOptions.Checked(() => Air.FlightCondition.AtIsaOffset(altitude, mach, 0.0));
            var study = EgtMargin.Run(
                model,
                RequiredRatingCommand.RatingName(result, rating, loaded),
                altitude,
                mach,
                common.WornParts(result),
                result.GetValue(limit) is null ? 0.0 : CommonOptions.Quantity(result, limit, Dimension.Temperature, "")
            );
            Exports.Write(result, common, study.Table(Exports.Provenance(result, loaded)));
            if (result.GetValue(common.Json))
                Documents.Print(Document(study, loaded));
            else
                Print(study, loaded, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    private static void Print(EgtMarginResult s, LoadedDefinition loaded, Display d)
    {
        Layout.Line(
            $"{s.Engine}, rating {s.Rating}: {d.Force(s.Thrust)} {d.ForceUnit} at {d.Altitude(s.PressureAltitude)} {d.AltitudeUnit}, Mach {Display.Fixed(s.Mach, 3)}, {d.Temperature(s.Corner, 2)} {d.TemperatureUnit} (the corner)"
        );
        Layout.Line();
        string Outside(double kelvin) =>
            double.IsNaN(kelvin) ? "nowhere" : $"{d.Temperature(kelvin, 1)} {d.TemperatureUnit}";
        Layout.Table(
            $"EGT (T45) against its limit of {d.Temperature(s.Limit)} {d.TemperatureUnit}",
            [
                "",
                $"EGT {d.TemperatureUnit}",
                $"margin {d.DifferenceUnit}",
                "nothing left at",
                $"T41 {d.TemperatureUnit}",
                "N1 %",
            ],
            new[]
            {
                ("new", s.New, s.NewMargin, s.NewOutsideLimit),
                ("as it is", s.Worn, s.WornMargin, s.WornOutsideLimit),
            }
                .Take(s.Shares.Count > 0 ? 2 : 1)
                .Select(r =>
                    new[]
                    {
                        r.Item1,
                        d.Temperature(r.Item2.T45),
                        d.Difference(r.Item3),
                        Outside(r.Item4),
                        d.Temperature(r.Item2.T41),
                        Display.Percent(r.Item2.Spools[0].RelativeSpeed),
                    }
                )
        );
        if (s.Shares.Count > 0)
            Layout.Table(
                "What each worn part costs of the margin",
                ["", "change %", $"first order {d.DifferenceUnit}", $"alone {d.DifferenceUnit}"],
                s.Shares.Select(p =>
                        (string[])
                            [
                                p.Part.Name,
                                Display.Percent(p.Part.Change),
                                d.Difference(p.FirstOrder, 2),
                                d.Difference(p.Alone, 2),
                            ]
                    )
                    .Append([
                        "sum",
                        "",
                        d.Difference(s.Shares.Sum(p => p.FirstOrder), 2),
                        d.Difference(s.Shares.Sum(p => p.Alone), 2),
                    ])
                    .Append(["all together", "", "", d.Difference(s.WornMargin - s.NewMargin, 2)])
            );
        Layout.Line(
            "Thrust is held, whatever the rating's other limits say; the gauge reads what its probes see, which is not T45 itself: compare margins, not readings."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(EgtMarginResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["pressure_altitude_m"] = Documents.Number(s.PressureAltitude);
        document["mach"] = Documents.Number(s.Mach);
        document["corner_temperature_K"] = Documents.Number(s.Corner);
        document["thrust_N"] = Documents.Number(s.Thrust);
        document["T45_limit_K"] = Documents.Number(s.Limit);
        document["margin_new_K"] = Documents.Number(s.NewMargin);
        document["margin_worn_K"] = Documents.Number(s.WornMargin);
        document["outside_limit_new_K"] = Documents.Number(s.NewOutsideLimit);
        document["outside_limit_worn_K"] = Documents.Number(s.WornOutsideLimit);
        document["parts"] = Documents.Array(
            s.Shares,
            p => new JsonObject
            {
                ["name"] = p.Part.Name,
                ["change"] = Documents.Number(p.Part.Change),
                ["margin_change_first_order_K"] = Documents.Number(p.FirstOrder),
                ["margin_change_alone_K"] = Documents.Number(p.Alone),
            }
        );
        document["point_new"] = Documents.Point(s.New, loaded);
        document["point_worn"] = Documents.Point(s.Worn, loaded);
        return document;
    }
}
