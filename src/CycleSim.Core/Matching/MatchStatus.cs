namespace CycleSim.Matching;

/// <summary>How a matching attempt ended.</summary>
public enum MatchStatus
{
    /// <summary>Every equation met to the tolerance, inside every map and bound.</summary>
    Solved,

    /// <summary>The equations could not be met; the report says how far it got and what stood in the way.</summary>
    NotConverged,

    /// <summary>The equations are met only beyond the surge line of a compressor.</summary>
    BeyondSurge,

    /// <summary>The equations are met only below the choked end of a compressor's speed line.</summary>
    BeyondChoke,

    /// <summary>The equations are met only at a corrected speed outside a compressor's map.</summary>
    OutsideMapSpeed,

    /// <summary>The equations are met only with a flow that runs backwards or a nozzle without pressure.</summary>
    NoThroughflow,

    /// <summary>The combustor would have to cool the air, or burn more fuel than the air has oxygen for.</summary>
    NoCombustion,
}

/// <summary>Outcome of one match; the numbers are in the matcher.</summary>
/// <param name="Status">how it ended</param>
/// <param name="Residual">largest relative imbalance</param>
/// <param name="Iterations">Newton steps, those of failed starts included</param>
/// <param name="Jacobians">passes with derivatives</param>
/// <param name="Passes">passes without</param>
/// <param name="Culprit">component or equation that stood in the way; -1 without</param>
public readonly record struct MatchOutcome(
    MatchStatus Status,
    double Residual,
    int Iterations,
    int Jacobians,
    int Passes,
    int Culprit
)
{
    public bool Solved => Status == MatchStatus.Solved;
}
