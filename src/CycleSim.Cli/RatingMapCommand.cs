using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>A rating over altitude and Mach number, and what moves its break.</summary>
internal static class RatingMapCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text("--rating", "Rating of the definition; its first one without it.");
        var altitudes = CommonOptions.Text(
            "--altitudes",
            "Pressure altitudes, for instance \"0 ft, 2000 ft, 4000 ft\"; sea level to 10 000 ft without it."
        );
        var machs = CommonOptions.Text("--machs", "Mach numbers, for instance \"0, 0.2\"; 0 to 0.3 without it.");
        var command = new Command(
            "rating-map",
            """
            Flat thrust, break temperature, governing limit and lapse of a rating over altitude and Mach number, and what damp air,
            bleed and shaft power do to the break at the first of them.

            Examples:
              cyclesim rating-map velda-27
              cyclesim rating-map torvik-75 --rating max-climb --altitudes "20000 ft, 30000 ft, 39000 ft" --machs "0.7, 0.78, 0.85"
            """
        )
        {
            common.Engine,
            rating,
            altitudes,
            machs,
            common.Humidity,
            common.Bleed,
            common.Open,
            common.Shut,
            common.Offtake,
            common.Worn,
            common.UnitSystem,
            common.Temperatures,
            common.Json,
            common.Csv,
            common.Parquet,
        };
        command.SetAction(
            (result, cancellation) =>
            {
                var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
                var model = new EngineModel(loaded.Engine);
                var name = RequiredRatingCommand.RatingName(result, rating, loaded);
                var heights = List(
                    result.GetValue(altitudes) ?? "0 ft, 2000 ft, 4000 ft, 6000 ft, 8000 ft, 10000 ft",
                    text => CommonOptions.Quantity("--altitudes", text, Dimension.Length)
                );
                var speeds = List(
                    result.GetValue(machs) ?? "0, 0.1, 0.2, 0.3",
                    text => CommonOptions.Plain("--machs", text)
                );
                foreach (var height in heights)
                foreach (var speed in speeds)
                    CommonOptions.Checked(() => Air.FlightCondition.AtIsaOffset(height, speed, 0.0));
                var map = RatingQuestions.Map(
                    model,
                    name,
                    heights,
                    speeds,
                    common.HumidityOf(result),
                    common.Loads(result, model.Engine),
                    cancellation
                );
                var effects = RatingQuestions.BreakEffects(model, name, heights[0], speeds[0]);
                Exports.Write(result, common, map.Table(Exports.Provenance(result, loaded)));
                if (result.GetValue(common.Json))
                    Documents.Print(Document(map, effects, loaded));
                else
                    Print(map, effects, loaded, common.Display(result));
                return Task.FromResult(ExitCode.Done);
            }
        );
        return command;
    }

    private static double[] List(string text, Func<string, double> read)
    {
        var parts = text.Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries);
        return parts.Length > 0
            ? [.. parts.Select(read)]
            : throw new UsageException("--altitudes and --machs need at least one value each.");
    }

    private static void Print(RatingMap map, IReadOnlyList<BreakEffect> effects, LoadedDefinition loaded, Display d)
    {
        Layout.Line($"{map.Engine}, rating {map.Rating}: {map.Points.Count} places");
        Layout.Line();
        Layout.Table(
            "Flat thrust and where it breaks",
            [
                $"altitude {d.AltitudeUnit}",
                "Mach",
                $"flat thrust {d.ForceUnit}",
                $"break {d.TemperatureUnit}",
                $"ISA {d.DifferenceUnit}",
                "limit",
                "lapse %/K",
            ],
            map.Points.Select(p =>
                new[]
                {
                    d.Altitude(p.PressureAltitude),
                    Display.Fixed(p.Mach, 3),
                    d.Force(p.FlatThrust),
                    d.Temperature(p.BreakTemperature, 2),
                    d.Difference(p.BreakIsaOffset),
                    p.Governing.Length > 0 ? p.Governing : "-",
                    Display.Percent(p.LapsePerKelvin),
                }
            ),
            left: 0
        );
        foreach (var reason in map.Points.Select(p => p.Reason).Where(r => r.Length > 0).Distinct().Take(5))
            Layout.Line("No point: " + reason);
        var first = map.Points[0];
        Layout.Table(
            $"What moves the break at {d.Altitude(first.PressureAltitude)} {d.AltitudeUnit}, Mach {Display.Fixed(first.Mach, 3)}: each alone, on the definition's own loads in dry air, flat thrust held",
            ["", $"break {d.TemperatureUnit}", $"shift {d.DifferenceUnit}", $"thrust at the first break {d.ForceUnit}"],
            effects.Select(e =>
                new[] { e.Load, d.Temperature(e.BreakTemperature, 2), d.Difference(e.Shift, 2), d.Force(e.ThrustThere) }
            )
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(RatingMap map, IReadOnlyList<BreakEffect> effects, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = map.Rating;
        document["places"] = Documents.Array(
            map.Points,
            p => new JsonObject
            {
                ["pressure_altitude_m"] = Documents.Number(p.PressureAltitude),
                ["mach"] = Documents.Number(p.Mach),
                ["flat_thrust_N"] = Documents.Number(p.FlatThrust),
                ["break_temperature_K"] = Documents.Number(p.BreakTemperature),
                ["break_isa_offset_K"] = Documents.Number(p.BreakIsaOffset),
                ["governing"] = p.Governing,
                ["lapse_fraction_per_K"] = Documents.Number(p.LapsePerKelvin),
                ["reason"] = p.Reason,
            }
        );
        document["break_effects"] = Documents.Array(
            effects,
            e => new JsonObject
            {
                ["load"] = e.Load,
                ["break_temperature_K"] = Documents.Number(e.BreakTemperature),
                ["shift_K"] = Documents.Number(e.Shift),
                ["thrust_at_first_break_N"] = Documents.Number(e.ThrustThere),
            }
        );
        return document;
    }
}
