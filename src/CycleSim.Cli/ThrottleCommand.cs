using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Specific fuel consumption against thrust, and the altitude at which it is least.</summary>
internal static class ThrottleCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text("--rating", "Rating whose thrust is the highest; the first one without it.");
        var lowest = CommonOptions.Text("--lowest", "Lowest thrust of the loop over the rating's; 20 % without it.");
        var points = new Option<int>("--points")
        {
            Description = "Points of the loop, 5 to 1000.",
            DefaultValueFactory = _ => 17,
        };
        var best = new Option<bool>("--best-altitude")
        {
            Description = "The altitude of least consumption instead of a loop; say at what --thrust or --share.",
        };
        var thrust = CommonOptions.Text("--thrust", "With --best-altitude: net thrust, for instance \"20 kN\".");
        var share = CommonOptions.Text(
            "--share",
            "With --best-altitude: share of the rating's thrust, such as \"80 %\"."
        );
        var from = CommonOptions.Text("--from", "With --best-altitude: lowest altitude; 0 ft without it.");
        var to = CommonOptions.Text("--to", "With --best-altitude: highest altitude; 45000 ft without it.");
        var command = new Command(
            "throttle",
            """
            Specific fuel consumption against thrust at a condition, with the bottom of its bucket from exact derivatives; or the
            altitude at which a thrust costs least.

            Examples:
              cyclesim throttle velda-27 --altitude "35000 ft" --mach 0.78 --rating max-cruise
              cyclesim throttle velda-27 --altitude "5000 ft" --cas "250 kt" --lowest "10 %" --points 30 --csv loop.csv
              cyclesim throttle velda-27 --mach 0.78 --best-altitude --thrust "20 kN"
              cyclesim throttle velda-27 --mach 0.78 --best-altitude --share "85 %" --rating max-cruise
            """
        )
        {
            rating,
            lowest,
            points,
            best,
            thrust,
            share,
            from,
            to,
            common.Csv,
            common.Parquet,
        };
        common.AddTo(command, temperature: true);
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var name =
                result.GetValue(rating)
                ?? loaded.Engine.Ratings.FirstOrDefault()?.Name
                ?? throw new UsageException($"{loaded.Source} defines no [[rating]]; the loop needs one for its top.");
            var loads = common.Loads(result, model.Engine);
            var display = common.Display(result);
            if (!result.GetValue(best))
            {
                foreach (var option in new[] { thrust, share, from, to })
                    if (result.GetValue(option) is not null)
                        throw new UsageException($"{option.Name} goes with --best-altitude.");
                var flight = common.Flight(result);
                var low = result.GetValue(lowest) is { } text ? CommonOptions.Share("--lowest", text) : 0.2;
                var loop = CommonOptions.Checked(() =>
                    Throttle.Loop(model, flight, name, low, result.GetValue(points), loads)
                );
                Exports.Write(result, common, loop.Table(Exports.Provenance(result, loaded)));
                if (result.GetValue(common.Json))
                    Documents.Print(Document(loop, loaded));
                else
                    Print(loop, loaded, display);
                return ExitCode.Done;
            }

            var found = Best(result, common, model, name, thrust, share, from, to, loads);
            Exports.Write(result, common, found.Table(Exports.Provenance(result, loaded)));
            if (result.GetValue(common.Json))
                Documents.Print(Document(found, loaded));
            else
                Print(found, loaded, display);
            return ExitCode.Done;
        });
        return command;
    }

    private static BestAltitude Best(
        ParseResult result,
        CommonOptions common,
        EngineModel model,
        string rating,
        Option<string?> thrust,
        Option<string?> share,
        Option<string?> from,
        Option<string?> to,
        Action<double[]> loads
    )
    {
        foreach (var option in new[] { common.Altitude, common.CalibratedAirspeed, common.TrueAirspeed })
            if (result.GetValue(option) is not null)
                throw new UsageException(
                    $"{option.Name} does not go with --best-altitude, which varies it; use --mach."
                );
        foreach (var option in new[] { common.Temperature, common.Humidity })
            if (result.GetValue(option) is not null)
                throw new UsageException($"{option.Name} does not go with --best-altitude; give --isa.");
        var mach = result.GetValue(common.Mach) is { } m
            ? CommonOptions.Plain("--mach", m)
            : throw new UsageException("--mach is missing, for instance --mach 0.78.");
        var isa = CommonOptions.Quantity(result, common.Isa, Dimension.TemperatureDifference, "0 K");
        var low = CommonOptions.Quantity(result, from, Dimension.Length, "0 ft");
        var high = CommonOptions.Quantity(result, to, Dimension.Length, "45000 ft");
        CommonOptions.Checked(() => FlightCondition.AtIsaOffset(low, mach, isa));
        return (result.GetValue(thrust), result.GetValue(share)) switch
        {
            (null, null) => throw new UsageException("say at what power: --thrust or --share of the rating's thrust."),
            ({ }, { }) => throw new UsageException("--thrust and --share both give the thrust; use one of them."),
            ({ }, null) => CommonOptions.Checked(() =>
                Throttle.AltitudeForThrust(
                    model,
                    mach,
                    isa,
                    CommonOptions.Quantity(result, thrust, Dimension.Force, ""),
                    low,
                    high,
                    loads
                )
            ),
            (null, { } text) => CommonOptions.Checked(() =>
                Throttle.AltitudeForShare(
                    model,
                    mach,
                    isa,
                    rating,
                    CommonOptions.Share("--share", text),
                    low,
                    high,
                    loads
                )
            ),
        };
    }

    private static void Print(ThrottleLoop s, LoadedDefinition loaded, Display d)
    {
        Layout.Line(
            $"{s.Engine}, up to rating {s.Rating}: {d.Altitude(s.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(s.Mach, 3)}, ISA {d.Difference(s.IsaOffset)} {d.DifferenceUnit}"
        );
        var p = s.Least.Point;
        var where = s.Least.Where == "inside" ? "" : $", at the {s.Least.Where} end of the loop";
        Layout.Line(
            $"Least consumption {d.Sfc(p.Sfc)} {d.SfcUnit} at {d.Force(p.NetThrust)} {d.ForceUnit}, {Display.Percent(p.NetThrust / s.RatedThrust, 1)} % of the rating{where}."
        );
        Rows(s.Rows, d);
        Layout.Line(
            FormattableString.Invariant(
                $"Slope of consumption over thrust there {s.Least.Slope:E1} kg/(N s) per N, from the exact derivative; thrust known to {s.Least.Tolerance:G2} N."
            )
        );
        End(loaded);
    }

    private static void Print(BestAltitude s, LoadedDefinition loaded, Display d)
    {
        Layout.Line($"{s.Engine}: Mach {Display.Fixed(s.Mach, 3)}, ISA {d.Difference(s.IsaOffset)} {d.DifferenceUnit}");
        var p = s.Least.Point;
        var where = s.Least.Where switch
        {
            "inside" => FormattableString.Invariant($", known to {s.Least.Tolerance:G2} m"),
            "tropopause" => ", the tropopause",
            var end => $", the {end} altitude of the range that has a solution",
        };
        Layout.Line(
            $"Least consumption {d.Sfc(p.Sfc)} {d.SfcUnit} at {d.Altitude(p.Flight.PressureAltitude)} {d.AltitudeUnit}{where}; thrust {d.Force(p.NetThrust)} {d.ForceUnit}."
        );
        Rows(s.Rows, d);
        End(loaded);
    }

    private static void Rows(IReadOnlyList<ThrottleRow> rows, Display d)
    {
        var spools = rows.FirstOrDefault(r => r.Point is not null)?.Point?.Spools.Count ?? 0;
        Layout.Table(
            "Consumption (speeds in % of design)",
            [
                $"altitude {d.AltitudeUnit}",
                $"net thrust {d.ForceUnit}",
                $"SFC {d.SfcUnit}",
                $"fuel {d.FuelFlowUnit}",
                .. Enumerable.Range(1, spools).Select(n => $"N{n} %"),
                "EPR",
                $"T41 {d.TemperatureUnit}",
                "efficiency %",
            ],
            rows.Select(r =>
                (string[])
                    [
                        d.Altitude(r.PressureAltitude),
                        .. r.Point is { } p
                            ? new[] { d.Force(p.NetThrust), d.Sfc(p.Sfc), d.FuelFlow(p.FuelFlow) }
                                .Concat(p.Spools.Select(k => Display.Percent(k.RelativeSpeed)))
                                .Concat([
                                    Display.Fixed(p.EnginePressureRatio, 4),
                                    d.Temperature(p.T41),
                                    Display.Percent(p.OverallEfficiency),
                                ])
                            : [d.Force(r.NetThrust), .. Enumerable.Repeat("-", 5 + spools)],
                    ]
            ),
            left: 0
        );
        foreach (var row in rows.Where(r => r.Point is null).Take(3))
            Layout.Line($"No point at {d.Altitude(row.PressureAltitude)} {d.AltitudeUnit}: {row.Reason}");
    }

    private static void End(LoadedDefinition loaded)
    {
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(ThrottleLoop s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["pressure_altitude_m"] = Documents.Number(s.PressureAltitude);
        document["mach"] = Documents.Number(s.Mach);
        document["isa_offset_K"] = Documents.Number(s.IsaOffset);
        document["rated_thrust_N"] = Documents.Number(s.RatedThrust);
        document["least_consumption"] = Least(s.Least);
        document["rows"] = Documents.Array(s.Rows, Row);
        return document;
    }

    private static JsonObject Document(BestAltitude s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["mach"] = Documents.Number(s.Mach);
        document["isa_offset_K"] = Documents.Number(s.IsaOffset);
        document["least_consumption"] = Least(s.Least);
        document["rows"] = Documents.Array(s.Rows, Row);
        return document;
    }

    private static JsonObject Least(LeastConsumption least) =>
        new()
        {
            ["where"] = least.Where,
            ["pressure_altitude_m"] = Documents.Number(least.Point.Flight.PressureAltitude),
            ["net_thrust_N"] = Documents.Number(least.Point.NetThrust),
            ["fuel_flow_kg_per_s"] = Documents.Number(least.Point.FuelFlow),
            ["sfc_kg_per_N_s"] = Documents.Number(least.Point.Sfc),
            ["slope"] = Documents.Number(least.Slope),
            ["tolerance"] = Documents.Number(least.Tolerance),
        };

    private static JsonObject Row(ThrottleRow row)
    {
        var entry = new JsonObject
        {
            ["pressure_altitude_m"] = Documents.Number(row.PressureAltitude),
            ["net_thrust_N"] = Documents.Number(row.NetThrust),
            ["solved"] = row.Point is not null,
        };
        if (row.Point is { } p)
        {
            entry["fuel_flow_kg_per_s"] = Documents.Number(p.FuelFlow);
            entry["sfc_kg_per_N_s"] = Documents.Number(p.Sfc);
            entry["engine_pressure_ratio"] = Documents.Number(p.EnginePressureRatio);
            entry["T41_K"] = Documents.Number(p.T41);
            entry["T45_K"] = Documents.Number(p.T45);
            entry["overall_efficiency"] = Documents.Number(p.OverallEfficiency);
        }
        else
            entry["reason"] = row.Reason;
        return entry;
    }
}
