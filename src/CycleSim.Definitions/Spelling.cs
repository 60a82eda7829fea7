namespace CycleSim.Definitions;

/// <summary>Repeats what stood in a file and guesses what a misspelt word was meant to be.</summary>
internal static class Spelling
{
    public static string Suggest(string word, IEnumerable<string> known)
    {
        var best = known.Where(k => k.Length > 0).MinBy(k => Away(word, k));
        return best is not null && Away(word, best) <= Math.Min(Math.Max(2, word.Length / 3), word.Length - 1)
            ? $" Did you mean '{best}'?"
            : "";
    }

    /// <summary>A text of a file as it is repeated in a message: on one line, not at length.</summary>
    public static string OneLine(string text)
    {
        const int longest = 60;
        var clean = string.Concat(text.Trim().Select(c => char.IsControl(c) ? ' ' : c));
        return clean.Length <= longest ? clean : clean[..longest] + " ...";
    }

    private static int Away(string word, string known) => Distance(word.ToLowerInvariant(), known.ToLowerInvariant());

    /// <summary>Levenshtein distance.</summary>
    private static int Distance(string a, string b)
    {
        var row = new int[b.Length + 1];
        for (var j = 0; j <= b.Length; j++)
            row[j] = j;
        for (var i = 1; i <= a.Length; i++)
        {
            var diagonal = row[0];
            row[0] = i;
            for (var j = 1; j <= b.Length; j++)
            {
                var substitute = diagonal + (a[i - 1] == b[j - 1] ? 0 : 1);
                diagonal = row[j];
                row[j] = Math.Min(substitute, Math.Min(row[j], row[j - 1]) + 1);
            }
        }

        return row[^1];
    }
}
