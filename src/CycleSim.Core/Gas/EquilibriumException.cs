namespace CycleSim.Gas;

/// <summary>No state of chemical equilibrium was found; the message says where, and what to give instead.</summary>
public sealed class EquilibriumException(string message) : Exception(message);
