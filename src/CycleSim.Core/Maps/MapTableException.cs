namespace CycleSim.Maps;

/// <summary>A table that cannot be a compressor map, with everything that is wrong in it.</summary>
/// <param name="name">of the table, for the message</param>
/// <param name="problems">line, from 1 (0 for the table as a whole), and what is wrong there and what was expected</param>
public sealed class MapTableException(string name, IReadOnlyList<(int Line, string Message)> problems)
    : FormatException(
        string.Join(
            '\n',
            problems.Select(p => p.Line > 0 ? $"{name}, line {p.Line}: {p.Message}" : $"{name}: {p.Message}")
        )
    )
{
    public IReadOnlyList<(int Line, string Message)> Problems { get; } = problems;
}
