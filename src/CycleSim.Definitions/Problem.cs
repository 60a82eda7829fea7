namespace CycleSim.Definitions;

/// <summary>One thing wrong in a definition file: where, and what was wrong, expected and to be done.</summary>
/// <param name="Line">1-based; 0 where the whole file is meant</param>
/// <param name="Column">1-based</param>
/// <param name="Key">path such as compressor[2].pressure_ratio; empty where the whole file is meant</param>
public sealed record Problem(string Source, int Line, int Column, string Key, string Message)
{
    public override string ToString() =>
        (Line > 0 ? $"{Source}:{Line}: " : $"{Source}: ") + (Key.Length > 0 ? $"{Key}: " : "") + Message;
}

/// <summary>A definition file that cannot be used, with everything that is wrong in it.</summary>
public sealed class DefinitionException(IReadOnlyList<Problem> problems)
    : Exception(string.Join(Environment.NewLine, problems))
{
    public IReadOnlyList<Problem> Problems { get; } = problems;
}
