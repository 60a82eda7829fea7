using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;

namespace CycleSim.Cli;

/// <summary>An operating point on the terminal.</summary>
internal static class PointLayout
{
    public static void Print(OperatingPoint p, LoadedDefinition loaded, IReadOnlyList<LimitMargin> margins, Display d)
    {
        var flight = p.Flight;
        Layout.Line(
            $"{p.EngineName}: {d.Altitude(flight.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(flight.Mach, 3)}, "
                + $"{d.Temperature(flight.StaticTemperature)} {d.TemperatureUnit} (ISA {d.Difference(flight.IsaOffset)} {d.DifferenceUnit}), "
                + $"water {Display.Fixed(flight.WaterAirRatio * 1000.0, 2)} g/kg"
        );
        Layout.Line($"power set by {Setting(p.Setting, d)}");
        Layout.Line();
        Layout.Pairs(
            (
                "net thrust",
                $"{d.Force(p.NetThrust)} {d.ForceUnit}   (gross {d.Force(p.GrossThrust)}, ram drag {d.Force(p.RamDrag)})"
            ),
            (
                "installed thrust",
                p.InstalledThrust == p.NetThrust
                    ? "equal to net thrust: no nacelle loss here"
                    : $"{d.Force(p.InstalledThrust)} {d.ForceUnit}   (nacelle drag and scrubbing {d.Force(p.NetThrust - p.InstalledThrust)})"
            ),
            (
                "fuel flow",
                $"{d.FuelFlow(p.FuelFlow)} {d.FuelFlowUnit}   (fuel-air ratio {Display.Fixed(p.FuelAirRatio, 5)})"
            ),
            ("SFC", $"{d.Sfc(p.Sfc)} {d.SfcUnit}"),
            ("bypass ratio", Display.Fixed(p.BypassRatio, 3)),
            (
                "pressure ratios",
                $"overall P3/P2 {Display.Fixed(p.OverallPressureRatio, 3)}, engine P5/P2 {Display.Fixed(p.EnginePressureRatio, 4)}"
            ),
            (
                "temperatures",
                $"T4 {d.Temperature(p.T4)}, T41 {d.Temperature(p.T41)}, T45 {d.Temperature(p.T45)} {d.TemperatureUnit}"
            ),
            ("dissociation", DissociationNote(p, d)),
            ("lever", $"{Display.Percent(p.LeverPosition, 1)} %"),
            (
                "efficiencies",
                $"thermal {Display.Percent(p.ThermalEfficiency, 1)}, propulsive {Display.Percent(p.PropulsiveEfficiency, 1)}, overall {Display.Percent(p.OverallEfficiency, 1)} %"
            )
        );
        foreach (var margin in margins)
            Layout.Line(
                $"  {(margin.Left < -1e-9 * margin.Limit.Value ? "BEYOND " : "")}limit {Setting(margin.Limit, d)} of {margin.Rating}: {Left(margin, d)}"
            );
        Layout.Line();
        Layout.Table(
            "Stations",
            [
                "station",
                "plane",
                $"W {d.FlowUnit}",
                $"Tt {d.TemperatureUnit}",
                $"Pt {d.PressureUnit}",
                "fuel-air ratio",
            ],
            p.Stations.Select(s =>
                new[]
                {
                    s.Number,
                    s.Plane,
                    d.Flow(s.MassFlow),
                    d.Temperature(s.TotalTemperature),
                    d.Pressure(s.TotalPressure),
                    Display.Fixed(s.FuelAirRatio, 5),
                }
            ),
            left: 2
        );
        Layout.Table(
            "Compressors (surge margin as pressure ratio to the surge line at constant flow, and as PR/W at constant speed)",
            [
                "",
                "PR",
                "isentropic %",
                "polytropic %",
                $"corrected {d.FlowUnit}",
                "corrected speed %",
                $"power {d.PowerUnit}",
                "margin, flow %",
                "margin, speed %",
            ],
            p.Compressors.Select(c =>
                new[]
                {
                    c.Name,
                    Display.Fixed(c.PressureRatio, 4),
                    Display.Percent(c.IsentropicEfficiency),
                    Display.Percent(c.PolytropicEfficiency),
                    d.Flow(c.CorrectedFlow),
                    Display.Percent(c.RelativeCorrectedSpeed),
                    d.Power(c.Power),
                    Display.Percent(c.SurgeMarginConstantFlow, 1),
                    Display.Percent(c.SurgeMarginConstantSpeed, 1),
                }
            )
        );
        Layout.Table(
            "Turbines",
            ["", "expansion", "isentropic %", $"work {d.WorkUnit}", $"power {d.PowerUnit}", "choked"],
            p.Turbines.Select(t =>
                new[]
                {
                    t.Name,
                    Display.Fixed(t.ExpansionRatio, 4),
                    Display.Percent(t.IsentropicEfficiency),
                    d.Work(t.SpecificWork),
                    d.Power(t.Power),
                    t.Choked ? "yes" : "no",
                }
            )
        );
        Layout.Table(
            "Spools",
            ["", "speed %", "speed rpm", $"offtake {d.PowerUnit}"],
            p.Spools.Select(s =>
                new[] { s.Name, Display.Percent(s.RelativeSpeed), Display.Fixed(s.Rpm, 0), d.Power(s.Offtake) }
            )
        );
        if (double.IsFinite(p.FanRpm))
            Layout.Line($"Fan {Display.Fixed(p.FanRpm, 0)} rpm.");
        Layout.Table(
            "Nozzles",
            [
                "",
                "P/Pamb",
                "choked",
                $"exit {d.SpeedUnit}",
                $"effective throat {d.AreaUnit}",
                $"gross thrust {d.ForceUnit}",
            ],
            p.Nozzles.Select(n =>
                new[]
                {
                    n.Name,
                    Display.Fixed(n.PressureRatio, 4),
                    n.Choked ? "yes" : "no",
                    d.Speed(n.ExitSpeed),
                    d.Area(n.EffectiveArea),
                    d.Force(n.GrossThrust),
                }
            )
        );
        if (p.Air.Count > 0)
            Layout.Table(
                "Air taken",
                ["", "from", "to", d.FlowUnit, $"Tt {d.TemperatureUnit}", $"Pt {d.PressureUnit}"],
                p.Air.Select(a =>
                    new[]
                    {
                        a.Name,
                        a.From,
                        a.To,
                        d.Flow(a.MassFlow),
                        d.Temperature(a.TotalTemperature),
                        d.Pressure(a.TotalPressure),
                    }
                ),
                left: 3
            );
        Layout.Line(
            FormattableString.Invariant(
                $"Solved in {p.Outcome.Iterations} iterations, largest relative imbalance {p.Outcome.Residual:E1}; mass and energy close to {p.Audit.LargestImbalance:E1}."
            )
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    public static string Left(LimitMargin margin, Display d)
    {
        var by = Math.Abs(margin.Left);
        var amount = margin.Limit.Quantity switch
        {
            Quantity.T3 or Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5 =>
                $"{Display.Fixed(d.DifferenceUnit == "K" ? by : by * 1.8, 1)} {d.DifferenceUnit}",
            Quantity.P3 => $"{d.Pressure(by)} {d.PressureUnit}",
            Quantity.Epr => Display.Fixed(by, 4),
            _ => $"{Display.Percent(by)} points",
        };
        return margin.Left < -1e-9 * margin.Limit.Value ? $"exceeded by {amount}" : $"{amount} left";
    }

    private static string DissociationNote(OperatingPoint p, Display d) =>
        double.IsNaN(p.DissociationDrop)
            ? "not covered by the constant gas"
            : $"combustion is taken as complete; in equilibrium T4 would be {Display.Fixed(p.DissociationDrop * (d.DifferenceUnit == "K" ? 1.0 : 1.8), 1)} {d.DifferenceUnit} lower at this fuel flow";

    public static string Setting(Limit setting, Display d) =>
        QuantityText.Name(setting.Quantity)
        + " = "
        + setting.Quantity switch
        {
            Quantity.NetThrust or Quantity.InstalledThrust => $"{d.Force(setting.Value)} {d.ForceUnit}",
            Quantity.FuelFlow => $"{d.FuelFlow(setting.Value)} {d.FuelFlowUnit}",
            Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5 or Quantity.T3 =>
                $"{d.Temperature(setting.Value)} {d.TemperatureUnit}",
            Quantity.P3 => $"{d.Pressure(setting.Value)} {d.PressureUnit}",
            Quantity.Epr => Display.Fixed(setting.Value, 4),
            _ => $"{Display.Percent(setting.Value)} %",
        };
}
