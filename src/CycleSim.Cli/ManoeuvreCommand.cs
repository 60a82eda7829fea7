using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Distance of every compressor from its surge line along a manoeuvre, settled and just after a step of fuel.</summary>
internal static class ManoeuvreCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var power = new PowerSetting();
        var waypoint = new Option<string[]>("--waypoint")
        {
            Description =
                $"A condition passed through: altitude, mach, isa and one of {string.Join(", ", power.Names)}; repeat it, at least twice.",
        };
        var places = new Option<int>("--places")
        {
            Description = "Places on each leg, its end included.",
            DefaultValueFactory = _ => 10,
        };
        var step = CommonOptions.Text(
            "--fuel-step",
            "Step of the fuel flow while the spools still turn as they did, for instance \"15 %\" or \"-30 %\"."
        );
        var command = new Command(
            "manoeuvre",
            """
            Surge margins along straight lines between waypoints: settled, just after a step of fuel at held spool speeds, and the
            step that reaches the surge line.

            Examples:
              cyclesim manoeuvre velda-27 --waypoint "altitude=0 ft, mach=0.2, lever=5 %" --waypoint "altitude=0 ft, mach=0.2, lever=95 %" --fuel-step "15 %"
              cyclesim manoeuvre torvik-75 --waypoint "altitude=39000 ft, mach=0.83, lever=90 %" --waypoint "altitude=25000 ft, mach=0.7, lever=40 %" --places 20
            """
        )
        {
            common.Engine,
            waypoint,
            places,
            step,
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
                var waypoints = (result.GetValue(waypoint) ?? []).Select(text => Read(text, power)).ToArray();
                var ratio = 1.0 + CommonOptions.Share("--fuel-step", result.GetValue(step) ?? "0 %");
                ManoeuvreResult study;
                try
                {
                    study = Manoeuvre.Run(
                        model,
                        waypoints,
                        result.GetValue(places),
                        ratio,
                        common.Loads(result, model.Engine),
                        cancellation
                    );
                }
                catch (ArgumentException error)
                {
                    throw new UsageException(error.Message.Split(" (Parameter")[0] + ".");
                }

                Exports.Write(result, common, study.Table(Exports.Provenance(result, loaded)));
                if (result.GetValue(common.Json))
                    Documents.Print(Document(study, loaded));
                else
                    Print(study, loaded, common.Display(result));
                return Task.FromResult(ExitCode.Done);
            }
        );
        return command;
    }

    private static Waypoint Read(string text, PowerSetting power)
    {
        double? altitude = null,
            mach = null;
        var isa = 0.0;
        Limit? setting = null;
        foreach (var part in text.Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries))
        {
            var (name, value) = CommonOptions.Pair("--waypoint", part, "altitude=35000 ft");
            var where = $"--waypoint \"{text}\": {name}";
            switch (name)
            {
                case "altitude":
                    altitude = CommonOptions.Quantity(where, value, Dimension.Length);
                    break;
                case "mach":
                    mach = CommonOptions.Plain(where, value);
                    break;
                case "isa":
                    isa = CommonOptions.Quantity(where, value, Dimension.TemperatureDifference);
                    break;
                default:
                    if (setting is not null)
                        throw new UsageException($"--waypoint \"{text}\": sets the power twice.");
                    setting =
                        power.Named(name, value)
                        ?? throw new UsageException(
                            $"{where} is not known; expected altitude, mach, isa or one of {string.Join(", ", power.Names)}."
                        );
                    break;
            }
        }

        if (altitude is null || mach is null || setting is null)
            throw new UsageException(
                $"--waypoint \"{text}\" needs altitude, mach and a power, for instance \"altitude=0 ft, mach=0.2, lever=50 %\"."
            );
        CommonOptions.Checked(() => FlightCondition.AtIsaOffset(altitude.Value, mach.Value, isa));
        return new Waypoint(altitude.Value, mach.Value, isa, setting.Value);
    }

    private static void Print(ManoeuvreResult s, LoadedDefinition loaded, Display d)
    {
        var stepped = s.FuelRatio != 1.0;
        var names = s.Points.First(p => p.Point is not null).Margins.Select(m => m.Compressor).ToList();
        Layout.Line(
            $"{s.Engine}: {s.Points.Count} places"
                + (stepped ? $", fuel flow stepped to {Display.Percent(s.FuelRatio, 1)} % at held speeds" : "")
        );
        Layout.Line();
        Layout.Table(
            "Surge margin, % of pressure ratio at constant flow"
                + (stepped ? ": settled -> just after the step" : ", settled"),
            [
                "place",
                $"altitude {d.AltitudeUnit}",
                "Mach",
                $"ISA {d.DifferenceUnit}",
                $"net thrust {d.ForceUnit}",
                .. names,
                "fuel to surge %",
            ],
            s.Points.Select(p =>
                (string[])
                    [
                        Display.Fixed(p.Place, 2),
                        d.Altitude(p.PressureAltitude),
                        Display.Fixed(p.Mach, 3),
                        d.Difference(p.IsaOffset),
                        p.Point is { } point ? d.Force(point.NetThrust) : "-",
                        .. p.Point is null
                            ? names.Select(_ => "-")
                            : p.Margins.Select(m =>
                                Display.Percent(m.Settled, 1)
                                + (stepped ? $" -> {Display.Percent(m.AfterStep, 1)}" : "")
                            ),
                        Display.Percent(p.FuelRatioToSurge, 1),
                    ]
            ),
            left: 0
        );
        foreach (var name in names)
        {
            var (place, margin) = s.Thinnest(name);
            Layout.Line(
                $"{name} is nearest to surge at place {Display.Fixed(place.Place, 2)}: {Display.Percent(margin, 1)} % left{(stepped ? " just after the step" : "")}."
            );
        }

        foreach (var reason in s.Points.Select(p => p.Reason).Where(r => r.Length > 0).Distinct().Take(5))
            Layout.Line("No point: " + reason);
        Layout.Line(
            "Fuel to surge: the fuel flow, in % of the settled one, at which a step at held speeds first has no point; --json says what ends it there."
        );
        Layout.Line(
            "Quasi-steady: no heat soak, no volumes; margins are as good as the compressor maps. A step at held speeds is the worst moment of an acceleration."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static JsonObject Document(ManoeuvreResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["fuel_ratio"] = Documents.Number(s.FuelRatio);
        document["places"] = Documents.Array(
            s.Points,
            p => new JsonObject
            {
                ["place"] = Documents.Number(p.Place),
                ["pressure_altitude_m"] = Documents.Number(p.PressureAltitude),
                ["mach"] = Documents.Number(p.Mach),
                ["isa_offset_K"] = Documents.Number(p.IsaOffset),
                ["net_thrust_N"] = Documents.Number(p.Point?.NetThrust ?? double.NaN),
                ["fuel_flow_kg_per_s"] = Documents.Number(p.Point?.FuelFlow ?? double.NaN),
                ["reason"] = p.Reason,
                ["fuel_ratio_to_surge"] = Documents.Number(p.FuelRatioToSurge),
                ["surge_reason"] = p.SurgeReason,
                ["compressors"] = Documents.Array(
                    p.Margins,
                    m => new JsonObject
                    {
                        ["name"] = m.Compressor,
                        ["surge_margin_settled"] = Documents.Number(m.Settled),
                        ["surge_margin_after_step"] = Documents.Number(m.AfterStep),
                    }
                ),
            }
        );
        return document;
    }
}
