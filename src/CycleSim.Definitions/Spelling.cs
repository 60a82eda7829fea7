namespace CycleSim.Definitions;

/// <summary>Guesses what a misspelt word was meant to be.</summary>
internal static class Spelling
{
    public static string Suggest(string word, IEnumerable<string> known)
    {
        var best = known.OrderBy(k => Distance(word.ToLowerInvariant(), k.ToLowerInvariant())).FirstOrDefault();
        return best is not null && Distance(word.ToLowerInvariant(), best.ToLowerInvariant()) <= Math.Max(2, word.Length / 3)
            ? $" Did you mean '{best}'?"
            : "";
    }

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
