using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>
/// A stream at one station: total state, mass flow and composition. Static states are derived where an area is known.
/// </summary>
public struct FlowState<T>
    where T : struct, IScalar<T>
{
    /// <summary>Mass flow, kg/s.</summary>
    public T W;

    /// <summary>Total pressure, Pa.</summary>
    public T P;

    /// <summary>Total temperature, K.</summary>
    public T Tt;

    /// <summary>Total specific enthalpy, J/kg, formation included.</summary>
    public T H;

    /// <summary>Temperature part of the specific entropy, J/(kg K).</summary>
    public T Phi;

    /// <summary>Mass fraction that came in as fuel (constant gas: share of burnt gas).</summary>
    public T Y;
}
