using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Gas;

namespace CycleSim.Tests.Engine;

/// <summary>Invented engines for tests of the core, which knows no definition files.</summary>
internal static class TestEngines
{
    public static readonly ThermallyPerfectGas Kerosene = new(Fuel.JetA1);

    // cp and gamma as in the textbook rows: 1005, 1.4 and 1148, 1.333.
    public static readonly ConstantGas Textbook = new(1005.0, 1.4, 1148.0, 1.333, Kerosene);

    public static EngineDefinition TwinSpool(GasModel? gas = null, double offtake = 80e3) =>
        new()
        {
            Name = "twin-spool",
            Gas = gas ?? Kerosene,
            Design = new DesignPoint
            {
                Flight = FlightCondition.AtIsaOffset(10668.0, 0.8, 0.0),
                MassFlow = 168.0,
                BypassRatio = 5.8,
                CombustorExitTemperature = 1520.0,
            },
            Inlet = new InletDefinition { PressureRecovery = 0.995 },
            Fan = new FanDefinition
            {
                Spool = "low",
                PressureRatio = 1.66,
                Efficiency = new DesignEfficiency(0.905, true),
                HubPressureRatio = 1.50,
                HubEfficiency = new DesignEfficiency(0.91, true),
            },
            Compressors =
            [
                new CompressorDefinition
                {
                    Name = "booster",
                    Spool = "low",
                    PressureRatio = 1.75,
                    Efficiency = new DesignEfficiency(0.905, true),
                },
                new CompressorDefinition
                {
                    Name = "hpc",
                    Spool = "high",
                    PressureRatio = 12.0,
                    Efficiency = new DesignEfficiency(0.905, true),
                    InletDuctLoss = 0.01,
                },
            ],
            Combustor = new CombustorDefinition { PressureLoss = 0.045, Efficiency = 0.999 },
            Turbines =
            [
                new TurbineDefinition
                {
                    Name = "hpt",
                    Spool = "high",
                    Efficiency = new DesignEfficiency(0.89),
                },
                new TurbineDefinition
                {
                    Name = "lpt",
                    Spool = "low",
                    Efficiency = new DesignEfficiency(0.915),
                    Stages = 4,
                    InletDuctLoss = 0.01,
                },
            ],
            Spools =
            [
                new SpoolDefinition
                {
                    Name = "low",
                    Speed = 3800.0,
                    MechanicalEfficiency = 0.995,
                },
                new SpoolDefinition
                {
                    Name = "high",
                    Speed = 14500.0,
                    MechanicalEfficiency = 0.995,
                    PowerOfftake = offtake,
                },
            ],
            AirPorts =
            [
                Port("vane", "hpc", 1.0, AirDestination.Vane, "hpt", 0.07),
                Port("blade", "hpc", 1.0, AirDestination.Rotor, "hpt", 0.045),
                Port("lpt-vane", "hpc", 0.5, AirDestination.Vane, "lpt", 0.015),
                Port("customer", "hpc", 0.6, AirDestination.Overboard, null, 0.0),
                Port("handling", "booster", 1.0, AirDestination.BypassDuct, null, 0.11) with
                {
                    OpenBelow = 0.70,
                    ShutAbove = 0.92,
                },
            ],
            BypassDuctLoss = 0.015,
            CoreDuctLoss = 0.01,
            CoreNozzle = new NozzleDefinition { VelocityCoefficient = 0.995 },
            BypassNozzle = new NozzleDefinition { VelocityCoefficient = 0.995 },
            Ratings =
            [
                new RatingDefinition
                {
                    Name = "take-off",
                    Thrust = 120e3,
                    FlatTo = 15.0,
                    Limits = [new Limit(Quantity.N1, 1.10), new Limit(Quantity.N2, 1.12)],
                },
            ],
        };

    private static AirPort Port(
        string name,
        string from,
        double work,
        AirDestination to,
        string? turbine,
        double fraction
    ) =>
        new()
        {
            Name = name,
            From = from,
            WorkFraction = work,
            To = to,
            Turbine = turbine,
            Fraction = fraction,
        };
}
