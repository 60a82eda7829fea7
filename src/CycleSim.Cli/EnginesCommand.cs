using System.CommandLine;
using System.Text.Json.Nodes;
using CycleSim.Definitions;

namespace CycleSim.Cli;

/// <summary>Lists the engines that ship with the program, or prints the definition of one.</summary>
internal static class EnginesCommand
{
    public static Command Create()
    {
        var show = CommonOptions.Text(
            "--show",
            "Print the definition file of this engine, to start one of your own from."
        );
        var json = new Option<bool>("--json") { Description = "One JSON document." };
        var command = new Command("engines", "List the engines that ship with the program; all of them are invented.")
        {
            show,
            json,
        };
        command.SetAction(result =>
        {
            if (result.GetValue(show) is { } name)
            {
                Console.Write(EngineLibrary.Text(name));
                return ExitCode.Done;
            }

            var engines = EngineLibrary.Names.Select(EngineLibrary.Load).ToList();
            if (result.GetValue(json))
                Documents.Print(
                    new JsonObject
                    {
                        ["engines"] = new JsonArray([
                            .. engines.Select(e => new JsonObject
                            {
                                ["name"] = e.Engine.Name,
                                ["description"] = e.Engine.Description,
                                ["ratings"] = new JsonArray([
                                    .. e.Engine.Ratings.Select(r => JsonValue.Create(r.Name)),
                                ]),
                                ["definition_sha256"] = e.Hash,
                            }),
                        ]),
                    }
                );
            else
                Layout.Table(
                    "Engines that ship with the program, all invented:",
                    ["name", "description", "ratings"],
                    engines.Select(e =>
                        new[]
                        {
                            e.Engine.Name,
                            e.Engine.Description,
                            string.Join(", ", e.Engine.Ratings.Select(r => r.Name)),
                        }
                    ),
                    left: 3
                );
            return ExitCode.Done;
        });
        return command;
    }
}
