using Tomlyn;
using Tomlyn.Parsing;
using Tomlyn.Syntax;

namespace CycleSim.Definitions;

/// <summary>A value as it stands in the file.</summary>
internal sealed record Entry(string Key, ValueSyntax? Value, int Line, int Column);

/// <summary>A table as it stands in the file; tables of tables hang below the one they belong to.</summary>
internal sealed class TomlTableNode(string name, string path, int line)
{
    public string Name { get; } = name;

    /// <summary>Name with position, for messages: compressor[2].</summary>
    public string Path { get; } = path;

    public int Line { get; } = line;

    public List<Entry> Entries { get; } = [];

    public List<TomlTableNode> Children { get; } = [];
}

/// <summary>Reads the text into tables, keeping lines; reports what is not TOML.</summary>
internal static class TomlTables
{
    public static List<TomlTableNode> Read(string text, string source, List<Problem> problems)
    {
        if (Parsed(text, source, problems) is not { } document)
            return [];
        var top = new TomlTableNode("", "", 1);
        var tables = new List<TomlTableNode> { top };
        Fill(top, document.KeyValues);
        foreach (var table in document.Tables)
        {
            if (table.Name is null)
                continue;
            var name = KeyText(table.Name);
            var line = table.Span.Start.Line + 1;
            var dot = name.LastIndexOf('.');
            var parent = dot > 0 ? tables.LastOrDefault(t => t.Name == name[..dot]) : null;
            var siblings = parent?.Children ?? tables;
            var repeats = table is TableArraySyntax;
            var path =
                (parent is null ? name : parent.Path + name[dot..])
                + (repeats ? $"[{siblings.Count(t => t.Name == name) + 1}]" : "");
            var node = new TomlTableNode(name, path, line);
            Fill(node, table.Items);
            siblings.Add(node);
            if (Schema.Find(name) is not { } spec)
                continue;
            if (spec.Repeats != repeats)
                problems.Add(new Problem(source, line, 1, name, $"write this table as {spec.Header}"));
            if (dot > 0 && parent is null)
                problems.Add(
                    new Problem(source, line, 1, name, $"stands before any [[{name[..dot]}]] that it could belong to")
                );
        }

        return tables;
    }

    // What is given twice is left to the checks of the tables, which go on to report the rest of the file too.
    private static DocumentSyntax? Parsed(string text, string source, List<Problem> problems)
    {
        try
        {
            var document = SyntaxParser.Parse(text, source, validate: false);
            if (document.HasErrors)
                SyntaxErrors.Report(document, text, source, problems);
            return document.HasErrors ? null : document;
        }
        catch (TomlException error)
        {
            problems.Add(new Problem(source, 0, 0, "", $"not readable as TOML: {Spelling.OneLine(error.Message)}"));
            return null;
        }
    }

    private static void Fill(TomlTableNode node, IEnumerable<KeyValueSyntax> items)
    {
        foreach (var item in items)
            if (item.Key is not null)
                node.Entries.Add(
                    new Entry(
                        KeyText(item.Key),
                        item.Value,
                        item.Span.Start.Line + 1,
                        (item.Value ?? (SyntaxNode)item.Key).Span.Start.Column + 1
                    )
                );
    }

    private static string KeyText(KeySyntax key) =>
        string.Concat(key.ToString().Trim().Where(c => c != '"' && c != ' '));
}
