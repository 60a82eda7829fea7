using Spectre.Console;

namespace CycleSim.Cli;

/// <summary>How results are laid out on the terminal.</summary>
internal static class Layout
{
    public const string Caution =
        "Engineering study; not for dispatch, flight or maintenance. Approved manuals, the authority's rules and licensed "
        + "staff decide.";

    private static readonly IAnsiConsole Out = Open();

    public static void Line(string text = "") => Console.WriteLine(text);

    /// <summary>A table with right-aligned columns but for the first <paramref name="left"/>.</summary>
    public static void Table(string title, string[] columns, IEnumerable<string[]> rows, int left = 1)
    {
        var table = new Table().Border(TableBorder.Simple);
        for (var i = 0; i < columns.Length; i++)
        {
            var column = new TableColumn(Markup.Escape(columns[i])).NoWrap();
            table.AddColumn(i < left ? column.LeftAligned() : column.RightAligned());
        }

        foreach (var row in rows)
            table.AddRow(row.Select(Markup.Escape).ToArray());
        Console.WriteLine(title);
        Out.Write(table);
    }

    /// <summary>Names and values in two columns, values with their units.</summary>
    public static void Pairs(params (string Name, string Value)[] pairs)
    {
        var width = pairs.Max(p => p.Name.Length);
        foreach (var (name, value) in pairs)
            Console.WriteLine($"  {name.PadRight(width)}  {value}");
    }

    private static IAnsiConsole Open()
    {
        var console = AnsiConsole.Create(new AnsiConsoleSettings { Out = new AnsiConsoleOutput(Console.Out) });
        // A pipe has no width; tables must not be folded for it.
        console.Profile.Width = Math.Max(console.Profile.Width, 160);
        return console;
    }
}
