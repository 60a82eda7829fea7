using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>Writes a study's rows to the files that the command line asks for.</summary>
internal static class Exports
{
    /// <summary>What it takes to find the numbers again; no date, so that the same question gives the same bytes.</summary>
    public static IReadOnlyList<KeyValuePair<string, string>> Provenance(ParseResult result, LoadedDefinition loaded) =>
        [
            new("engine", loaded.Engine.Name),
            new("definition", loaded.Source),
            new("definition_sha256", loaded.Hash),
            new("program", "cyclesim " + Documents.Version),
            new("command_line", string.Join(' ', result.Tokens.Select(t => Quoted(t.Value)))),
            new("caution", Layout.Caution),
        ];

    /// <exception cref="UsageException">A file cannot be written.</exception>
    public static void Write(ParseResult result, CommonOptions common, StudyTable table)
    {
        To(result, common.Csv, path => TableFile.WriteCsv(table, path));
        To(result, common.Parquet, path => TableFile.WriteParquet(table, path));
    }

    private static void To(ParseResult result, Option<string?> option, Action<string> write)
    {
        if (result.GetValue(option) is not { } path)
            return;
        try
        {
            write(path);
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            throw new UsageException($"{option.Name} \"{path}\": {error.Message}");
        }
    }

    private static string Quoted(string token) => token.Contains(' ') ? $"\"{token}\"" : token;
}
