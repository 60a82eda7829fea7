namespace CycleSim.Gas;

/// <summary>
/// The temperature functions of a gas at one temperature and composition, with their partial derivatives.
/// Composition is (y, q): y the mass fraction of the stream that came from the fuel line of the model
/// (fuel-derived mass for the thermally perfect gas, burnt gas for the constant one), q the specific humidity of the
/// air that was taken in, kg of vapour per kg of moist air.
/// </summary>
public struct GasPoint
{
    /// <summary>Temperature, K.</summary>
    public double T;

    /// <summary>Specific enthalpy including formation, J/kg.</summary>
    public double H;

    /// <summary>Temperature part of the specific entropy, J/(kg K): s = Phi - R ln p.</summary>
    public double Phi;

    /// <summary>Isobaric specific heat, J/(kg K), and its slope over temperature, J/(kg K2).</summary>
    public double Cp,
        CpT;

    /// <summary>Partial derivatives at constant temperature with respect to y.</summary>
    public double Hy,
        Phiy,
        Cpy;

    /// <summary>Partial derivatives at constant temperature with respect to q.</summary>
    public double Hq,
        Phiq,
        Cpq;
}
