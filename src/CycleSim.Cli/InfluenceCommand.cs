using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>What moves an output, and how far: influence coefficients at a point.</summary>
internal static class InfluenceCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var setting = new PowerSetting();
        var command = new Command(
            "influence",
            """
            Influence coefficients at a point: what one step of each input does to the outputs at the power setting held.

            Examples:
              cyclesim influence velda-27 --design
              cyclesim influence velda-27 --altitude "35000 ft" --mach 0.78 --thrust "22 kN"
              cyclesim influence torvik-75 --altitude "0 m" --isa "15 K" --T41 "1700 K" --json
              cyclesim influence velda-27 --design --parquet influence.parquet
            """
        );
        common.AddTo(command, temperature: true);
        command.Add(common.Csv);
        command.Add(common.Parquet);
        setting.AddTo(command, rating: false);
        command.SetAction(result =>
        {
            setting.RequireOne(result, common);
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var point = setting.Solve(result, common, model);
            var influence = model.InfluenceOfLastPoint();
            Exports.Write(result, common, InfluenceTable.Of(influence, point, Exports.Provenance(result, loaded)));
            if (result.GetValue(common.Json))
                Documents.Print(Document(influence, point, loaded));
            else
                Print(influence, point, loaded, model, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }

    private static void Print(
        Influence influence,
        OperatingPoint p,
        LoadedDefinition loaded,
        EngineModel model,
        Display d
    )
    {
        Layout.Line(
            $"{p.EngineName}: {d.Altitude(p.Flight.PressureAltitude)} {d.AltitudeUnit} pressure altitude, Mach {Display.Fixed(p.Flight.Mach, 3)}, "
                + $"{d.Temperature(p.Flight.StaticTemperature)} {d.TemperatureUnit} (ISA {d.Difference(p.Flight.IsaOffset)} {d.DifferenceUnit}); held: {PointLayout.Setting(p.Setting, d)}"
        );
        Layout.Line();
        var compressors = p.Compressors.Select(c => c.Name).ToList();
        var spools = p.Spools.Count;
        string Relative(string output, int input, double step) =>
            Display.Signed(
                influence.Of(output, influence.Inputs[input])
                    * step
                    / influence.OutputValues[IndexOf(influence, output)]
                    * 100.0,
                3
            );
        string Absolute(string output, int input, double step) =>
            Display.Signed(influence.Of(output, influence.Inputs[input]) * step, 2);
        var rows = new List<string[]>();
        for (var i = 0; i < influence.Inputs.Count; i++)
        {
            if (Step(model, i, p) is not var (name, step))
                continue;
            var input = i;
            rows.Add([
                name,
                Relative("net_thrust_N", i, step),
                Relative("fuel_flow_kg_per_s", i, step),
                Relative("sfc_kg_per_N_s", i, step),
                .. new[] { "T41_K", "T45_K" }.Select(o =>
                    Display.Signed(
                        influence.Of(o, influence.Inputs[input]) * step * (d.DifferenceUnit == "K" ? 1.0 : 1.8),
                        2
                    )
                ),
                .. Enumerable.Range(1, spools).Select(n => Absolute($"N{n}_relative_speed", input, step * 100.0)),
                .. compressors.Select(c => Absolute($"surge_margin_{c}", input, step * 100.0)),
            ]);
        }

        Layout.Table(
            "One step of",
            [
                "",
                "thrust %",
                "fuel %",
                "SFC %",
                $"T41 {d.DifferenceUnit}",
                $"T45 {d.DifferenceUnit}",
                .. Enumerable.Range(1, spools).Select(n => $"N{n} pt"),
                .. compressors.Select(c => $"margin {c} pt"),
            ],
            rows
        );
        Layout.Line(
            "pt: points of per cent; speeds over design, margins at constant corrected speed. Exact derivatives, for small changes."
        );
        Layout.Line($"Definition {loaded.Source}, SHA-256 {loaded.Hash[..16]}, cyclesim {Documents.Version}.");
        Layout.Line(Layout.Caution);
    }

    /// <summary>What an engineer takes as one step of an input, and the step in SI; null for what this engine has not.</summary>
    private static (string Name, double Step)? Step(EngineModel model, int input, OperatingPoint p)
    {
        var layout = model.Layout;
        var engine = model.Engine;
        switch (input)
        {
            case InputLayout.Pressure:
                return ("ambient pressure +1 %", 0.01 * p.Flight.StaticPressure);
            case InputLayout.Temperature:
                return ("outside temperature +1 K", 1.0);
            case InputLayout.Mach:
                return ("Mach number +0.01", 0.01);
            case InputLayout.SpecificHumidity:
                return engine.Definition.Gas.CarriesHumidity ? ("humidity +1 g/kg", 1e-3) : null;
        }

        for (var k = 0; k < engine.Spools.Length; k++)
            if (input == layout.PowerOfftake(k))
                return ($"power from {engine.Spools[k].Name} +100 kW", 1e5);
        for (var k = 0; k < engine.Ports.Length; k++)
        {
            if (input == layout.PortFraction(k))
                return ($"{engine.Ports[k].Port.Name} +1 pt of {engine.Ports[k].Port.From} flow", 0.01);
            if (input == layout.PortFlow(k))
                return null;
        }

        if (!engine.HasFan && (input == layout.CompressorEfficiency(0) || input == layout.CompressorFlow(0)))
            return null;
        if (input == layout.BypassNozzleArea && (!engine.HasFan || engine.Definition.Mixer is not null))
            return null;
        return (layout.Names[input].Replace("_factor_", " of ").Replace('_', ' ') + " +1 %", 0.01);
    }

    private static JsonObject Document(Influence influence, OperatingPoint point, LoadedDefinition loaded)
    {
        var document = Documents.Point(point, loaded);
        var table = new JsonObject();
        for (var o = 0; o < influence.Outputs.Count; o++)
        {
            var row = new JsonObject();
            for (var i = 0; i < influence.Inputs.Count; i++)
                row[influence.Inputs[i]] = influence[o, i];
            table[influence.Outputs[o]] = row;
        }

        document["derivatives"] = table;
        return document;
    }

    private static int IndexOf(Influence influence, string output) => influence.Outputs.ToList().IndexOf(output);
}
