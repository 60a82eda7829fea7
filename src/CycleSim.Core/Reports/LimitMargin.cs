using CycleSim.Engine;
using CycleSim.Matching;

namespace CycleSim.Reports;

/// <summary>What is left at a point before a limit of a rating, in SI; below zero where the limit is exceeded.</summary>
public readonly record struct LimitMargin(string Rating, Limit Limit, double Value)
{
    public double Left => Limit.Value - Value;

    /// <summary>Margins to every limit of a rating, the implied one included.</summary>
    public static IReadOnlyList<LimitMargin> Of(OperatingPoint point, Rating rating) =>
        [.. rating.Limits.Select(limit => new LimitMargin(rating.Definition.Name, limit, point.Value(limit.Quantity)))];
}
