using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Power-setting tables and take-off runs on the terminal and as documents.</summary>
internal static class PowerTablesLayout
{
    public static void Print(PowerTablesResult s, LoadedDefinition loaded, Display d)
    {
        foreach (var table in s.Tables)
        {
            Layout.Line($"{s.Engine}, rating {table.Rating}, {Speed(s.Speed, d)}");
            Layout.Line(
                "Marks: f flat thrust; otherwise the limit that governs: "
                    + string.Join("; ", table.Limits.Select(l => PointLayout.Setting(l, d)))
            );
            Layout.Line();
            Grid("N1, % of design", table, d, c => Display.Percent(c.N1));
            if (table.Cells.Any(c => double.IsFinite(c.N1Rpm)))
                Grid("N1, rpm", table, d, c => Display.Fixed(c.N1Rpm, 0));
            Grid("EPR (P5/P2)", table, d, c => Display.Fixed(c.Epr, 4));
            Grid($"Net thrust, {d.ForceUnit}", table, d, c => d.Force(c.NetThrust));
            if (s.Loads.Count > 0)
                Corrections(table, d);
            foreach (var reason in table.Cells.Where(c => c.Point is null).Select(c => c.Reason).Distinct().Take(3))
                Layout.Line("Empty cells: " + reason);
            Layout.Line();
        }

        Layout.Line(
            "The definition declares no range of altitude for its ratings: a rating is worked out wherever the table goes."
        );
        Close(loaded);
    }

    private static void Grid(string title, PowerTable table, Display d, Func<PowerCell, string> text)
    {
        // Rows by offset have another outside temperature at every altitude.
        var offsets = table.Rows.Any(r => r[0].OutsideTemperature != r[^1].OutsideTemperature);
        Layout.Table(
            $"{title} (columns: pressure altitude, {d.AltitudeUnit})",
            [
                offsets ? $"ISA {d.DifferenceUnit}" : $"OAT {d.TemperatureUnit}",
                .. table.Altitudes.Select(a => d.Altitude(a)),
            ],
            table.Rows.Select(row =>
                (string[])
                    [
                        offsets ? d.Difference(row[0].IsaOffset) : d.Temperature(row[0].OutsideTemperature),
                        .. row.Select(c => c.Point is null ? "" : $"{text(c)} {Mark(c)}"),
                    ]
            ),
            left: 0
        );
    }

    private static string Mark(PowerCell cell) => cell.Governing == "flat" ? "f" : cell.Governing;

    private static void Corrections(PowerTable table, Display d)
    {
        Layout.Table(
            "Corrections for loads: range over the cells, by what governs without the load",
            ["load", "governed by", "cells", "N1 pt, least", "most", "EPR, least", "most"],
            table.Corrections.Select(r =>
                new[]
                {
                    r.Load,
                    r.Governing,
                    r.Cells.ToString(),
                    Display.SignedPercent(r.LeastN1, 3),
                    Display.SignedPercent(r.MostN1, 3),
                    Display.Signed(r.LeastEpr, 4),
                    Display.Signed(r.MostEpr, 4),
                }
            ),
            left: 2
        );
        Layout.Table(
            "Corrections for loads at the corners",
            [
                "load",
                $"altitude {d.AltitudeUnit}",
                $"OAT {d.TemperatureUnit}",
                "governed by",
                "N1 pt",
                "EPR",
                "thrust %",
            ],
            table.Corners.SelectMany(c =>
                c.Corrections.Select(k =>
                    new[]
                    {
                        k.Load,
                        d.Altitude(c.PressureAltitude),
                        d.Temperature(c.OutsideTemperature),
                        c.Governing,
                        Display.SignedPercent(k.N1, 3),
                        Display.Signed(k.Epr, 4),
                        Display.SignedPercent(k.NetThrust, 3),
                    }
                )
            )
        );
    }

