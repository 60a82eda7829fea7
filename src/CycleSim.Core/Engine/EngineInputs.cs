using CycleSim.Air;

namespace CycleSim.Engine;

/// <summary>
/// Where each input of an operating point stands in the flat list of inputs of one engine. Every input can be freed in a
/// matching problem or asked for its sensitivity.
/// </summary>
public sealed class InputLayout
{
    public const int Pressure = 0;
    public const int Temperature = 1;
    public const int Mach = 2;
    public const int SpecificHumidity = 3;
    private const int Fixed = 4;

    private readonly int _spools,
        _ports,
        _compressors,
        _turbines;

    public InputLayout(EngineDefinition definition)
    {
        _spools = definition.Spools.Count;
        _ports = definition.AirPorts.Count;
        _compressors = definition.Compressors.Count + 1;
        _turbines = definition.Turbines.Count;
        Names =
        [
            "ambient_pressure_Pa",
            "ambient_temperature_K",
            "mach",
            "specific_humidity",
            .. definition.Spools.Select(s => $"power_offtake_{s.Name}_W"),
            .. definition.AirPorts.Select(p => $"air_{p.Name}_fraction"),
            .. definition.AirPorts.Select(p => $"air_{p.Name}_kg_per_s"),
            "efficiency_factor_fan",
            .. definition.Compressors.Select(c => $"efficiency_factor_{c.Name}"),
            "flow_factor_fan",
            .. definition.Compressors.Select(c => $"flow_factor_{c.Name}"),
            .. definition.Turbines.Select(t => $"efficiency_factor_{t.Name}"),
            .. definition.Turbines.Select(t => $"flow_factor_{t.Name}"),
            "area_factor_core_nozzle",
            "area_factor_bypass_nozzle",
        ];
    }

    /// <summary>Names with units, as used in JSON.</summary>
    public IReadOnlyList<string> Names { get; }

    public int Count => Names.Count;

    /// <summary>Power taken from a spool, W.</summary>
    public int PowerOfftake(int spool) => Fixed + spool;

    /// <summary>Share of the compressor's inlet flow taken by a port (its schedule multiplies it).</summary>
    public int PortFraction(int port) => Fixed + _spools + port;

    /// <summary>Flow taken by a port, kg/s, on top of its share.</summary>
    public int PortFlow(int port) => Fixed + _spools + _ports + port;

    /// <summary>Factor on the efficiency of the fan (0) or of core compressor k (k + 1): 1 new, below 1 worn.</summary>
    public int CompressorEfficiency(int index) => Fixed + _spools + 2 * _ports + index;

    /// <summary>Factor on the flow of the fan (0) or of core compressor k (k + 1).</summary>
    public int CompressorFlow(int index) => Fixed + _spools + 2 * _ports + _compressors + index;

    /// <summary>Factor on a turbine's efficiency.</summary>
    public int TurbineEfficiency(int index) => Fixed + _spools + 2 * _ports + 2 * _compressors + index;

    /// <summary>Factor on a turbine's capacity.</summary>
    public int TurbineFlow(int index) => Fixed + _spools + 2 * _ports + 2 * _compressors + _turbines + index;

    /// <summary>Size that makes an input of order one: freed inputs are solved for in this unit.</summary>
    public double Scale(int input) =>
        input switch
        {
            Temperature => 288.15,
            Pressure => 101325.0,
            SpecificHumidity => 0.05,
            _ when input >= PowerOfftake(0) && input < PortFraction(0) => 1e6,
            _ => 1.0,
        };

    /// <summary>Factor on the throat area of the core (or mixed) nozzle.</summary>
    public int CoreNozzleArea => Count - 2;

    /// <summary>Factor on the throat area of the bypass nozzle.</summary>
    public int BypassNozzleArea => Count - 1;

    /// <summary>The inputs of a new engine with the definition's bleeds and offtakes at a flight condition.</summary>
    public double[] Defaults(EngineDefinition definition, in FlightCondition flight)
    {
        var inputs = new double[Count];
        SetFlight(inputs, flight);
        for (var k = 0; k < _spools; k++)
            inputs[PowerOfftake(k)] = definition.Spools[k].PowerOfftake;
        for (var k = 0; k < _ports; k++)
        {
            if (!definition.AirPorts[k].NormallyShut)
                Open(definition, inputs, k);
        }

        Array.Fill(inputs, 1.0, CompressorEfficiency(0), 2 * _compressors + 2 * _turbines + 2);
        return inputs;
    }

    /// <summary>Opens a port to the share and flow of its definition.</summary>
    public void Open(EngineDefinition definition, Span<double> inputs, int port)
    {
        inputs[PortFraction(port)] = definition.AirPorts[port].Fraction;
        inputs[PortFlow(port)] = definition.AirPorts[port].Flow;
    }

    /// <summary>Shuts a port.</summary>
    public void Shut(Span<double> inputs, int port)
    {
        inputs[PortFraction(port)] = 0.0;
        inputs[PortFlow(port)] = 0.0;
    }

    /// <summary>Puts a flight condition into a list of inputs.</summary>
    public static void SetFlight(Span<double> inputs, in FlightCondition flight)
    {
        inputs[Pressure] = flight.StaticPressure;
        inputs[Temperature] = flight.StaticTemperature;
        inputs[Mach] = flight.Mach;
        inputs[SpecificHumidity] = flight.WaterAirRatio / (1.0 + flight.WaterAirRatio);
    }
}
