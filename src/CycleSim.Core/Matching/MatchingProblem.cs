using CycleSim.Engine;

namespace CycleSim.Matching;

/// <summary>
/// What closes the equations of an operating point: as many conditions as there are freed inputs, plus one. A power
/// setting, a rating, the break of a flat rating: all are this, with other lists.
/// </summary>
public sealed class MatchingProblem
{
    private MatchingProblem(Limit[] prescribed, Limit[] firstOf, int[] freed, double[]? heldSpeeds = null) =>
        (Prescribed, FirstOf, Freed, HeldSpeeds) = (prescribed, firstOf, freed, heldSpeeds ?? []);

    /// <summary>Outputs that must take a value.</summary>
    public Limit[] Prescribed { get; }

    /// <summary>Limits of which the most exceeded must be met exactly; empty when nothing is rated.</summary>
    public Limit[] FirstOf { get; }

    /// <summary>Inputs (indices of <see cref="InputLayout"/>) that are solved for.</summary>
    public int[] Freed { get; }

    /// <summary>
    /// Speeds (relative to design) at which the spools are held, one for each; empty where they settle. The power that a held
    /// spool has to spare is solved for in place of its speed and stands, added to the offtake, in its input.
    /// </summary>
    public double[] HeldSpeeds { get; }

    internal int ConditionCount => Prescribed.Length + (FirstOf.Length > 0 ? 1 : 0);

    /// <summary>The power at which one output takes a value.</summary>
    public static MatchingProblem For(Quantity quantity, double value) => new([new Limit(quantity, value)], [], []);

    /// <summary>
    /// The first moment of a transient: the spools still turn as they did while one output, the fuel flow say, has already taken
    /// its new value. To be solved from a settled point near by.
    /// </summary>
    /// <param name="speeds">speed of every spool relative to design</param>
    /// <param name="quantity">what is prescribed</param>
    /// <param name="value">its value, SI</param>
    public static MatchingProblem AtHeldSpeeds(ReadOnlySpan<double> speeds, Quantity quantity, double value) =>
        new([new Limit(quantity, value)], [], [], speeds.ToArray());

    /// <summary>The power at which the first of several limits is reached.</summary>
    public static MatchingProblem FirstLimit(params ReadOnlySpan<Limit> limits) =>
        limits.Length == 0
            ? throw new ArgumentException("a rating needs at least one limit", nameof(limits))
            : new([], limits.ToArray(), []);

    /// <summary>
    /// The value of one input at which an output takes a value just as the first of the limits is reached; with the outside
    /// temperature freed and the flat thrust prescribed, the break of a flat rating.
    /// </summary>
    public static MatchingProblem Break(int freedInput, Limit prescribed, params ReadOnlySpan<Limit> limits) =>
        new([prescribed], limits.ToArray(), [freedInput]);

    /// <summary>Any inputs freed and any outputs prescribed.</summary>
    /// <exception cref="ArgumentException">The counts do not agree.</exception>
    public static MatchingProblem Pose(Limit[] prescribed, Limit[] firstOf, int[] freed)
    {
        var problem = new MatchingProblem(prescribed, firstOf, freed);
        if (problem.ConditionCount != freed.Length + 1)
            throw new ArgumentException(
                $"{freed.Length} freed inputs need {freed.Length + 1} conditions; {problem.ConditionCount} are given. "
                    + "Free another input or drop a condition."
            );
        return problem;
    }
}
