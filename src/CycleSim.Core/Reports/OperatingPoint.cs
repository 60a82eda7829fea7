using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;

namespace CycleSim.Reports;

/// <summary>
/// A solved operating point with everything behind it: performance, stations, components, streams, audit. All SI.
/// Immutable.
/// </summary>
public sealed record OperatingPoint
{
    public required string EngineName { get; init; }

    public required FlightCondition Flight { get; init; }

    /// <summary>What set the power: a quantity and its value, or the governing limit of a rating.</summary>
    public required Limit Setting { get; init; }

    /// <summary>Net thrust, N: gross thrusts less ram drag, no nacelle or installation drag.</summary>
    public required double NetThrust { get; init; }

    /// <summary>Net thrust less nacelle drag and scrubbing, N: the net thrust where the definition gives no [nacelle].</summary>
    public required double InstalledThrust { get; init; }

    public required double GrossThrust { get; init; }

    public required double RamDrag { get; init; }

    /// <summary>Fuel flow, kg/s.</summary>
    public required double FuelFlow { get; init; }

    /// <summary>Fuel flow over net thrust, kg/(N s).</summary>
    public double Sfc => FuelFlow / NetThrust;

    /// <summary>Fuel flow over the combustor's air.</summary>
    public required double FuelAirRatio { get; init; }

    public required double BypassRatio { get; init; }

    /// <summary>P3/P2.</summary>
    public required double OverallPressureRatio { get; init; }

    /// <summary>P5/P2.</summary>
    public required double EnginePressureRatio { get; init; }

    public required double LeverPosition { get; init; }

    /// <summary>True airspeed, m/s.</summary>
    public required double Airspeed { get; init; }

    /// <summary>Jet power over fuel power; thrust power over jet power; their product.</summary>
    public required double ThermalEfficiency { get; init; }

    public required double PropulsiveEfficiency { get; init; }

    public double OverallEfficiency => ThermalEfficiency * PropulsiveEfficiency;

    public required IReadOnlyList<StationReport> Stations { get; init; }

    public required IReadOnlyList<CompressorReport> Compressors { get; init; }

    public required IReadOnlyList<TurbineReport> Turbines { get; init; }

    public required IReadOnlyList<SpoolReport> Spools { get; init; }

    /// <summary>Speed of the fan, revolutions per minute: that of its spool times the gear ratio. NaN where not known.</summary>
    public double FanRpm { get; init; } = double.NaN;

    public required IReadOnlyList<NozzleReport> Nozzles { get; init; }

    public required IReadOnlyList<StreamReport> Air { get; init; }

    public required Audit Audit { get; init; }

    public required MatchOutcome Outcome { get; init; }

    public double T4 => Station("4").TotalTemperature;

    public double T41 => Station("41").TotalTemperature;

    /// <summary>Gas temperature behind the first turbine, K (behind the only one: T5).</summary>
    public required double T45 { get; init; }

    /// <summary>
    /// How much lower (K) T4 would be at the same fuel flow if the products dissociated as in full equilibrium; the flow
    /// path burns completely. NaN for the constant gas. Worked out when first asked for.
    /// </summary>
    public double DissociationDrop => Dissociation.Value;

    internal Lazy<double> Dissociation { get; init; } = new(double.NaN);

    /// <summary>The value of an output that can be limited, SI; speeds relative to design.</summary>
    /// <exception cref="ArgumentException">This engine has no such output.</exception>
    public double Value(Quantity quantity) =>
        quantity switch
        {
            Quantity.NetThrust => NetThrust,
            Quantity.InstalledThrust => InstalledThrust,
            Quantity.FuelFlow => FuelFlow,
            Quantity.T3 => Station("3").TotalTemperature,
            Quantity.P3 => Station("3").TotalPressure,
            Quantity.T4 => T4,
            Quantity.T41 => T41,
            Quantity.T45 => T45,
            Quantity.T5 => Station("5").TotalTemperature,
            Quantity.Epr => EnginePressureRatio,
            Quantity.Lever => LeverPosition,
            Quantity.CorrectedN1 => Compressors[0].RelativeCorrectedSpeed,
            _ when quantity - Quantity.N1 is var spool and >= 0 && spool < Spools.Count => Spools[spool].RelativeSpeed,
            _ => throw new ArgumentException($"{EngineName} has no {quantity}.", nameof(quantity)),
        };

    public StationReport Station(string number) =>
        Stations.FirstOrDefault(s => s.Number == number)
        ?? throw new KeyNotFoundException(
            $"this engine has no station {number}; it has {string.Join(", ", Stations.Select(s => s.Number))}"
        );
}

/// <summary>Total state and flow at a station; numbers as in SAE AS755.</summary>
public sealed record StationReport(
    string Number,
    string Plane,
    double MassFlow,
    double TotalTemperature,
    double TotalPressure,
    double FuelAirRatio,
    double Enthalpy,
    double Entropy
);

/// <summary>A compressor at a point. Speeds and flows relative to design are so named.</summary>
public sealed record CompressorReport(
    string Name,
    double PressureRatio,
    double IsentropicEfficiency,
    double PolytropicEfficiency,
    double CorrectedFlow,
    double RelativeCorrectedSpeed,
    double Position,
    double Power,
    double SurgeMarginConstantFlow,
    double SurgeMarginConstantSpeed
);

public sealed record TurbineReport(
    string Name,
    double ExpansionRatio,
    double IsentropicEfficiency,
    double SpecificWork,
    double Power,
    bool Choked
);

/// <summary>Relative speed (1 at design), revolutions per minute (NaN when the definition gives none), powers in W.</summary>
public sealed record SpoolReport(string Name, double RelativeSpeed, double Rpm, double TurbinePower, double Offtake);

public sealed record NozzleReport(
    string Name,
    double PressureRatio,
    bool Choked,
    double ExitSpeed,
    double ExitTemperature,
    double ExitPressure,
    double EffectiveArea,
    double GeometricArea,
    double GrossThrust
);

/// <summary>A stream taken from a compressor: where it goes and in what state it leaves.</summary>
public sealed record StreamReport(
    string Name,
    string From,
    string To,
    double MassFlow,
    double TotalTemperature,
    double TotalPressure
);
