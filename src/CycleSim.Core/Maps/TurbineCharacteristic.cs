using CycleSim.Scalars;

namespace CycleSim.Maps;

/// <summary>Off-design behaviour of a turbine, relative to its design point.</summary>
public static class TurbineCharacteristic
{
    /// <summary>
    /// Corrected flow over the choked one: 1 up to the critical outlet-to-inlet pressure ratio, beyond it the ellipse
    /// through (critical, 1) and (1, 0). With a critical ratio of 0 it is Stodola's ellipse for very many stages; value and
    /// slope are continuous where the turbine unchokes.
    /// </summary>
    public static T Capacity<T>(in T expansionRatio, double criticalRatio)
        where T : struct, IScalar<T>
    {
        var excess = (1.0 / expansionRatio.Value - criticalRatio) / (1.0 - criticalRatio);
        if (excess <= 0.0)
            return T.Constant(1.0);
        if (excess > LastExcess)
            return T.Chain(
                Math.Sqrt(1.0 - LastExcess * LastExcess) * (1.0 - excess) / (1.0 - LastExcess),
                expansionRatio,
                Math.Sqrt(1.0 - LastExcess * LastExcess)
                    / (1.0 - LastExcess)
                    / (expansionRatio.Value * expansionRatio.Value * (1.0 - criticalRatio))
            );
        var value = Math.Sqrt(1.0 - excess * excess);
        var slope = excess / value / (expansionRatio.Value * expansionRatio.Value * (1.0 - criticalRatio));
        return T.Chain(value, expansionRatio, slope);
    }

    /// <summary>
    /// Efficiency over its design value, from the velocity ratio U / sqrt(2 dh) over its design value: best at
    /// <paramref name="best"/> and falling about parabolically on either side, as the velocity triangles of a stage give it.
    /// </summary>
    public static T EfficiencyRatio<T>(in T velocityRatio, double best)
        where T : struct, IScalar<T>
    {
        var off = (velocityRatio - best) / best;
        var offDesign = (1.0 - best) / best;
        return T.Constant(1.0 + offDesign * offDesign) / (off * off + 1.0);
    }

    // The ellipse is vertical where no pressure drops; a straight line to (1, 0) keeps the last per cent defined.
    private const double LastExcess = 0.99;
}
