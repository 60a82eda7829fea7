using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>What a rating would have to be for a thrust at an airport.</summary>
internal static class RequiredRatingCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var thrust = CommonOptions.Text("--thrust", "Net thrust wanted, for instance \"105 kN\".");
        var rating = CommonOptions.Text("--rating", "Rating of the definition; its first one without it.");
        var command = new Command(
            "required-rating",
            """
            A wanted thrust at an airport and temperature: what the rating gives there, which limit holds it, how far that limit or
            the flat-to temperature would have to be raised, and how hot it may be as things are.

            Examples:
              cyclesim required-rating velda-27 --altitude "6000 ft" --temperature "38 °C" --thrust "95 kN"
              cyclesim required-rating velda-27 --altitude "6000 ft" --isa "25 K" --thrust "95 kN" --bleed "customer-bleed=2 %"
            """
        )
        {
            thrust,
            rating,
        };
        common.AddTo(command, temperature: true);
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            if (result.GetValue(thrust) is null)
                throw new UsageException(
                    "--thrust is missing: say what thrust is wanted, for instance --thrust \"95 kN\"."
                );
            var wanted = CommonOptions.Quantity(result, thrust, Dimension.Force, "");
            if (!(wanted > 0.0))
                throw new UsageException("--thrust must be above zero.");
            var flight = common.Flight(result);
            var study = RatingQuestions.Required(
                model,
                RatingName(result, rating, loaded),
                flight.PressureAltitude,
                flight.Mach,
                flight.StaticTemperature,
                wanted,
                common.HumidityOf(result),
                common.Loads(result, model.Engine)
            );
            if (result.GetValue(common.Json))
                Documents.Print(Document(study, loaded));
            else
                Print(study, loaded, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    /// <summary>The rating asked for, or the first of the definition.</summary>
    public static string RatingName(ParseResult result, Option<string?> option, LoadedDefinition loaded) =>
        result.GetValue(option)
        ?? (
            loaded.Engine.Ratings.Count > 0
                ? loaded.Engine.Ratings[0].Name
                : throw new DefinitionException([
                    new Problem(loaded.Source, 0, 0, "", "defines no [[rating]]; add one to work out."),
                ])
        );

    private static void Print(RequiredRating s, LoadedDefinition loaded, Display d)
    {
        Layout.Line(
            $"{s.Engine}, rating {s.Rating}: {d.Force(s.Wanted)} {d.ForceUnit} wanted at {d.Altitude(s.PressureAltitude)} {d.AltitudeUnit}, Mach {Display.Fixed(s.Mach, 3)}, {d.Temperature(s.OutsideTemperature, 2)} {d.TemperatureUnit}"
        );
        Layout.Line();
        string Force(double value) => double.IsNaN(value) ? "-" : $"{d.Force(value)} {d.ForceUnit}";
        Layout.Pairs(
            (
                "rated there now",
                $"{Force(s.Rated)}, {(s.Governing == "flat" ? "flat" : "held by " + s.Governing)}; flat thrust {Force(s.FlatThrust)}"
            ),
            (
                "hottest for the wanted",
                double.IsNaN(s.HottestNow)
                    ? $"none: {s.HottestReason}"
                    : $"{d.Temperature(s.HottestNow, 2)} {d.TemperatureUnit}, limits as they are"
            ),
            (
                "flat to",
                double.IsNaN(s.FlatToNeeded)
                    ? $"ISA {d.Difference(s.FlatToNow)} {d.DifferenceUnit} now; none gives the wanted thrust with {Force(s.SeaLevelThrustNow)} at sea level: {s.FlatToReason}"
                    : $"ISA {d.Difference(s.FlatToNow)} {d.DifferenceUnit} now, ISA {d.Difference(s.FlatToNeeded)} {d.DifferenceUnit} needed, with {Force(s.SeaLevelThrustNow)} at sea level"
            ),
            (
                "or sea-level thrust",
                $"{Force(s.SeaLevelThrustNow)} now, {Force(s.SeaLevelThrustNeeded)} needed, flat to the temperature of now"
            )
        );
        Layout.Line();
        Layout.Table(
            "Limits of the rating at the wanted thrust",
            ["", "limit", "needed", ""],
            s.Limits.Select(l =>
                new[]
                {
                    QuantityText.Name(l.Limit.Quantity),
                    PointLayout.Setting(l.Limit, d),
                    PointLayout.Setting(new Limit(l.Limit.Quantity, l.Needed), d),
                    l.Exceeded ? "must be raised" : "holds",
                }
            )
        );
        Layout.Line(
            "Needed values are those of this model at the wanted thrust. Whether a limit may be raised is the maker's and the authority's to say."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(RequiredRating s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["pressure_altitude_m"] = Documents.Number(s.PressureAltitude);
        document["mach"] = Documents.Number(s.Mach);
        document["outside_temperature_K"] = Documents.Number(s.OutsideTemperature);
        document["wanted_thrust_N"] = Documents.Number(s.Wanted);
        document["rated_thrust_N"] = Documents.Number(s.Rated);
        document["set_by"] = s.Governing;
        document["flat_thrust_N"] = Documents.Number(s.FlatThrust);
        document["hottest_temperature_K"] = Documents.Number(s.HottestNow);
        document["hottest_reason"] = s.HottestReason;
        document["flat_to_K"] = Documents.Number(s.FlatToNow);
        document["flat_to_needed_K"] = Documents.Number(s.FlatToNeeded);
        document["flat_to_reason"] = s.FlatToReason;
        document["sea_level_thrust_N"] = Documents.Number(s.SeaLevelThrustNow);
        document["sea_level_thrust_needed_N"] = Documents.Number(s.SeaLevelThrustNeeded);
        document["limits"] = Documents.Array(
            s.Limits,
            l =>
            {
                var entry = Documents.LimitOf(l.Limit);
                entry["needed"] = Documents.Number(l.Needed);
                entry["exceeded"] = l.Exceeded;
                return entry;
            }
        );
        return document;
    }
}
