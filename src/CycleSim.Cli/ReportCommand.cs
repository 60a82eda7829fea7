using System.CommandLine;
using CycleSim.Charts;
using CycleSim.Definitions;
using CycleSim.Reports;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>One self-contained HTML file about an engine.</summary>
internal static class ReportCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var output = CommonOptions.Text("--out", "File to write; the engine's name with .html without it.");
        var command = new Command(
            "report",
            """
            One HTML file about an engine, read with no network: definition, design point, ratings, envelope, compressors and
            surge margins, penalties, provenance.

            Examples:
              cyclesim report velda-27
              cyclesim report my-engine.toml --out my-engine.html --units us
            """
        )
        {
            common.Engine,
            output,
            common.UnitSystem,
        };
        command.SetAction(result =>
        {
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var path = result.GetValue(output) ?? loaded.Engine.Name + ".html";
            var source = new ReportSource(loaded.Text, Exports.Provenance(result, loaded), Layout.Caution);
            var units = result.GetValue(common.UnitSystem) == "us" ? ChartUnits.US : ChartUnits.SI;
            Write(path, EngineReport.Html(model, source, units));
            Layout.Line($"{path}: report of {loaded.Engine.Name}. {Layout.Caution}");
            return ExitCode.Done;
        });
        return command;
    }

    private static void Write(string path, string html)
    {
        try
        {
            WholeFile.WriteText(path, html);
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            throw new UsageException($"--out \"{path}\": {error.Message}");
        }
    }
}
