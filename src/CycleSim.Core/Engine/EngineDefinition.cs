using CycleSim.Air;
using CycleSim.Components;
using CycleSim.Gas;
using CycleSim.Maps;

namespace CycleSim.Engine;

/// <summary>
/// Everything that says what an engine is, in SI: the validated content of a definition file. Immutable; sizing turns it
/// into a <see cref="SizedEngine"/>. Lists are in station order.
/// </summary>
public sealed record EngineDefinition
{
    public required string Name { get; init; }

    public string Description { get; init; } = "";

    public required GasModel Gas { get; init; }

    public required DesignPoint Design { get; init; }

    public InletDefinition Inlet { get; init; } = new();

    /// <summary>Absent in a turbojet.</summary>
    public FanDefinition? Fan { get; init; }

    /// <summary>The compressors of the core stream, front to back.</summary>
    public required IReadOnlyList<CompressorDefinition> Compressors { get; init; }

    public CombustorDefinition Combustor { get; init; } = new();

    /// <summary>Turbines in the order in which the gas meets them.</summary>
    public required IReadOnlyList<TurbineDefinition> Turbines { get; init; }

    public required IReadOnlyList<SpoolDefinition> Spools { get; init; }

    public IReadOnlyList<AirPort> AirPorts { get; init; } = [];

    /// <summary>When given, core and bypass stream mix and share the core nozzle.</summary>
    public MixerDefinition? Mixer { get; init; }

    /// <summary>Nozzle of the core stream, or of the mixed one.</summary>
    public NozzleDefinition CoreNozzle { get; init; } = new();

    public NozzleDefinition BypassNozzle { get; init; } = new();

    /// <summary>Total-pressure losses at the design point of the bypass duct and of the duct behind the last turbine.</summary>
    public double BypassDuctLoss { get; init; }

    public double CoreDuctLoss { get; init; }

    public NacelleDefinition Nacelle { get; init; } = new();

    public ControlDefinition Control { get; init; } = new();

    public IReadOnlyList<RatingDefinition> Ratings { get; init; } = [];
}

/// <summary>The point at which the engine is sized.</summary>
public sealed record DesignPoint
{
    public required FlightCondition Flight { get; init; }

    /// <summary>Air taken in, kg/s. Zero when <see cref="NetThrust"/> sets the size.</summary>
    public double MassFlow { get; init; }

    /// <summary>Net thrust, N, that sets the size when no mass flow is given.</summary>
    public double NetThrust { get; init; }

    /// <summary>Bypass flow over core flow at the splitter; 0 for a turbojet.</summary>
    public double BypassRatio { get; init; }

    /// <summary>Combustor exit temperature, K. Zero when <see cref="RotorInletTemperature"/> is given.</summary>
    public double CombustorExitTemperature { get; init; }

    /// <summary>Temperature at the first turbine's rotor (station 41), K.</summary>
    public double RotorInletTemperature { get; init; }
}

/// <summary>Isentropic or polytropic efficiency at the design point.</summary>
public readonly record struct DesignEfficiency(double Value, bool Polytropic = false);

public sealed record InletDefinition
{
    /// <summary>P2/P0 below Mach 1.</summary>
    public double PressureRecovery { get; init; } = 1.0;

    /// <summary>When given, replaces the recovery: share of the ram energy that turns into pressure.</summary>
    public double? RamEfficiency { get; init; }
}

public sealed record FanDefinition
{
    public required string Spool { get; init; }

    /// <summary>Tip pressure ratio P13/P2.</summary>
    public required double PressureRatio { get; init; }

    public required DesignEfficiency Efficiency { get; init; }

    /// <summary>Hub pressure ratio P21/P2; 1 for a fan behind the core (aft fan).</summary>
    public required double HubPressureRatio { get; init; }

    public required DesignEfficiency HubEfficiency { get; init; }

    /// <summary>See <see cref="CompressorDefinition.ReynoldsExponent"/>.</summary>
    public double ReynoldsExponent { get; init; }