    public static void Print(IReadOnlyList<TakeOffRunResult> runs, LoadedDefinition loaded, Display d)
    {
        foreach (var s in runs)
        {
            Layout.Line(
                $"{s.Engine}, rating {s.Rating}: {d.Altitude(s.PressureAltitude)} {d.AltitudeUnit} pressure altitude, {d.Temperature(s.OutsideTemperature)} {d.TemperatureUnit}"
            );
            var spool = s.Setting.Spools[0];
            Layout.Line(
                $"N1 to be reached by {Knots(s.SetAt)} kt calibrated: {Display.Percent(spool.RelativeSpeed)} %"
                    + (double.IsFinite(spool.Rpm) ? $" ({Display.Fixed(spool.Rpm, 0)} rpm)" : "")
                    + $", EPR {Display.Fixed(s.Setting.EnginePressureRatio, 4)}, set by {s.Governing}; held from there on"
            );
            Layout.Line();
            Layout.Table(
                "With this N1, from standstill on; what the rating itself would allow at each speed",
                [
                    "CAS kt",
                    "Mach",
                    $"net thrust {d.ForceUnit}",
                    "of set %",
                    "EPR",
                    $"T41 {d.TemperatureUnit}",
                    $"EGT {d.TemperatureUnit}",
                    $"fuel {d.FuelFlowUnit}",
                    "rated N1 %",
                    $"rated thrust {d.ForceUnit}",
                    "limits with N1 held",
                ],
                s.Rows.Select(r =>
                    (string[])
                        [
                            Knots(r.CalibratedAirspeed),
                            Display.Fixed(r.Mach, 4),
                            .. r.Held is { } p
                                ? new[]
                                {
                                    d.Force(p.NetThrust),
                                    Display.Percent(p.NetThrust / s.Setting.NetThrust),
                                    Display.Fixed(p.EnginePressureRatio, 4),
                                    d.Temperature(p.T41),
                                    d.Temperature(p.T45),
                                    d.FuelFlow(p.FuelFlow),
                                }
                                : Enumerable.Repeat("-", 6),
                            .. r.Rated is { } rated
                                ? new[] { Display.Percent(rated.Spools[0].RelativeSpeed), d.Force(rated.NetThrust) }
                                : ["-", "-"],
                            string.Join(
                                ", ",
                                r.Beyond.Select(m => $"{QuantityText.Name(m.Limit.Quantity)}: {PointLayout.Left(m, d)}")
                            ),
                        ]
                ),
                left: 0
            );
            foreach (var reason in s.Rows.Where(r => r.Reason.Length > 0).Select(r => r.Reason).Take(3))
                Layout.Line("No point: " + reason);
        }

        Layout.Line(
            "Held N1 beyond a limit: a control that holds N1 would go past it there, one that guards the limit would not hold N1."
        );
        Close(loaded);
    }

