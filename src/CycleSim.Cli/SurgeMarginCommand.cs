using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Where each compressor is nearest to surge over the envelope, against what it needs.</summary>
internal static class SurgeMarginCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var rating = CommonOptions.Text(
            "--rating",
            "Rating that is the highest power surveyed; the first one without it."
        );
        var allowance = new Option<string[]>("--allowance")
        {
            Description =
                "What eats a compressor's margin, for instance \"hpc transient=12 %\"; replaces the usual one of that name or is added as a systematic one; may be repeated.",
        };
        var command = new Command(
            "surge-margin",
            """
            Surge margins over the envelope and from a rating down to a tenth of its thrust: where each compressor is nearest to
            surge, and a budget of what it needs.

            Examples:
              cyclesim surge-margin velda-27
              cyclesim surge-margin velda-27 --worn "hpc efficiency=-3 %" --worn "hpc flow=-2 %"
              cyclesim surge-margin velda-27 --allowance "hpc transient=12 %" --allowance "fan crosswind=2 %"
              cyclesim surge-margin velda-27 --bleed "handling-bleed=0 %" --csv margins.csv
            """
        )
        {
            common.Engine,
            rating,
            allowance,
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
                if (loaded.Engine.Ratings.Count == 0)
                    throw new UsageException(
                        $"{loaded.Source} defines no [[rating]]; the survey needs one for its highest power."
                    );
                var survey = SurgeSurvey.Run(
                    model,
                    result.GetValue(rating) ?? loaded.Engine.Ratings[0].Name,
                    Allowances(result.GetValue(allowance) ?? [], model.Engine),
                    common.Loads(result, model.Engine),
                    cancellation: cancellation
                );
                Exports.Write(result, common, survey.Table(Exports.Provenance(result, loaded)));
                if (result.GetValue(common.Json))
                    Documents.Print(Document(survey, loaded));
                else
                    Print(survey, loaded, common.Display(result));
                return Task.FromResult(ExitCode.Done);
            }
        );
        return command;
    }

    /// <summary>The usual allowances with those of the command line in their place or beside them; null without any.</summary>
    private static Dictionary<string, IReadOnlyList<MarginAllowance>>? Allowances(string[] texts, SizedEngine engine)
    {
        if (texts.Length == 0)
            return null;
        List<string> names =
        [
            .. engine.HasFan ? ["fan"] : Array.Empty<string>(),
            .. engine.Compressors.Select(c => c.Name),
        ];
        var all = names.ToDictionary(
            n => n,
            n => SurgeSurvey.UsualAllowances(n == "fan", n == names[^1]).ToList(),
            StringComparer.Ordinal
        );
        foreach (var text in texts)
        {
            var (what, value) = CommonOptions.Pair("--allowance", text, "hpc transient=12 %");
            var space = what.IndexOf(' ');
            var compressor = space > 0 ? what[..space] : what;
            var name = space > 0 ? what[space..].Trim() : "";
            if (!all.ContainsKey(compressor) || name.Length == 0)
                throw new UsageException(
                    $"--allowance: '{what}' is not a compressor and what eats its margin; this engine has {string.Join(", ", names)}."
                );
            var size = CommonOptions.Share("--allowance " + what, value);
            if (size is not (>= 0.0 and < 1.0))
                throw new UsageException($"--allowance {what}: '{value}' must lie between 0 and 100 %.");
            // Every compressor has the same list, so that the table of allowances has a column for each.
            foreach (var (owner, list) in all)
            {
                var at = list.FindIndex(a => a.Name == name);
                if (at < 0)
                    list.Add(new MarginAllowance(name, owner == compressor ? size : 0.0, false));
                else if (owner == compressor)
                    list[at] = new MarginAllowance(name, size, list[at].Random);
            }
        }

        return all.ToDictionary(a => a.Key, a => (IReadOnlyList<MarginAllowance>)a.Value);
    }

    private static void Print(SurgeSurveyResult s, LoadedDefinition loaded, Display d)
    {
        Layout.Line(
            $"{s.Engine}, from rating {s.Rating} down to a tenth of its thrust: {s.Points} points, {s.WithoutSolution.Count} without solution"
        );
        Layout.Line();
        Layout.Table(
            "Thinnest surge margin of each compressor (as pressure ratio to the surge line at constant flow; as PR/W at constant speed)",
            [
                "",
                "flow %",
                "speed %",
                "needed %",
                "slack (flow) pt",
                $"altitude {d.AltitudeUnit}",
                "Mach",
                $"ISA {d.DifferenceUnit}",
                "thrust of rating %",
                "corrected speed %",
            ],
            s.Budgets.Select(b =>
                new[]
                {
                    b.Compressor,
                    Display.Percent(b.Thinnest.MarginConstantFlow, 1),
                    Display.Percent(b.Thinnest.MarginConstantSpeed, 1),
                    Display.Percent(b.Required, 1),
                    Display.Percent(b.Slack, 1),
                    d.Altitude(b.Thinnest.PressureAltitude),
                    Display.Fixed(b.Thinnest.Mach, 2),
                    d.Difference(b.Thinnest.IsaOffset),
                    Display.Percent(b.Thinnest.ThrustShare, 0),
                    Display.Percent(b.Thinnest.RelativeCorrectedSpeed, 1),
                }
            )
        );
        Layout.Table(
            "Needed, % of the working line's pressure ratio (random ones by root of the sum of squares)",
            ["", .. s.Budgets.Select(b => b.Compressor)],
            s.Budgets[0]
                .Allowances.Select(
                    (a, k) =>
                        (string[])
                            [
                                a.Random ? a.Name + " (random)" : a.Name,
                                .. s.Budgets.Select(b => Display.Percent(b.Allowances[k].Allowance, 1)),
                            ]
                )
                .Append(["all together", .. s.Budgets.Select(b => Display.Percent(b.Required, 1))])
        );
        var shortOf = s.Budgets.Where(b => b.Slack < 0.0).Select(b => b.Compressor).ToList();
        Layout.Line(
            shortOf.Count > 0
                ? $"Short of what is needed somewhere in the survey: {string.Join(", ", shortOf)}."
                : "Every compressor has what is needed everywhere in the survey."
        );
        Layout.Line(
            "Surveyed: sea level to 12 500 m, up to 350 kt calibrated and Mach 0.88, ISA -20 to +20 K; the rating is taken everywhere, also where it would not be used."
        );
        foreach (var reason in s.WithoutSolution.Take(5))
            Layout.Line("No point: " + reason);
        if (s.WithoutSolution.Count > 5)
            Layout.Line($"... and {s.WithoutSolution.Count - 5} more; --json lists all.");
        Layout.Line(
            "Allowances are textbook practice from memory; margins are as good as the compressor maps, steady state; a change of\nflow (--worn) moves the surge line along with the speed lines."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(SurgeSurveyResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["points_solved"] = s.Points;
        document["points_without_solution"] = new JsonArray([.. s.WithoutSolution.Select(r => JsonValue.Create(r))]);
        document["compressors"] = Documents.Array(
            s.Budgets,
            b => new JsonObject
            {
                ["name"] = b.Compressor,
                ["margin_required"] = Documents.Number(b.Required),
                ["margin_slack"] = Documents.Number(b.Slack),
                ["allowances"] = Documents.Array(
                    b.Allowances,
                    a => new JsonObject
                    {
                        ["name"] = a.Name,
                        ["allowance"] = Documents.Number(a.Allowance),
                        ["random"] = a.Random,
                    }
                ),
                ["thinnest"] = new JsonObject
                {
                    ["surge_margin_constant_flow"] = Documents.Number(b.Thinnest.MarginConstantFlow),
                    ["surge_margin_constant_speed"] = Documents.Number(b.Thinnest.MarginConstantSpeed),
                    ["pressure_altitude_m"] = Documents.Number(b.Thinnest.PressureAltitude),
                    ["mach"] = Documents.Number(b.Thinnest.Mach),
                    ["isa_offset_K"] = Documents.Number(b.Thinnest.IsaOffset),
                    ["thrust_share"] = Documents.Number(b.Thinnest.ThrustShare),
                    ["relative_corrected_speed"] = Documents.Number(b.Thinnest.RelativeCorrectedSpeed),
                },
            }
        );
        return document;
    }
}