    /// <summary>Fan turns of its spool, below 1 behind a reduction gear.</summary>
    public double GearRatio { get; init; } = 1.0;

    /// <summary>Power that reaches the fan over what the gear takes from the spool.</summary>
    public double GearEfficiency { get; init; } = 1.0;
}

public sealed record CompressorDefinition
{
    public required string Name { get; init; }

    public required string Spool { get; init; }

    public required double PressureRatio { get; init; }

    public required DesignEfficiency Efficiency { get; init; }

    /// <summary>Its map where its stages or a table are known; the general shape without it.</summary>
    public PlacedMap? Map { get; init; }

    /// <summary>Share of the enthalpy rise done behind each stage at the design point; empty where the stages are not known.</summary>
    public IReadOnlyList<double> StageWork { get; init; } = [];

    /// <summary>Total-pressure loss of the duct ahead, at the design point.</summary>
    public double InletDuctLoss { get; init; }

    /// <summary>
    /// Exponent n of the loss over Reynolds number, (1 - efficiency) ~ Re^-n, against the design point; 0 leaves the effect
    /// out. 0.1 to 0.2 is usual.
    /// </summary>
    public double ReynoldsExponent { get; init; }
}

public sealed record CombustorDefinition
{
    /// <summary>Total-pressure loss over the inlet total pressure, at the design point.</summary>
    public double PressureLoss { get; init; }

    public double Efficiency { get; init; } = 1.0;
}

public sealed record TurbineDefinition
{
    public required string Name { get; init; }

    public required string Spool { get; init; }

    public required DesignEfficiency Efficiency { get; init; }

    /// <summary>Total-pressure loss of the duct ahead, at the design point.</summary>
    public double InletDuctLoss { get; init; }

    /// <summary>See <see cref="CompressorDefinition.ReynoldsExponent"/>.</summary>
    public double ReynoldsExponent { get; init; }

    /// <summary>Number of stages; sets where the turbine chokes unless <see cref="ChokingRatio"/> does.</summary>
    public int Stages { get; init; } = 1;

    /// <summary>Expansion ratio beyond which the capacity no longer grows; 0: from the number of stages.</summary>
    public double ChokingRatio { get; init; }

    /// <summary>Velocity ratio of best efficiency over that of the design point.</summary>
    public double BestVelocityRatio { get; init; } = 1.08;
}

public sealed record SpoolDefinition
{
    public required string Name { get; init; }

    /// <summary>Design speed, revolutions per minute; zero when unknown: speeds are then shown in per cent alone.</summary>
    public double Speed { get; init; }

    public double MechanicalEfficiency { get; init; } = 1.0;

    /// <summary>Power for accessories and aircraft, W.</summary>
    public double PowerOfftake { get; init; }
}

/// <summary>Where air taken from a compressor goes.</summary>
public enum AirDestination
{
    /// <summary>Lost to the engine: customer bleed, leakage.</summary>
    Overboard,

    /// <summary>Back into the bypass duct ahead of its losses: handling bleed.</summary>
    BypassDuct,

    /// <summary>Ahead of a turbine's rotor: mixes before the work is done.</summary>
    Vane,

    /// <summary>Behind a turbine's rotor: mixes after the work is done.</summary>
    Rotor,
}

/// <summary>Air taken from a compressor.</summary>
public sealed record AirPort
{
    public required string Name { get; init; }

    /// <summary>Name of <see cref="From"/> for air taken from the bypass stream behind the fan.</summary>
    public const string Fan = "fan";

    /// <summary>The core compressor it comes from, or <see cref="Fan"/>.</summary>
    public required string From { get; init; }

    /// <summary>Share of the compressor's enthalpy rise done on the air before it leaves, 0 to 1; 1 behind the fan.</summary>
    public double WorkFraction { get; init; } = 1.0;

    public required AirDestination To { get; init; }

