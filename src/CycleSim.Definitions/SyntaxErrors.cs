using System.Text.RegularExpressions;
using Tomlyn.Parsing;
using Tomlyn.Syntax;

namespace CycleSim.Definitions;

/// <summary>Says in plain words where a text is not TOML: the line shown is what the reader can act on.</summary>
internal static partial class SyntaxErrors
{
    public static void Report(DocumentSyntax document, string text, string source, List<Problem> problems)
    {
        var lines = text.Split('\n');
        var reported = new HashSet<int>();
        var errors = document.Diagnostics.Where(d => d.Kind == DiagnosticMessageKind.Error);
        foreach (var error in errors.OrderBy(e => e.Span.Start.Line).ThenBy(e => e.Span.Start.Column))
        {
            var number = Math.Min(error.Span.Start.Line, lines.Length - 1);
            var line = lines[number].TrimEnd('\r');
            // Behind an error the parser stumbles over lines that are right by themselves.
            if (!reported.Add(number) || (reported.Count > 1 && IsRight(line)))
                continue;
            var (wrong, remedy) = Explain(line, error.Message);
            var cut = lines.Skip(number + 1).All(string.IsNullOrWhiteSpace) ? " The file may have been cut short." : "";
            problems.Add(
                new Problem(
                    source,
                    number + 1,
                    error.Span.Start.Column + 1,
                    "",
                    $"not readable as TOML: {wrong} in '{Spelling.OneLine(line)}'. {remedy}{cut}"
                )
            );
        }
    }

    private static bool IsRight(string line) => !SyntaxParser.Parse(line, "", false).HasErrors;

    private static (string Wrong, string Remedy) Explain(string line, string message)
    {
        var quantity = UnquotedQuantity().Match(line);
        var word = UnquotedText().Match(line);
        return quantity.Success ? ("a value with a unit stands without quotation marks", InQuotes(quantity))
            : word.Success ? ("a text stands without quotation marks", InQuotes(word))
            : message.Contains("string") ? ("a text is not closed", "Close it with a quotation mark.")
            : OpenHeader().IsMatch(line) ? ("the name of a table is not closed", "Write [table] or [[table]].")
            : NoValue().IsMatch(line) ? ("there is no value behind the equals sign", "Write key = value.")
            : line.Contains('=') ? ("there is something else than a key and its value", "Write key = value.")
            : ("there is neither a table nor a key with its value", "Write [table] or key = value.");
    }

    private static string InQuotes(Match match) =>
        $"Write {match.Groups[1].Value} = \"{Spelling.OneLine(match.Groups[2].Value)}\".";

    [GeneratedRegex(@"^\s*([\w.-]+)\s*=\s*([-+]?[0-9][0-9.,_eE+-]*\s*[A-Za-z°%][^#""]*)")]
    private static partial Regex UnquotedQuantity();

    [GeneratedRegex(@"^\s*([\w.-]+)\s*=\s*([A-Za-z][^#""]*)$")]
    private static partial Regex UnquotedText();

    [GeneratedRegex(@"^\s*\[+[^\]]*$|^\s*\[\[[^\]]*\]\s*$")]
    private static partial Regex OpenHeader();

    [GeneratedRegex(@"=\s*(#.*)?$")]
    private static partial Regex NoValue();
}
