using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>
/// Effect of the Reynolds number on efficiency and flow: (1 - efficiency) goes with Re^-n (form of R and M 2974 section 8
/// for turbines, n = 0.2; the same form is used for compressors), the flow changes by half the relative change of the
/// efficiency (rule of thumb, no source).
/// </summary>
public static class Reynolds
{
    /// <summary>
    /// Reynolds number per length and per blade speed at corrected conditions: density times speed over viscosity with the
    /// speed going with sqrt(T), so P / (sqrt(T) mu(T)) with Sutherland's viscosity, constants left out.
    /// </summary>
    public static T Index<T>(in FlowState<T> inlet)
        where T : struct, IScalar<T> => inlet.P * (inlet.Tt + 110.4) / (inlet.Tt * inlet.Tt);

    /// <summary>Efficiency at an index over the design point's, and the factor on the flow that goes with it.</summary>
    public static void Apply<T>(in T efficiency, in T indexRatio, double exponent, out T corrected, out T flowFactor)
        where T : struct, IScalar<T>
    {
        corrected = 1.0 - (1.0 - efficiency) * T.Exp(T.Log(indexRatio) * -exponent);
        flowFactor = (corrected / efficiency - 1.0) * 0.5 + 1.0;
    }
}
