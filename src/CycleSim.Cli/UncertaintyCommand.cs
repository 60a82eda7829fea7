using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;
using Spectre.Console;

namespace CycleSim.Cli;

/// <summary>What uncertain inputs make of the outputs, to first order and by Monte Carlo.</summary>
internal static class UncertaintyCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var power = new PowerSetting();
        var on = new Option<string[]>("--on")
        {
            Description =
                "An uncertain input and its distribution, for instance \"hpt efficiency: normal 0.5 %\", \"temperature: uniform 2 K\", \"setting: triangular 1 %\"; may be repeated.",
        };
        var draws = new Option<int>("--draws") { Description = "Points drawn.", DefaultValueFactory = _ => 10000 };
        var seed = new Option<ulong>("--seed")
        {
            Description = "The same seed draws the same points.",
            DefaultValueFactory = _ => 1UL,
        };
        var command = new Command(
            "uncertainty",
            """
            What uncertain inputs make of thrust, fuel flow, temperatures and speeds: to first order from exact derivatives, and by
            drawn points (Monte Carlo), side by side.

            Examples:
              cyclesim uncertainty velda-27 --altitude "0 ft" --mach 0 --thrust "110 kN" --on "hpt efficiency: normal 0.5 %" --on "temperature: uniform 2 K"
              cyclesim uncertainty torvik-75 --altitude "35000 ft" --mach 0.83 --N1 "95 %" --on "setting: normal 0.2 %" --on "customer-bleed: triangular 1 %" --draws 100000
            """
        )
        {
            on,
            draws,
            seed,
            common.Csv,
            common.Parquet,
        };
        common.AddTo(command, temperature: true);
        power.AddQuantitiesTo(command);
        command.SetAction(
            (result, cancellation) =>
            {
                var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
                var engine = Sizing.Size(loaded.Engine);
                var inputs = (result.GetValue(on) ?? []).Select(Read).ToList();
                UncertaintyResult Run(IProgress<double>? progress) =>
                    Uncertainty.Run(
                        engine,
                        common.Flight(result),
                        power.Single(result),
                        inputs,
                        result.GetValue(draws),
                        result.GetValue(seed),
                        common.Loads(result, engine),
                        progress,
                        cancellation
                    );
                var study = Console.IsErrorRedirected ? Run(null) : WithProgress(Run);
                Exports.Write(result, common, study.Table(Exports.Provenance(result, loaded)));
                if (result.GetValue(common.Json))
                    Documents.Print(Document(study, loaded));
                else
                    Print(study, loaded, common.Display(result));
                return Task.FromResult(study.Finished < study.Draws ? ExitCode.Stopped : ExitCode.Done);
            }
        );
        return command;
    }

    private static UncertaintyResult WithProgress(Func<IProgress<double>?, UncertaintyResult> run)
    {
        UncertaintyResult? study = null;
        AnsiConsole
            .Create(new AnsiConsoleSettings { Out = new AnsiConsoleOutput(Console.Error) })
            .Progress()
            .AutoClear(true)
            .Start(context =>
            {
                var task = context.AddTask("points drawn", maxValue: 1.0);
                study = run(new Told(share => task.Value = Math.Max(task.Value, share)));
            });
        return study!;
    }

    private sealed class Told(Action<double> act) : IProgress<double>
    {
        public void Report(double value) => act(value);
    }

    private static UncertainInput Read(string text)
    {
        var colon = text.IndexOf(':');
        var words = colon > 0 ? text[(colon + 1)..].Trim().Split(' ', 2) : [];
        // A number is no name of a distribution, though it would be read as one.
        if (
            words.Length != 2
            || char.IsDigit(words[0], 0)
            || !Enum.TryParse<Spread>(words[0], ignoreCase: true, out var spread)
        )
            throw new UsageException(
                $"--on: '{text}' is not of the form \"hpt efficiency: normal 0.5 %\"; distributions are normal, uniform and triangular."
            );
        var name = text[..colon].Trim();
        var where = "--on " + name;
        var size = name switch
        {
            "temperature" => CommonOptions.Quantity(where, words[1], Dimension.TemperatureDifference),
            "pressure" => CommonOptions.Quantity(where, words[1], Dimension.Pressure),
            "mach" => CommonOptions.Plain(where, words[1]),
            _ when name.EndsWith(" power", StringComparison.Ordinal) => CommonOptions.Quantity(
                where,
                words[1],
                Dimension.Power
            ),
            _ => CommonOptions.Share(where, words[1]),
        };
        return new UncertainInput(name, spread, size);
    }

    private static void Print(UncertaintyResult s, LoadedDefinition loaded, Display d)
    {
        var p = s.Nominal;
        Layout.Line(
            $"{s.Engine}: {d.Altitude(p.Flight.PressureAltitude)} {d.AltitudeUnit}, Mach {Display.Fixed(p.Flight.Mach, 3)}, {d.Temperature(p.Flight.StaticTemperature)} {d.TemperatureUnit}, {PointLayout.Setting(p.Setting, d)}"
        );
        Layout.Line();
        Layout.Table(
            $"Standard deviations, % of the nominal value ({s.Finished} points drawn, seed {s.Seed}; +- is the standard error)",
            ["", "nominal (SI)", "first order", "drawn", "+-", "mean shift", "+-", "2.5 %", "97.5 %", "most from"],
            s.Outputs.Select(o =>
                new[]
                {
                    o.Name,
                    o.Nominal.ToString("G6", System.Globalization.CultureInfo.InvariantCulture),
                    Display.Percent(o.FirstOrder / o.Nominal, 3),
                    Display.Percent(o.StandardDeviation / o.Nominal, 3),
                    Display.Percent(o.StandardDeviationError / o.Nominal, 3),
                    Display.Percent(o.Mean / o.Nominal - 1.0, 3),
                    Display.Percent(o.MeanError / o.Nominal, 3),
                    Display.Percent(o.Low / o.Nominal - 1.0, 3),
                    Display.Percent(o.High / o.Nominal - 1.0, 3),
                    o.FirstOrder > 0.0 ? $"{o.Shares[0].Input} {Display.Percent(o.Shares[0].Share, 0)} %" : "-",
                }
            )
        );
        foreach (var (reason, count) in s.WithoutPoint)
            Layout.Line($"{count} of {s.Finished} drawn points do not exist and are left out, such as: {reason}");
        if (s.Finished < s.Draws)
            Layout.Line($"Stopped after {s.Finished} of {s.Draws} draws.");
        Layout.Line(
            "Inputs are independent of one another; bleed, power and Mach number below nothing count as nothing."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(UncertaintyResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["inputs"] = Documents.Array(
            s.Inputs,
            i => new JsonObject
            {
                ["name"] = i.Name,
                ["distribution"] = i.Spread.ToString(),
                ["size"] = Documents.Number(i.Size),
                ["standard_deviation"] = Documents.Number(i.StandardDeviation),
            }
        );
        document["draws_asked"] = s.Draws;
        document["draws_finished"] = s.Finished;
        document["seed"] = s.Seed;
        document["without_point"] = Documents.Array(
            s.WithoutPoint,
            w => new JsonObject { ["reason"] = w.Key, ["count"] = w.Value }
        );
        document["outputs"] = Documents.Array(
            s.Outputs,
            o => new JsonObject
            {
                ["name"] = o.Name,
                ["nominal"] = Documents.Number(o.Nominal),
                ["standard_deviation_first_order"] = Documents.Number(o.FirstOrder),
                ["shares"] = Documents.Array(
                    o.Shares,
                    v => new JsonObject { ["input"] = v.Input, ["share"] = Documents.Number(v.Share) }
                ),
                ["mean"] = Documents.Number(o.Mean),
                ["mean_error"] = Documents.Number(o.MeanError),
                ["standard_deviation"] = Documents.Number(o.StandardDeviation),
                ["standard_deviation_error"] = Documents.Number(o.StandardDeviationError),
                ["low"] = Documents.Number(o.Low),
                ["median"] = Documents.Number(o.Median),
                ["high"] = Documents.Number(o.High),
            }
        );
        document["nominal_point"] = Documents.Point(s.Nominal, loaded);
        return document;
    }
}
