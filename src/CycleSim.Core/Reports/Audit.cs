namespace CycleSim.Reports;

/// <summary>
/// Balances drawn up anew from the stations of a solved point. Mass and energy are imbalances over what goes through;
/// entropy is what the component produces (W/K), which must not be negative.
/// </summary>
/// <remarks>
/// Entropy is counted without the mixing of unlike compositions, which is linear in the flows and would only add.
/// </remarks>
public sealed record AuditLine(
    string Component,
    double MassImbalance,
    double EnergyImbalance,
    double EntropyProduction
);

/// <summary>One line a component and one for the whole engine.</summary>
public sealed record Audit(IReadOnlyList<AuditLine> Components, AuditLine Whole)
{
    /// <summary>The largest relative imbalance of mass or energy anywhere.</summary>
    public double LargestImbalance =>
        Components.Append(Whole).Max(line => Math.Max(Math.Abs(line.MassImbalance), Math.Abs(line.EnergyImbalance)));

    /// <summary>Sum of what the components produce less what leaves the engine in excess of what enters, over the latter.</summary>
    public double EntropyClosure =>
        (Components.Sum(line => line.EntropyProduction) - Whole.EntropyProduction)
        / Math.Max(Whole.EntropyProduction, 1e-300);
}

/// <summary>Draws up one component's balance.</summary>
internal sealed class Balance(string component)
{
    private double _massIn,
        _massOut,
        _energyIn,
        _energyOut,
        _entropyIn,
        _entropyOut,
        _energyScale;

    public Balance In(double massFlow, double enthalpy, double entropy)
    {
        _massIn += massFlow;
        _energyIn += massFlow * enthalpy;
        _entropyIn += massFlow * entropy;
        _energyScale += Math.Abs(massFlow * enthalpy);
        return this;
    }

    public Balance Out(double massFlow, double enthalpy, double entropy)
    {
        _massOut += massFlow;
        _energyOut += massFlow * enthalpy;
        _entropyOut += massFlow * entropy;
        _energyScale += Math.Abs(massFlow * enthalpy);
        return this;
    }

    /// <summary>Power put in, W (negative: taken out).</summary>
    public Balance Power(double power)
    {
        _energyIn += power;
        _energyScale += Math.Abs(power);
        return this;
    }

    /// <summary>A stream that brings mass and energy but whose entropy is not known to the gas model: the fuel.</summary>
    public Balance Fuel(double massFlow, double energy)
    {
        _massIn += massFlow;
        _energyIn += energy;
        return this;
    }

    public AuditLine Close() =>
        new(
            component,
            (_massOut - _massIn) / Math.Max(_massIn, 1e-300),
            (_energyOut - _energyIn) / Math.Max(_energyScale, 1e-300),
            _entropyOut - _entropyIn
        );
}
