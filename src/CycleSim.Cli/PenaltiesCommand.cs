using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>What bleed air and shaft power cost.</summary>
internal static class PenaltiesCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var load = new LoadOption();
        var rating = CommonOptions.Text(
            "--rating",
            "Rating whose limit is held in the second half of the answer; the first of the definition without it."
        );
        var thrust = CommonOptions.Text(
            "--thrust",
            "Net thrust held in the first half, for instance \"22 kN\"; that of the rating without it."
        );
        var pressure = CommonOptions.Text(
            "--least-pressure",
            "Total pressure that air must have at its port to serve a need, for instance \"250 kPa\"; any without it."
        );
        var command = new Command(
            "penalties",
            """
            What bleed air and shaft power cost: fuel, temperatures, speeds and surge margins at constant thrust; thrust and break
            temperature at the limit of a rating. A unit of every port and spool, loads by name, the cheapest source of each.

            Examples:
              cyclesim penalties velda-27 --altitude "0 m" --isa "15 K"
              cyclesim penalties velda-27 --altitude "35000 ft" --mach 0.78 --rating max-cruise --thrust "22 kN" \
                --load "packs: customer-bleed=0.6 kg/s" --load "wing anti-ice: customer-bleed=1 %" --load "electrical: high=90 kW"
              cyclesim penalties velda-27 --altitude "15000 ft" --mach 0.5 --rating max-climb --load "nacelle: nacelle-anti-ice=open"
              cyclesim penalties torvik-75 --altitude "0 m" --load "packs: customer-bleed=2 kg/s, high=50 kW" --least-pressure "250 kPa"
            """
        )
        {
            rating,
            thrust,
            pressure,
            load.Option,
            common.Csv,
            common.Parquet,
        };
        common.AddTo(command, temperature: true);
        command.SetAction(result =>
        {
            var flight = common.Flight(result);
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var loads = load.Read(result, loaded.Engine);
            var model = new EngineModel(loaded.Engine);
            var study = Penalties.Run(
                model,
                flight,
                CommonOptions.RatingOf(result, rating, loaded),
                loads,
                Thrust(result, thrust),
                common.Loads(result, model.Engine),
                CommonOptions.Quantity(result, pressure, Dimension.Pressure, "0 Pa")
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

    private static double Thrust(ParseResult result, Option<string?> option)
    {
        if (result.GetValue(option) is not { } text)
            return 0.0;
        var thrust = CommonOptions.Quantity(result, option, Dimension.Force, "");
        return thrust > 0.0
            ? thrust
            : throw new UsageException($"{option.Name} must be above zero; '{text}' was given.");
    }

    private static void Print(PenaltiesResult s, LoadedDefinition loaded, Display d)
    {
        var p = s.AtThrust;
        Layout.Line(
            $"{s.Engine}: {d.Altitude(p.Flight.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(p.Flight.Mach, 3)}, "
                + $"{d.Temperature(p.Flight.StaticTemperature)} {d.TemperatureUnit} (ISA {d.Difference(p.Flight.IsaOffset)} {d.DifferenceUnit})"
        );
        Layout.Line(
            $"Thrust held {d.Force(p.NetThrust)} {d.ForceUnit}: fuel {d.FuelFlow(p.FuelFlow)} {d.FuelFlowUnit}, SFC {d.Sfc(p.Sfc)} {d.SfcUnit}, "
                + $"T41 {d.Temperature(p.T41)}, EGT (T45) {d.Temperature(p.T45)} {d.TemperatureUnit}"
        );
        Layout.Line(
            $"Limit held ({s.Rating}) {PointLayout.Setting(s.Limit, d)}: thrust {d.Force(s.AtLimit.NetThrust)} {d.ForceUnit} at "
                + $"{d.Temperature(s.AtLimit.Flight.StaticTemperature)} {d.TemperatureUnit}"
                + (
                    s.LimitHeldAtBreak
                        ? ", the break temperature: the rating is flat at the outside temperature asked for"
                        : ""
                )
        );
        Layout.Line(
            $"Break without the loads {d.Temperature(s.BreakTemperature, 2)} {d.TemperatureUnit}, where {PointLayout.Setting(s.BreakLimit, d)}."
        );
        Layout.Line();
        Effects("Per unit, first order (exact derivatives)", s.PerUnit, full: false, s, d);
        Effects("Per unit, solved anew", s.PerUnit, full: true, s, d);
        if (s.Loads.Count > 0)
        {
            var all = s.Loads.Count > 1 ? [.. s.Loads, s.Together] : s.Loads;
            Effects("Loads, first order (exact derivatives)", all, full: false, s, d);
            Effects("Loads, solved anew", all, full: true, s, d);
            Differences(all, s, d);
        }

        Ranking(s, d);
        foreach (var reason in Reasons(s, d).Distinct().Take(6))
            Layout.Line(reason);
        Layout.Line(
            "pt: points of per cent; speeds over design; SM surge margin at constant corrected speed. 1 %: of the flow into the port's compressor (the bypass flow behind the fan); nothing where a schedule has the port shut."
        );
        Layout.Line(
            "The cheapest source is of use only where its pressure and temperature suffice; ports behind a schedule are not ranked."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static void Effects(string title, IReadOnlyList<Penalty> penalties, bool full, PenaltiesResult s, Display d)
    {
        var spools = s.AtThrust.Spools.Count;
        Layout.Table(
            title + ": at constant thrust | at the limit",
            [
                "",
                "SFC, fuel %",
                $"T41 {d.DifferenceUnit}",
                $"EGT {d.DifferenceUnit}",
                .. Enumerable.Range(1, spools).Select(n => $"N{n} pt"),
                .. s.AtThrust.Compressors.Select(c => $"SM {c.Name} pt"),
                "| thrust %",
                "SFC %",
                $"break {d.DifferenceUnit}",
            ],
            penalties.Select(p =>
            {
                var thrust = full ? p.AtThrust.Full : p.AtThrust.FirstOrder;
                var limit = full ? p.AtLimit.Full : p.AtLimit.FirstOrder;
                return (string[])
                    [
                        p.Name,
                        Display.SignedPercent(thrust.Sfc, 4),
                        d.SignedDifference(thrust.T41, 3),
                        d.SignedDifference(thrust.T45, 3),
                        .. thrust.Speeds.Select(n => Display.SignedPercent(n, 4)),
                        .. thrust.SurgeMargins.Select(m => Display.SignedPercent(m, 4)),
                        Display.SignedPercent(limit.NetThrust, 4),
                        Display.SignedPercent(limit.Sfc, 4),
                        d.SignedDifference(full ? p.Break : p.BreakFirstOrder, 3),
                    ];
            })
        );
    }

    private static void Differences(IReadOnlyList<Penalty> penalties, PenaltiesResult s, Display d)
    {
        var rows = penalties.Select(p =>
            Row(
                $"{p.Name}: full less first order",
                p.AtThrust.Difference,
                p.AtLimit.Difference,
                p.Break - p.BreakFirstOrder
            )
        );
        if (penalties.Count > 1)
            rows = rows.Append(
                Row(
                    "all together less the sum of each alone",
                    s.Together.AtThrust.Full.Less(s.SumAtThrust),
                    s.Together.AtLimit.Full.Less(s.SumAtLimit),
                    s.Together.Break - s.SumBreak
                )
            );
        Layout.Table(
            "Differences: at constant thrust | at the limit",
            [
                "",
                "SFC pt",
                $"T41 {d.DifferenceUnit}",
                $"EGT {d.DifferenceUnit}",
                "| thrust pt",
                $"break {d.DifferenceUnit}",
            ],
            rows
        );

        string[] Row(string name, PenaltyEffects thrust, PenaltyEffects limit, double atBreak) =>
            [
                name,
                Display.SignedPercent(thrust.Sfc, 4),
                d.SignedDifference(thrust.T41, 3),
                d.SignedDifference(thrust.T45, 3),
                Display.SignedPercent(limit.NetThrust, 4),
                d.SignedDifference(atBreak, 3),
            ];
    }

    private static void Ranking(PenaltiesResult s, Display d)
    {
        if (s.Ranking.Count == 0)
            return;
        Layout.Table(
            "From where each need is served cheapest, by SFC at constant thrust (one unit: first order; loads: solved anew)",
            [
                "need",
                "from",
                "amount",
                "SFC %",
                "thrust at the limit %",
                $"break {d.DifferenceUnit}",
                $"supply {d.PressureUnit}",
                $"supply {d.TemperatureUnit}",
                "",
            ],
            s.Ranking.Select(r =>
                new[]
                {
                    r.Need,
                    r.Source,
                    r.Kind == LoadKind.Power
                        ? $"{d.Power(r.Amount)} {d.PowerUnit}"
                        : $"{d.Flow(r.Amount)} {d.FlowUnit}",
                    Display.SignedPercent(r.Sfc, 4),
                    Display.SignedPercent(r.NetThrust, 4),
                    d.SignedDifference(r.Break, 3),
                    d.Pressure(r.SupplyPressure),
                    double.IsNaN(r.SupplyTemperature) ? "-" : d.Temperature(r.SupplyTemperature),
                    r.Reason,
                }
            ),
            left: 2
        );
        foreach (var need in s.Ranking.GroupBy(r => (r.Need, Power: r.Kind == LoadKind.Power)))
            if (need.Where(r => r.Reason.Length == 0).MaxBy(r => r.NetThrust) is { } atLimit && atLimit != need.First())
                Layout.Line(
                    $"{need.Key.Need}: {need.First().Source} costs the least fuel, {atLimit.Source} the least thrust at the limit."
                );
    }

    private static IEnumerable<string> Reasons(PenaltiesResult s, Display d)
    {
        foreach (var p in s.PerUnit.Concat(s.Loads).Append(s.Together))
        {
            foreach (var reason in new[] { p.AtThrust.Reason, p.AtLimit.Reason }.Where(r => r.Length > 0))
                yield return $"No point with {p.Name}: {reason}";
            if (p.Beyond.Count > 0)
                yield return $"With {p.Name}, holding {QuantityText.Name(s.Limit.Quantity)} goes beyond "
                    + string.Join(" and ", p.Beyond.Select(l => PointLayout.Setting(l, d)))
                    + ": the rating would stop earlier.";
        }
    }

    private static JsonObject Document(PenaltiesResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["rating"] = s.Rating;
        document["net_thrust_held_N"] = Documents.Number(s.AtThrust.NetThrust);
        document["limit_held"] = Documents.LimitOf(s.Limit);
        document["limit_held_at_break"] = s.LimitHeldAtBreak;
        document["break_temperature_K"] = Documents.Number(s.BreakTemperature);
        document["break_limit"] = Documents.LimitOf(s.BreakLimit);
        document["point_at_thrust"] = Documents.Point(s.AtThrust);
        document["point_at_limit"] = Documents.Point(s.AtLimit);
        document["per_unit"] = Documents.Array(s.PerUnit, p => Of(p, s));
        document["loads"] = Documents.Array(s.Loads, p => Of(p, s));
        document["all_together"] = Of(s.Together, s);
        document["sum_of_singles"] = new JsonObject
        {
            ["at_thrust"] = Of(s.SumAtThrust, s),
            ["at_limit"] = Of(s.SumAtLimit, s),
            ["break_change_K"] = Documents.Number(s.SumBreak),
        };
        document["ranking"] = Documents.Array(
            s.Ranking,
            r => new JsonObject
            {
                ["need"] = r.Need,
                ["source"] = r.Source,
                [r.Kind == LoadKind.Power ? "power_W" : "mass_flow_kg_per_s"] = Documents.Number(r.Amount),
                ["sfc_change"] = Documents.Number(r.Sfc),
                ["net_thrust_change"] = Documents.Number(r.NetThrust),
                ["break_change_K"] = Documents.Number(r.Break),
                ["total_pressure_Pa"] = Documents.Number(r.SupplyPressure),
                ["total_temperature_K"] = Documents.Number(r.SupplyTemperature),
                ["reason"] = r.Reason,
            }
        );
        return document;
    }

    private static JsonObject Of(Penalty p, PenaltiesResult s) =>
        new()
        {
            ["name"] = p.Name,
            ["at_thrust"] = Of(p.AtThrust, s),
            ["at_limit"] = Of(p.AtLimit, s),
            ["limits_exceeded"] = Documents.Array(p.Beyond, Documents.LimitOf),
            ["break_change_first_order_K"] = Documents.Number(p.BreakFirstOrder),
            ["break_change_K"] = Documents.Number(p.Break),
        };

    private static JsonObject Of(PenaltyAnswer answer, PenaltiesResult s) =>
        new()
        {
            ["first_order"] = Of(answer.FirstOrder, s),
            ["full"] = Of(answer.Full, s),
            ["reason"] = answer.Reason,
        };

    private static JsonObject Of(PenaltyEffects e, PenaltiesResult s)
    {
        var effects = new JsonObject
        {
            ["net_thrust_change"] = Documents.Number(e.NetThrust),
            ["fuel_flow_change"] = Documents.Number(e.FuelFlow),
            ["sfc_change"] = Documents.Number(e.Sfc),
            ["T41_change_K"] = Documents.Number(e.T41),
            ["T45_change_K"] = Documents.Number(e.T45),
        };
        effects["spools"] = Documents.Array(
            s.AtThrust.Spools.Zip(e.Speeds),
            pair => new JsonObject
            {
                ["name"] = pair.First.Name,
                ["relative_speed_change"] = Documents.Number(pair.Second),
            }
        );
        effects["compressors"] = Documents.Array(
            s.AtThrust.Compressors.Zip(e.SurgeMargins),
            pair => new JsonObject
            {
                ["name"] = pair.First.Name,
                ["surge_margin_change"] = Documents.Number(pair.Second),
            }
        );
        return effects;
    }
}
