using System.Diagnostics;
using System.Text.Json;

namespace CycleSim.Cli.Tests;

/// <summary>Runs the built program as a user does and gives back what it printed.</summary>
internal sealed record CommandLine(int ExitCode, string Output, string Error)
{
    public static CommandLine Run(params string[] arguments)
    {
        var start = new ProcessStartInfo("dotnet")
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
            StandardOutputEncoding = System.Text.Encoding.UTF8,
            StandardErrorEncoding = System.Text.Encoding.UTF8,
        };
        start.ArgumentList.Add(Path.Combine(AppContext.BaseDirectory, "cyclesim.dll"));
        foreach (var argument in arguments)
            start.ArgumentList.Add(argument);
        using var process = Process.Start(start)!;
        var error = process.StandardError.ReadToEndAsync();
        var output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        return new CommandLine(process.ExitCode, output, error.Result);
    }

    public JsonElement Json => JsonDocument.Parse(Output).RootElement;

    /// <summary>A number of the document by its path, for instance stations[3].total_pressure_Pa by name and index.</summary>
    public double Number(string name) => Json.GetProperty(name).GetDouble();
}
