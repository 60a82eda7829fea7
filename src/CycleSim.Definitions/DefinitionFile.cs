using System.Security.Cryptography;
using System.Text;
using CycleSim.Engine;

namespace CycleSim.Definitions;

/// <summary>An engine as read, with what tells one definition from another.</summary>
/// <param name="Source">file name, or the name of a shipped engine</param>
/// <param name="Hash">SHA-256 of the text, hexadecimal</param>
/// <param name="Text">the definition as it was read</param>
public sealed record LoadedDefinition(EngineDefinition Engine, string Source, string Hash, string Text);

/// <summary>Reads definition files: TOML with units in the text; every key is described in REFERENCE.md.</summary>
public static class DefinitionFile
{
    /// <summary>Largest file read, bytes; a definition is a few kilobytes.</summary>
    private const long LargestFile = 1 << 20;

    /// <exception cref="DefinitionException">The file cannot be read or holds something wrong; all of it is listed.</exception>
    public static LoadedDefinition Load(string path)
    {
        string text;
        try
        {
            var info = new FileInfo(path);
            if (!info.Exists)
                throw Whole(path, Directory.Exists(path) ? "is a folder, not a file." : "there is no such file.");
            if (info.Length > LargestFile)
                throw Whole(path, $"is {info.Length / 1024} kB long; a definition file is a text of a few kilobytes.");
            text = File.ReadAllText(path, new UTF8Encoding(false, true));
        }
        catch (Exception error)
            when (error
                    is IOException
                        or UnauthorizedAccessException
                        or DecoderFallbackException
                        or ArgumentException
                        or NotSupportedException
            )
        {
            throw Whole(
                path,
                error is DecoderFallbackException ? "is not a text in UTF-8." : $"cannot be read: {error.Message}"
            );
        }

        return Parse(text, path);
    }

    /// <exception cref="DefinitionException">The text holds something wrong; all of it is listed.</exception>
    public static LoadedDefinition Parse(string text, string source)
    {
        var problems = new List<Problem>();
        var nodes = TomlTables.Read(text, source, problems);
        // What does not even parse leaves gaps that would only be reported a second time as missing keys.
        var engine = problems.Count > 0 ? null : new DefinitionBuilder(nodes, source, problems).Build();
        if (engine is null || problems.Count > 0)
            throw new DefinitionException([.. problems.Distinct().OrderBy(p => p.Line).ThenBy(p => p.Column)]);
        return new LoadedDefinition(
            engine,
            source,
            Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(text))),
            text
        );
    }

    private static DefinitionException Whole(string path, string message) =>
        new([new Problem(path, 0, 0, "", message)]);
}
