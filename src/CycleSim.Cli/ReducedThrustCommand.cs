using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Reduced-thrust take-off: assumed temperature, derate, or both.</summary>
internal static class ReducedThrustCommand
{
    private sealed record Options(
        CommonOptions Common,
        Option<string?> Rating,
        Option<string?> Assumed,
        Option<string?> Thrust,
        Option<string?> Reduction,
        Option<string?> Derate,
        Option<string?> Step
    );

    public static Command Create()
    {
        var o = new Options(
            new CommonOptions(),
            CommonOptions.Text("--rating", "Rating that is reduced; the first of the definition without it."),
            CommonOptions.Text("--assumed", "Assumed temperature, for instance \"48 °C\"."),
            CommonOptions.Text("--wanted-thrust", "Thrust wanted, for instance \"100 kN\"."),
            CommonOptions.Text(
                "--wanted-reduction",
                "Reduction wanted below the thrust for the ambient conditions, for instance \"12 %\"."
            ),
            CommonOptions.Text("--derate", "Fixed derate in per cent of the rated thrust, for instance \"10 %\"."),
            CommonOptions.Text(
                "--step",
                "Step of the assumed temperatures where none is asked for; \"2 K\" without it."
            )
        );
        var command = new Command(
            "reduced-thrust",
            """
            Reduced-thrust take-off by assumed temperature, fixed derate or both: what to set, what it spares, how far it may go.
            Without a question, the settings of every assumed temperature.

            Examples:
              cyclesim reduced-thrust velda-27 --altitude "0 ft" --temperature "20 °C" --temperatures C
              cyclesim reduced-thrust velda-27 --altitude "1500 ft" --temperature "12 °C" --assumed "45 °C"
              cyclesim reduced-thrust velda-27 --altitude "0 ft" --temperature "20 °C" --wanted-thrust "100 kN"
              cyclesim reduced-thrust velda-27 --altitude "0 ft" --temperature "20 °C" --derate "10 %" --wanted-reduction "15 %"
            """
        )
        {
            o.Rating,
            o.Assumed,
            o.Thrust,
            o.Reduction,
            o.Derate,
            o.Step,
            o.Common.Csv,
            o.Common.Parquet,
        };
        o.Common.AddTo(command, temperature: true);
        command.SetAction(result =>
        {
            RequireOne(result, o);
            var flight = o.Common.Flight(result);
            var loaded = EngineLibrary.Load(result.GetRequiredValue(o.Common.Engine));
            var model = new EngineModel(loaded.Engine);
            var study = CommonOptions.Checked(() =>
                Study(result, o, model, CommonOptions.RatingOf(result, o.Rating, loaded), flight)
            );
            Exports.Write(result, o.Common, study.Table(Exports.Provenance(result, loaded)));
            if (result.GetValue(o.Common.Json))
                Documents.Print(Document(study, loaded));
            else
                Print(study, loaded, o.Common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    private static void RequireOne(ParseResult result, Options o)
    {
        var given = new[] { o.Assumed, o.Thrust, o.Reduction, o.Step }
            .Where(option => result.GetValue(option) is not null)
            .ToList();
        if (given.Count > 1)
            throw new UsageException($"{given[0].Name} and {given[1].Name} each ask for settings; use one of them.");
    }

    private static ReducedThrustResult Study(
        ParseResult result,
        Options o,
        EngineModel model,
        string rating,
        FlightCondition flight
    )
    {
        var derate = Share(result, o.Derate);
        var taken = o.Common.Loads(result, model.Engine);
        if (result.GetValue(o.Assumed) is not null)
        {
            var assumed = CommonOptions.Quantity(result, o.Assumed, Dimension.Temperature, "");
            return ReducedThrust.ForAssumedTemperature(model, rating, flight, assumed, derate, taken);
        }

        if (result.GetValue(o.Thrust) is not null)
        {
            var thrust = CommonOptions.Quantity(result, o.Thrust, Dimension.Force, "");
            return ReducedThrust.ForThrust(model, rating, flight, thrust, derate, taken);
        }

        if (result.GetValue(o.Reduction) is not null)
            return ReducedThrust.ForReduction(model, rating, flight, Share(result, o.Reduction), derate, taken);
        var step = CommonOptions.Quantity(result, o.Step, Dimension.TemperatureDifference, "2 K");
        return ReducedThrust.Schedule(model, rating, flight, step, derate, taken);
    }

    private static double Share(ParseResult result, Option<string?> option)
    {
        if (result.GetValue(option) is not { } text)
            return 0.0;
        var share = CommonOptions.Share(option.Name, text);
        return share is >= 0.0 and < 1.0
            ? share
            : throw new UsageException($"{option.Name} must lie between 0 and 100 %; '{text}' was given.");
    }

    private static void Print(ReducedThrustResult s, LoadedDefinition loaded, Display d)
    {
        var flight = s.Rated.Flight;
        Layout.Line(
            $"{s.Engine}, rating {s.Rating}: {d.Altitude(flight.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(flight.Mach, 3)}, "
                + $"outside {d.Temperature(flight.StaticTemperature)} {d.TemperatureUnit} (ISA {d.Difference(flight.IsaOffset)} {d.DifferenceUnit})"
        );
        Layout.Line();
        var pairs = new List<(string, string)>
        {
            ("full rating", $"{Setting(s.Rated, d)}, set by {s.Governing}"),
            (
                "break",
                $"{d.Temperature(s.BreakTemperature)} {d.TemperatureUnit}: assumed temperatures up to here reduce nothing"
            ),
        };
        if (s.Derate > 0.0)
            pairs.Add(($"derate {Display.Percent(s.Derate)} %", Setting(s.Basis, d)));
        pairs.Add(
            (
                "largest reduction",
                $"{Display.Percent(s.Largest.ReductionFromBasis)} % to {d.Force(s.Largest.NetThrust)} {d.ForceUnit} at an assumed {d.Temperature(s.Largest.AssumedTemperature)} {d.TemperatureUnit}"
            )
        );
        pairs.Add(("ended by", s.LargestEndedBy));
        Layout.Pairs([.. pairs]);
        Layout.Line();
        if (s.Settings.Count == 1)
            One(s, s.Settings[0], d);
        else
            Settings(s, d);
        Layout.Line("Conditions of AC 25-13, from memory; read the document itself and the approved manual:");
        foreach (var condition in ReducedThrust.Conditions)
            Layout.Line($"  - {condition}");
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static string Setting(OperatingPoint p, Display d) =>
        $"{d.Force(p.NetThrust)} {d.ForceUnit}, N1 {Display.Percent(p.Spools[0].RelativeSpeed)} %"
        + (double.IsFinite(p.Spools[0].Rpm) ? $" ({Display.Fixed(p.Spools[0].Rpm, 0)} rpm)" : "")
        + $", EPR {Display.Fixed(p.EnginePressureRatio, 4)}";

    private static void One(ReducedThrustResult s, ReducedSetting k, Display d)
    {
        Layout.Line(
            $"Assumed temperature {d.Temperature(k.AssumedTemperature, 2)} {d.TemperatureUnit}: set {Setting(k.Setting, d)}"
        );
        Layout.Line(
            $"{Display.Percent(k.ReductionFromBasis)} % below {(s.Derate > 0.0 ? "the derated thrust" : "the rated thrust")} for the ambient conditions"
                + (s.Derate > 0.0 ? $", {Display.Percent(k.ReductionFromRated)} % below the full rating" : "")
        );
        Layout.Line();
        var rows = new List<string[]> { Row("full rating", s.Rated, s, d) };
        if (s.Derate > 0.0)
            rows.Add(Row("derated", s.Basis, s, d));
        rows.Add(Row("reduced, as set", k.Setting, s, d));
        rows.Add(Difference(k.Setting, s, d));
        rows.Add(Row("at the assumed temperature", k.AtAssumed, s, d));
        rows.Add(Row("N1 converted by the root of the temperatures", k.SameCorrectedSpeed, s, d));
        Layout.Table("Full against reduced, all at the outside temperature but one", Columns("", s, d), rows);
        Layout.Line(Conversion(k));
        Layout.Line();
    }

    private static string Conversion(ReducedSetting k) =>
        $"N1 converted from the assumed to the outside temperature at the same corrected speed gives {Display.SignedPercent(k.ConversionExcess, 3)} % thrust against\n"
        + "the setting. With constant specific heats and no power taken they would be one and the same; that specific heats change\n"
        + "with temperature, and that the power offtake does not, makes the difference. The setting is solved for the thrust itself.";

    private static void Settings(ReducedThrustResult s, Display d)
    {
        Layout.Table(
            "Settings by assumed temperature, at the outside temperature",
            [.. Columns($"assumed {d.TemperatureUnit}", s, d), "N1 converted %", "its thrust %"],
            s.Settings.Select(k =>
                (string[])
                    [
                        .. Row(d.Temperature(k.AssumedTemperature, 2), k.Setting, s, d),
                        Display.Percent(k.SameCorrectedSpeed.Spools[0].RelativeSpeed),
                        Display.SignedPercent(k.ConversionExcess, 3),
                    ]
            ),
            left: 0
        );
        Layout.Line(Conversion(s.Settings[^1]));
        Layout.Line();
    }

    private static string[] Columns(string first, ReducedThrustResult s, Display d) =>
        [
            first,
            $"thrust {d.ForceUnit}",
            "below rated %",
            .. Enumerable.Range(1, s.Rated.Spools.Count).Select(n => $"N{n} %"),
            "N1 rpm",
            "EPR",
            $"T41 {d.TemperatureUnit}",
            $"EGT {d.TemperatureUnit}",
            $"fuel {d.FuelFlowUnit}",
        ];

    private static string[] Row(string name, OperatingPoint p, ReducedThrustResult s, Display d) =>
        [
            name,
            d.Force(p.NetThrust),
            Display.Percent(1.0 - p.NetThrust / s.Rated.NetThrust),
            .. p.Spools.Select(n => Display.Percent(n.RelativeSpeed)),
            Display.Fixed(p.Spools[0].Rpm, 0),
            Display.Fixed(p.EnginePressureRatio, 4),
            d.Temperature(p.T41),
            d.Temperature(p.T45),
            d.FuelFlow(p.FuelFlow),
        ];

    private static string[] Difference(OperatingPoint p, ReducedThrustResult s, Display d) =>
        [
            "  against the full rating",
            Display.SignedPercent(p.NetThrust / s.Rated.NetThrust - 1.0, 2) + " %",
            "",
            .. p
                .Spools.Zip(s.Rated.Spools)
                .Select(pair => Display.SignedPercent(pair.First.RelativeSpeed - pair.Second.RelativeSpeed, 2)),
            Display.Signed(p.Spools[0].Rpm - s.Rated.Spools[0].Rpm, 0),
            Display.Signed(p.EnginePressureRatio - s.Rated.EnginePressureRatio, 4),
            d.SignedDifference(p.T41 - s.Rated.T41, 1),
            d.SignedDifference(p.T45 - s.Rated.T45, 1),
            Display.SignedPercent(p.FuelFlow / s.Rated.FuelFlow - 1.0, 2) + " %",
        ];

    private static JsonObject Document(ReducedThrustResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["conditions"] = new JsonArray([.. ReducedThrust.Conditions.Select(c => JsonValue.Create(c))]);
        document["set_by"] = s.Governing;
        document["break_temperature_K"] = Documents.Number(s.BreakTemperature);
        document["derate"] = Documents.Number(s.Derate);
        document["rated"] = Documents.Point(s.Rated);
        document["basis"] = Documents.Point(s.Basis);
        document["largest_reduction"] = Of(s.Largest);
        document["largest_ended_by"] = s.LargestEndedBy;
        document["settings"] = Documents.Array(s.Settings, Of);
        return document;
    }

    private static JsonObject Of(ReducedSetting k) =>
        new()
        {
            ["assumed_temperature_K"] = Documents.Number(k.AssumedTemperature),
            ["net_thrust_N"] = Documents.Number(k.NetThrust),
            ["reduction_from_basis"] = Documents.Number(k.ReductionFromBasis),
            ["reduction_from_rated"] = Documents.Number(k.ReductionFromRated),
            ["point_to_set"] = Documents.Point(k.Setting),
            ["point_at_assumed_temperature"] = Documents.Point(k.AtAssumed),
            ["point_at_same_corrected_N1"] = Documents.Point(k.SameCorrectedSpeed),
            ["conversion_excess"] = Documents.Number(k.ConversionExcess),
        };
}
