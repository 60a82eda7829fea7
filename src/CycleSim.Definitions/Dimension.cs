namespace CycleSim.Definitions;

/// <summary>What kind of value a key holds.</summary>
public enum Dimension
{
    Text,

    /// <summary>A TOML number without unit.</summary>
    Number,

    /// <summary>A share: a number or a text in per cent.</summary>
    Share,
    Whole,
    Switch,
    Length,
    Area,
    Pressure,
    Temperature,
    TemperatureDifference,
    MassFlow,
    Force,
    Power,
    RotationalSpeed,
    SpecificEnergy,
    SpecificHeat,
    Speed,

    /// <summary>The dimension follows from another key of the same table.</summary>
    Dependent,
}
