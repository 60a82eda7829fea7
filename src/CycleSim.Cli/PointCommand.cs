using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Reports;

namespace CycleSim.Cli;

/// <summary>One operating point with everything behind it.</summary>
internal static class PointCommand
{
    public static Command Create()
    {
        var common = new CommonOptions();
        var setting = new PowerSetting();
        var command = new Command(
            "point",
            """
            One operating point: performance, stations, components, air, balances.

            Examples:
              cyclesim point velda-27 --design
              cyclesim point velda-27 --altitude "0 ft" --mach 0.2 --isa "15 K" --rating take-off
              cyclesim point velda-27 --altitude "35000 ft" --mach 0.78 --thrust "22 kN" --units us
              cyclesim point velda-27 --altitude "10000 ft" --cas "250 kt" --lever "40 %" --bleed "customer-bleed=3 %"
              cyclesim point velda-27 --altitude "0 ft" --rating take-off --worn "hpt efficiency=-2 %" --worn "hpt flow=1 %"
            """
        );
        setting.AddTo(command, rating: true);
        common.AddTo(command, temperature: true);
        command.SetAction(result =>
        {
            setting.RequireOne(result, common);
            var loaded = EngineLibrary.Load(result.GetRequiredValue(common.Engine));
            var model = new EngineModel(loaded.Engine);
            var point = setting.Solve(result, common, model);
            var margins = setting.LimitsOf(result, model) is { } limits ? LimitMargin.Of(point, limits) : [];
            if (result.GetValue(common.Json))
                Documents.Print(Documents.Point(point, loaded, margins));
            else
                PointLayout.Print(point, loaded, margins, common.Display(result));
            return ExitCode.Done;
        });
        return command;
    }
}
