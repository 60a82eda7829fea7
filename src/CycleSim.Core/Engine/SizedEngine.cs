using CycleSim.Maps;

namespace CycleSim.Engine;

/// <summary>
/// An engine after sizing: the scale factors, capacities and areas that the design point fixed. Immutable once
/// <see cref="Sizing.Size"/> has returned it; may be shared by threads.
/// </summary>
public sealed class SizedEngine
{
    internal SizedEngine(EngineDefinition definition)
    {
        Definition = definition;
        Layout = new InputLayout(definition);
        HasFan = definition.Fan is not null;
        int Spool(string name) => definition.Spools.Select(s => s.Name).ToList().IndexOf(name);

        Fan = definition.Fan is { } fan
            ? new ScaledCompressor("fan", Spool(fan.Spool), fan.PressureRatio)
            {
                ReynoldsExponent = fan.ReynoldsExponent,
            }
            : null;
        Compressors =
        [
            .. definition.Compressors.Select(c => new ScaledCompressor(c.Name, Spool(c.Spool), c.PressureRatio, c.Map)
            {
                ReynoldsExponent = c.ReynoldsExponent,
            }),
        ];
        Turbines = [.. definition.Turbines.Select(t => new ScaledTurbine(t, Spool(t.Spool)))];
        Ports = [.. definition.AirPorts.Select(p => new SizedPort(p, definition))];
        Spools = [.. definition.Spools];
        UnknownCount = Spools.Length + (HasFan ? 1 : 0) + Compressors.Length + 1;
    }

    public EngineDefinition Definition { get; }

    public InputLayout Layout { get; }

    public bool HasFan { get; }

    public ScaledCompressor? Fan { get; }

    public ScaledCompressor[] Compressors { get; }

    public ScaledTurbine[] Turbines { get; }

    public SizedPort[] Ports { get; }

    public SpoolDefinition[] Spools { get; }

    /// <summary>Spool speeds, one map position for each compressor, combustor exit temperature.</summary>
    public int UnknownCount { get; }

    /// <summary>Geometric throat areas, m2.</summary>
    public double CoreNozzleArea { get; internal set; }

    public double BypassNozzleArea { get; internal set; }

    /// <summary>Corrected flows W sqrt(RT)/P at design of the passages that lose pressure, m2.</summary>
    internal double CombustorFlow { get; set; }

    internal double CoreDuctFlow { get; set; }

    internal double BypassDuctFlow { get; set; }

    internal double TailpipeFlow { get; set; }

    /// <summary>Areas of the two streams where they meet in a mixer, m2.</summary>
    public double MixerCoreArea { get; internal set; }

    public double MixerBypassArea { get; internal set; }

    internal double FanHubRise { get; set; }

    internal double FanHubEfficiency { get; set; }

    /// <summary>The solved design point, in solver unknowns: where cold starts begin.</summary>
    internal double[] DesignUnknowns { get; set; } = [];

    /// <summary>Inputs at the design point.</summary>
    public double[] DesignInputs { get; internal set; } = [];

    /// <summary>Air taken in (kg/s) and rotor inlet temperature (K) at the design point.</summary>
    public double DesignMassFlow { get; internal init; }

    public double DesignRotorInlet { get; internal set; }

    /// <summary>Combustor exit temperature at the design point, K.</summary>
    public double DesignT4 => DesignUnknowns[^1] * 1000.0;

    /// <summary>Net thrust at the design point, N: the scale of the thrust conditions.</summary>
    public double DesignThrust { get; internal set; }
}

/// <summary>A compressor map with the factors that put the design point on it.</summary>
public sealed class ScaledCompressor(string name, int spool, double designPressureRatio, PlacedMap? stacked = null)
{
    public string Name { get; } = name;

    public int Spool { get; } = spool;

    /// <summary>The unscaled map.</summary>
    public CompressorMap Map { get; } = stacked?.Map ?? CompressorShape.Build(designPressureRatio);

    /// <summary>Position of the design point on its speed line.</summary>
    public double DesignBeta { get; } = stacked?.DesignBeta ?? CompressorShape.DesignBeta;

    /// <summary>Corrected flow (W sqrt(RT)/P, m2), pressure rise and efficiency over the map's; sqrt(RT) of design.</summary>
    public double FlowScale { get; internal set; } = 1.0;

    public double RiseScale { get; internal set; } = 1.0;

    public double EfficiencyScale { get; internal set; } = 1.0;

    internal double SpeedReference { get; set; } = 1.0;

    /// <summary>Corrected flow at design, m2.</summary>
    internal double DesignFlow { get; set; } = 1.0;

    internal double ReynoldsExponent { get; init; }

    internal double DesignReynolds { get; set; } = 1.0;
}

/// <summary>A turbine with its capacity and work at design.</summary>
public sealed class ScaledTurbine
{
    internal ScaledTurbine(TurbineDefinition definition, int spool)
    {
        Definition = definition;
        Spool = spool;
        // Own rule, no source: one stage chokes at about 2, each further stage adds to the overall ratio.
        var choking = definition.ChokingRatio > 0.0 ? definition.ChokingRatio : 1.9 * Math.Pow(definition.Stages, 0.55);
        CriticalRatio = 1.0 / choking;
    }

    public TurbineDefinition Definition { get; }

    public int Spool { get; }

    /// <summary>Outlet over inlet pressure at which the capacity is reached.</summary>
    internal double CriticalRatio { get; }

    /// <summary>Corrected flow when choked, m2, and design corrected flow for the duct ahead.</summary>
    public double Capacity { get; internal set; } = 1.0;

    internal double DesignFlow { get; set; } = 1.0;

    internal double DesignReynolds { get; set; } = 1.0;

    /// <summary>Work at design, J/kg, at speed 1, and the isentropic efficiency there.</summary>
    public double DesignWork { get; internal set; } = 1.0;

    public double DesignEfficiency { get; internal set; } = 1.0;
}

/// <summary>An air port with its names resolved.</summary>
public sealed class SizedPort
{
    internal SizedPort(AirPort port, EngineDefinition definition)
    {
        Port = port;
        FromFan = port.From == AirPort.Fan;
        Compressor = definition.Compressors.Select(c => c.Name).ToList().IndexOf(port.From);
        Turbine = definition.Turbines.Select(t => t.Name).ToList().IndexOf(port.Turbine ?? "");
    }

    public AirPort Port { get; }

    /// <summary>Index of the core compressor, -1 for the fan.</summary>
    public int Compressor { get; }

    public bool FromFan { get; }

    public int Turbine { get; }
}
