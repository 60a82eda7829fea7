namespace CycleSim.Definitions;

/// <summary>The invented engines that ship with the program.</summary>
public static class EngineLibrary
{
    private const string Prefix = "engine:";

    /// <summary>Names in alphabetical order.</summary>
    public static IReadOnlyList<string> Names { get; } =
    [
        .. typeof(EngineLibrary)
            .Assembly.GetManifestResourceNames()
            .Where(n => n.StartsWith(Prefix, StringComparison.Ordinal))
            .Select(n => n[Prefix.Length..])
            .Order(StringComparer.Ordinal),
    ];

    /// <summary>The text of a shipped definition.</summary>
    /// <exception cref="DefinitionException">No engine of that name.</exception>
    public static string Text(string name)
    {
        using var stream = typeof(EngineLibrary).Assembly.GetManifestResourceStream(Prefix + name);
        if (stream is null)
            throw new DefinitionException([
                new Problem(
                    name,
                    0,
                    0,
                    "",
                    $"is neither a file nor an engine that ships with the program ({string.Join(", ", Names)})."
                        + Spelling.Suggest(name, Names)
                ),
            ]);
        using var reader = new StreamReader(stream);
        return reader.ReadToEnd();
    }

    /// <summary>A shipped engine by its name, or any engine by the path of its definition file.</summary>
    /// <exception cref="DefinitionException">Neither, or something is wrong in it.</exception>
    public static LoadedDefinition Load(string nameOrPath) =>
        Names.Contains(nameOrPath) ? DefinitionFile.Parse(Text(nameOrPath), nameOrPath)
        : File.Exists(nameOrPath) || nameOrPath.Contains('/') || nameOrPath.Contains('.')
            ? DefinitionFile.Load(nameOrPath)
        : DefinitionFile.Parse(Text(nameOrPath), nameOrPath);
}
