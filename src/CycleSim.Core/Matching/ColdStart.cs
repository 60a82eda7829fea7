using CycleSim.Engine;

namespace CycleSim.Matching;

/// <summary>A better first guess than the design point itself.</summary>
internal static class ColdStart
{
    /// <summary>
    /// Speeds and combustor temperature of about what a prescribed thrust takes; false where none is prescribed. Exponents
    /// read off typical working lines, own estimate: at rest the low-pressure speed goes with thrust to the power 0.42, at
    /// Mach 0.8 with 0.15.
    /// </summary>
    public static bool Guess(SizedEngine engine, double[] inputs, MatchingProblem problem, double[] unknowns)
    {
        var thrust = 0.0;
        foreach (ref readonly var condition in problem.Prescribed.AsSpan())
            if (condition.Quantity == Quantity.NetThrust)
                thrust = condition.Value;
        if (!(thrust > 0.0))
            return false;
        engine.DesignUnknowns.CopyTo(unknowns, 0);
        var design = engine.DesignInputs;
        var ratio = thrust / engine.DesignThrust * design[InputLayout.Pressure] / inputs[InputLayout.Pressure];
        ratio = Math.Clamp(ratio, 0.03, 1.3);
        var mach = inputs[InputLayout.Mach];
        var theta = Total(inputs) / Total(design);
        var log = Math.Log(ratio);
        var spools = engine.Spools.Length;
        for (var k = 0; k < spools; k++)
        {
            var exponent = k == 0 && spools > 1 ? Math.Max(0.10, 0.42 - 0.34 * mach) : 0.14;
            unknowns[k] = Math.Sqrt(theta) * Math.Exp(exponent * log);
        }

        var last = engine.UnknownCount - 1;
        unknowns[last] = Math.Max(0.6, engine.DesignUnknowns[last] * theta * Math.Exp(0.25 * log));
        return true;
    }

    private static double Total(double[] inputs)
    {
        var mach = inputs[InputLayout.Mach];
        return inputs[InputLayout.Temperature] * (1.0 + 0.2 * mach * mach);
    }
}
