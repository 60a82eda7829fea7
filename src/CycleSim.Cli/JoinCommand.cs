using System.CommandLine;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Puts the parts of a sweep together.</summary>
internal static class JoinCommand
{
    public static Command Create()
    {
        var output = new Argument<string>("out") { Description = "The Parquet file to be written." };
        var parts = new Argument<string[]>("parts")
        {
            Description = "The parts, in any order.",
            Arity = ArgumentArity.OneOrMore,
        };
        var command = new Command(
            "join",
            """
            Joins the parts of a sweep (cyclesim sweep ... --part 3/64) to the file that the whole sweep would have written.

            Examples:
              cyclesim join cruise.parquet cruise-1.parquet cruise-2.parquet cruise-3.parquet
            """
        )
        {
            output,
            parts,
        };
        command.SetAction(
            async (result, cancellation) =>
                await Task.Run(
                    () => Join(result.GetRequiredValue(output), result.GetRequiredValue(parts), cancellation),
                    CancellationToken.None
                )
        );
        return command;
    }

    private static int Join(string output, string[] parts, CancellationToken cancellation)
    {
        try
        {
            var rows = SweepParts.Join(output, parts, cancellation);
            Layout.Line($"{parts.Length} parts, {rows} points. Written: {output}");
            return ExitCode.Done;
        }
        catch (OperationCanceledException)
        {
            Console.Error.WriteLine("Stopped; nothing was written.");
            return ExitCode.Stopped;
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            throw new UsageException($"{output}: {error.Message}");
        }
    }
}
