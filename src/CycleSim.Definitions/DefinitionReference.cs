using System.Text;

namespace CycleSim.Definitions;

/// <summary>Writes the reference page of the definition file from the description that the reader checks by.</summary>
public static class DefinitionReference
{
    public static string Markdown()
    {
        var page = new StringBuilder();
        page.Append(
            """
            # The definition file

            A definition file says what an engine is. It is TOML; a value with a dimension is a text with its unit
            (`"35000 ft"`, `"420 kg/s"`, `"1650 K"`), a pure ratio is a number, a share is a number or a text in per cent. Unknown
            keys are refused, and everything wrong in a file is reported together, each with its line. Names are words of letters,
            digits, `-` and `_`, a letter first.

            This page is generated; a test keeps it up to date.

            """
        );
        foreach (var table in Schema.Tables)
        {
            page.Append(
                $"""

                ## {table.Header}

                {table.Meaning}{(table.Repeats ? " May be repeated." : "")}

                | key | holds | example | range | default | meaning |
                | --- | --- | --- | --- | --- | --- |

                """
            );
            foreach (var key in table.Keys)
                page.Append(
                    $"| `{key.Name}` | {Holds(key)} | `{key.Example ?? Example(key)}` | {key.Range} | {(key.Required ? "required" : key.Default)} | {key.Meaning} |\n"
                );
        }

        page.Append(
            "\n## Units\n\nA number with a decimal point, then the unit as written here.\n\n| quantity | units |\n| --- | --- |\n"
        );
        foreach (var dimension in UnitTable.Dimensions)
            page.Append(
                $"| {Units.Name(dimension)} | {string.Join(", ", UnitTable.Spellings(dimension).Select(u => $"`{u}`"))} |\n"
            );
        return page.ToString();
    }

    private static string Holds(KeySpec key) =>
        key.Dimension == Dimension.Dependent ? "as the quantity" : Units.Name(key.Dimension);

    private static string Example(KeySpec key) =>
        key.Choices is { } choices ? $"\"{choices[0]}\"" : Units.Example(key.Dimension);
}
