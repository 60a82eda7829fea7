namespace CycleSim.Gas;

/// <summary>
/// What the flow path asks of a gas. Every function works in doubles and gives exact partial derivatives, so that the
/// flow path can be run with or without them; see <see cref="Components.GasRelations"/> for the scalar-generic side.
/// All properties are per kilogram of mixture and linear in the mass fractions.
/// </summary>
/// <remarks>Instances are immutable and may be shared by threads. SI units throughout.</remarks>
public abstract class GasModel
{
    /// <summary>Lowest and highest temperature (K) at which the properties are evaluated; beyond, they go on straight.</summary>
    public const double LowestTemperature = 120.0,
        HighestTemperature = 3000.0;

    /// <summary>Gas constants of dry air, water vapour and the fuel line of the mixture, J/(kg K).</summary>
    public abstract double RAir { get; }

    public abstract double RWater { get; }

    public abstract double RFuelLine { get; }

    /// <summary>Lower heating value at 298.15 K, J/kg.</summary>
    public abstract double HeatingValue { get; }

    /// <summary>Fuel-air ratio beyond which oxygen runs out, kg/kg.</summary>
    public abstract double StoichiometricFuelAirRatio { get; }

    /// <summary>Whether humid air can be represented.</summary>
    public abstract bool CarriesHumidity { get; }

    /// <summary>Whether the fuel's mass joins the stream. Textbook cycles with constant specific heats leave it out.</summary>
    public abstract bool CountsFuelMass { get; }

    /// <summary>Properties at a temperature.</summary>
    public abstract void AtTemperature(double t, double y, double q, out GasPoint point);

    /// <summary>Properties at an enthalpy: the inverse of h(T).</summary>
    public abstract void AtEnthalpy(double h, double y, double q, out GasPoint point);

    /// <summary>Properties at a value of the entropy function: the inverse of Phi(T).</summary>
    public abstract void AtEntropy(double phi, double y, double q, out GasPoint point);

    /// <summary>A close guess (K) of the temperature at which a stream of given total temperature is sonic.</summary>
    public abstract double SonicStart(double totalTemperature, double y, double q);

    /// <summary>
    /// Fuel per kilogram of air that must be burnt to raise it from (t3, h3) to t4 with the given combustion efficiency,
    /// and its partial derivatives. Negative where t4 lies below t3: the caller decides what that means.
    /// </summary>
    public abstract double FuelForTemperature(
        double t3,
        double h3,
        double t4,
        double q,
        double efficiency,
        out FuelSlopes slopes
    );

    /// <summary>
    /// Energy that a fuel flow brings with it, W: enthalpy of formation less what is left unburnt. NaN where the model has
    /// no enthalpies of formation.
    /// </summary>
    public abstract double FuelEnthalpyFlow(double fuelFlow, double efficiency);

    /// <summary>Composition y of the burnt stream for a fuel-air ratio, and its slope.</summary>
    public abstract double BurntFraction(double fuelAirRatio, out double slope);

    /// <summary>
    /// Fuel-air ratio for a composition (what has been burnt per kilogram of moist air); zero where the model does not
    /// tell how much.
    /// </summary>
    public abstract double FuelAirRatioOf(double y);

    /// <summary>Gas constant of the mixture, J/(kg K).</summary>
    public double GasConstant(double y, double q) => (1.0 - y) * (RAir + q * (RWater - RAir)) + y * RFuelLine;
}

/// <summary>Partial derivatives of <see cref="GasModel.FuelForTemperature"/> per K, per J/kg, per unit of q.</summary>
public struct FuelSlopes
{
    public double T3,
        H3,
        T4,
        Q;
}