    /// <summary>The turbine for <see cref="AirDestination.Vane"/> and <see cref="AirDestination.Rotor"/>.</summary>
    public string? Turbine { get; init; }

    /// <summary>Flow as a share of the compressor's inlet flow; behind the fan, of the bypass flow.</summary>
    public double Fraction { get; init; }

    /// <summary>Flow in kg/s, added to the share.</summary>
    public double Flow { get; init; }

    /// <summary>When set, the share is full below <see cref="OpenBelow"/> and nothing above <see cref="ShutAbove"/> relative corrected speed.</summary>
    public double OpenBelow { get; init; }

    public double ShutAbove { get; init; }

    /// <summary>Shut unless opened for a point, as anti-ice air is; <see cref="InputLayout.Open"/> opens it.</summary>
    public bool NormallyShut { get; init; }

    public bool Scheduled => ShutAbove > 0.0;
}

/// <summary>A forced mixer behind the last turbine.</summary>
public sealed record MixerDefinition
{
    /// <summary>Mach number of the core stream where the streams meet, at the design point.</summary>
    public required double CoreMach { get; init; }

    /// <summary>Share of the ideal gain of thrust by mixing that is had.</summary>
    public double Effectiveness { get; init; } = 1.0;

    /// <summary>Total-pressure loss of mixer and tailpipe, friction, at the design point.</summary>
    public double PressureLoss { get; init; }
}

public sealed record NozzleDefinition
{
    /// <summary>Isentropic efficiency up to the exit plane; 1 in a convergent-divergent nozzle, whose losses are its coefficients.</summary>
    public double Efficiency { get; init; } = 1.0;

    /// <summary>Exit over throat area; 1 for a convergent nozzle.</summary>
    public double ExitAreaRatio { get; init; } = 1.0;

    /// <summary>Real jet momentum over that of the exit-plane speed.</summary>
    public double VelocityCoefficient { get; init; } = 1.0;

    /// <summary>Effective over geometric throat area.</summary>
    public double DischargeCoefficient { get; init; } = 1.0;

    /// <summary>The coefficients over the nozzle's pressure ratio, in place of the constants.</summary>
    public CoefficientCurve? VelocityCurve { get; init; }

    public CoefficientCurve? DischargeCurve { get; init; }
}

/// <summary>What the nacelle takes from the thrust; it makes installed thrust of net thrust.</summary>
public sealed record NacelleDefinition
{
    /// <summary>External drag over the dynamic pressure, m2.</summary>
    public double DragArea { get; init; }

    /// <summary>Share of the bypass nozzle's gross thrust that the jet loses on the cowl and pylon behind it.</summary>
    public double ScrubbingLoss { get; init; }
}

/// <summary>What the thrust lever commands: corrected low-pressure speed between idle and full.</summary>
public sealed record ControlDefinition
{
    /// <summary>Relative corrected speeds of the first spool at lever 0 and lever 1.</summary>
    public double IdleSpeed { get; init; } = 0.30;

    public double FullSpeed { get; init; } = 1.05;

    /// <summary>
    /// Speed of the last (high-pressure) spool, relative to design, at which the control holds the engine at idle, on the ground and
    /// in flight; 0 where it is not known.
    /// </summary>
    public double IdleCoreSpeed { get; init; }
}

/// <summary>A rating: how much thrust may be taken.</summary>
public sealed record RatingDefinition
{
    public required string Name { get; init; }

    /// <summary>Flat thrust, static at sea level, N; zero when it follows from the flat-to temperature.</summary>
    public double Thrust { get; init; }

    /// <summary>Offset from ISA, K, up to which the thrust is flat; NaN when it follows from thrust and limits.</summary>
    public double FlatTo { get; init; } = double.NaN;

    /// <summary>Limits, each on one quantity in SI (speeds relative to design).</summary>
    public IReadOnlyList<Limit> Limits { get; init; } = [];
}

/// <summary>A limit on one output.</summary>
public readonly record struct Limit(Quantity Quantity, double Value);