    private static void Close(LoadedDefinition loaded)
    {
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    private static string Knots(double speed) => Display.Fixed(speed * 3600.0 / 1852.0, 1);

    private static string Speed(FlightSpeed speed, Display d) =>
        speed is FlightSpeed.Calibrated calibrated
            ? $"{Knots(calibrated.Item)} kt calibrated"
            : $"Mach {Display.Fixed(speed.MachAt(0.0), 3)}";

    public static JsonObject Document(PowerTablesResult s, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["tables"] = Documents.Array(
            s.Tables,
            table => new JsonObject
            {
                ["rating"] = table.Rating,
                ["limits"] = Documents.Array(table.Limits, Documents.LimitOf),
                ["cells"] = Documents.Array(table.Cells, Cell),
                ["correction_ranges"] = Documents.Array(
                    table.Corrections,
                    r => new JsonObject
                    {
                        ["load"] = r.Load,
                        ["set_by"] = r.Governing,
                        ["cells_counted"] = r.Cells,
                        ["least_N1_change"] = Documents.Number(r.LeastN1),
                        ["most_N1_change"] = Documents.Number(r.MostN1),
                        ["least_engine_pressure_ratio_change"] = Documents.Number(r.LeastEpr),
                        ["most_engine_pressure_ratio_change"] = Documents.Number(r.MostEpr),
                    }
                ),
            }
        );
        return document;
    }

    private static JsonObject Cell(PowerCell c)
    {
        var cell = new JsonObject
        {
            ["pressure_altitude_m"] = Documents.Number(c.PressureAltitude),
            ["outside_temperature_K"] = Documents.Number(c.OutsideTemperature),
            ["isa_offset_K"] = Documents.Number(c.IsaOffset),
            ["mach"] = Documents.Number(c.Mach),
            ["calibrated_airspeed_m_per_s"] = Documents.Number(c.CalibratedAirspeed),
            ["solved"] = c.Point is not null,
        };
        if (c.Point is not { } p)
        {
            cell["reason"] = c.Reason;
            return cell;
        }

        cell["set_by"] = c.Governing;
        cell["N1_relative_speed"] = Documents.Number(c.N1);
        cell["N1_rpm"] = Documents.Number(c.N1Rpm);
        cell["fan_speed_rpm"] = Documents.Number(p.FanRpm);
        cell["engine_pressure_ratio"] = Documents.Number(c.Epr);
        cell["net_thrust_N"] = Documents.Number(c.NetThrust);
        cell["fuel_flow_kg_per_s"] = Documents.Number(p.FuelFlow);
        cell["T41_K"] = Documents.Number(p.T41);
        cell["T45_K"] = Documents.Number(p.T45);
        cell["corrections"] = Documents.Array(
            c.Corrections,
            k => new JsonObject
            {
                ["load"] = k.Load,
                ["N1_change"] = Documents.Number(k.N1),
                ["engine_pressure_ratio_change"] = Documents.Number(k.Epr),
                ["net_thrust_change"] = Documents.Number(k.NetThrust),
            }
        );
        return cell;
    }

    public static JsonObject Document(IReadOnlyList<TakeOffRunResult> runs, LoadedDefinition loaded)
    {
        var document = Documents.Provenance(loaded);
        document["runs"] = Documents.Array(
            runs,
            s => new JsonObject
            {
                ["rating"] = s.Rating,
                ["pressure_altitude_m"] = Documents.Number(s.PressureAltitude),
                ["outside_temperature_K"] = Documents.Number(s.OutsideTemperature),
                ["set_at_m_per_s"] = Documents.Number(s.SetAt),
                ["N1_relative_speed"] = Documents.Number(s.Setting.Spools[0].RelativeSpeed),
                ["N1_rpm"] = Documents.Number(s.Setting.Spools[0].Rpm),
                ["set_by"] = s.Governing,
                ["rows"] = Documents.Array(
                    s.Rows,
                    r => new JsonObject
                    {
                        ["calibrated_airspeed_m_per_s"] = Documents.Number(r.CalibratedAirspeed),
                        ["mach"] = Documents.Number(r.Mach),
                        ["net_thrust_N"] = Documents.Number(r.Held?.NetThrust ?? double.NaN),
                        ["engine_pressure_ratio"] = Documents.Number(r.Held?.EnginePressureRatio ?? double.NaN),
                        ["fuel_flow_kg_per_s"] = Documents.Number(r.Held?.FuelFlow ?? double.NaN),
                        ["T41_K"] = Documents.Number(r.Held?.T41 ?? double.NaN),
                        ["T45_K"] = Documents.Number(r.Held?.T45 ?? double.NaN),
                        ["rated_N1_relative_speed"] = Documents.Number(r.Rated?.Spools[0].RelativeSpeed ?? double.NaN),
                        ["rated_net_thrust_N"] = Documents.Number(r.Rated?.NetThrust ?? double.NaN),
                        ["limits_exceeded"] = Documents.Array(r.Beyond, m => Documents.LimitOf(m.Limit)),
                        ["reason"] = r.Reason,
                    }
                ),
            }
        );
        return document;
    }
}
