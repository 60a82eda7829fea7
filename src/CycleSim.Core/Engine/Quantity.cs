namespace CycleSim.Engine;

/// <summary>The outputs that can be prescribed or limited.</summary>
public enum Quantity
{
    /// <summary>Net thrust, N.</summary>
    NetThrust,

    /// <summary>Net thrust less what the nacelle takes, N.</summary>
    InstalledThrust,

    /// <summary>Fuel flow, kg/s.</summary>
    FuelFlow,

    /// <summary>Combustor exit total temperature, K.</summary>
    T4,

    /// <summary>First turbine rotor inlet total temperature, K.</summary>
    T41,

    /// <summary>Total temperature behind the first turbine (45), K: where most engines measure their exhaust gas temperature.</summary>
    T45,

    /// <summary>Total temperature behind the last turbine, K.</summary>
    T5,

    /// <summary>Speeds of the spools relative to design: low-pressure first.</summary>
    N1,
    N2,
    N3,

    /// <summary>Engine pressure ratio P5/P2.</summary>
    Epr,

    /// <summary>Compressor delivery total pressure, Pa.</summary>
    P3,

    /// <summary>Compressor delivery total temperature, K.</summary>
    T3,

    /// <summary>Low-pressure speed corrected to the fan face, relative to its design value.</summary>
    CorrectedN1,

    /// <summary>Lever position, 0 at idle to 1 at full.</summary>
    Lever,
}
