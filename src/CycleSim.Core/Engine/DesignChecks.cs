using CycleSim.Components;
using CycleSim.Scalars;

namespace CycleSim.Engine;

/// <summary>What the physics forbids at a design point, said in the trade's words.</summary>
internal static class DesignChecks
{
    public static void CheckTurbineWork(
        EngineDefinition definition,
        int k,
        in GasRelations<Plain> gas,
        in FlowState<Plain> inlet,
        double work
    )
    {
        var turbine = definition.Turbines[k];
        gas.AtTemperature(new Plain(Gas.GasModel.LowestTemperature), inlet.Y, out var coldest, out _);
        var held = (inlet.H.Value - coldest.Value) * turbine.Efficiency.Value;
        if (!(inlet.W.Value > 0.0))
            throw new SizingException(
                $"{definition.Name}: no flow reaches turbine '{turbine.Name}'; the air taken from the compressors exceeds "
                    + "what goes in. Reduce the [[air]] flows."
            );
        if (!(work > 0.0))
            throw new SizingException(
                $"{definition.Name}: turbine '{turbine.Name}' has no work to do; its spool '{turbine.Spool}' turns nothing."
            );
        if (!(work < held))
            throw new SizingException(
                $"{definition.Name}: turbine '{turbine.Name}' is asked for {work / 1000.0:F0} kJ/kg, more than the gas holds at "
                    + $"{inlet.Tt.Value:F0} K ({held / 1000.0:F0} kJ/kg). Raise T4, or lower the pressure ratios or the bypass "
                    + $"ratio on spool '{turbine.Spool}'."
            );
    }

    public static void CheckCombustor(
        EngineDefinition definition,
        double airFlow,
        double t3,
        double t4,
        double fuelFlow
    )
    {
        if (!(airFlow > 0.0))
            throw new SizingException(
                $"{definition.Name}: no air reaches the combustor; the [[air]] flows take all of it. Reduce them."
            );
        if (!(t4 > t3) || !(fuelFlow > 0.0))
            throw new SizingException(
                $"{definition.Name}: combustor exit temperature T4 = {t4:F0} K is not above the compressor delivery "
                    + $"temperature T3 = {t3:F0} K. Raise T4 or lower the pressure ratios."
            );
        var stoichiometric = definition.Gas.StoichiometricFuelAirRatio;
        if (fuelFlow / airFlow > stoichiometric)
            throw new SizingException(
                $"{definition.Name}: T4 = {t4:F0} K needs a fuel-air ratio of {fuelFlow / airFlow:F4}, above the "
                    + $"stoichiometric {stoichiometric:F4}. Lower T4."
            );
    }

    public static void CheckMixer(
        EngineDefinition definition,
        MixerDefinition mixer,
        double coreTotal,
        double bypassTotal,
        double staticPressure
    )
    {
        // Half the total pressure is past the sonic speed of any air: the streams must meet subsonically.
        if (!(bypassTotal > 1.001 * staticPressure) || !(staticPressure > 0.54 * bypassTotal))
            throw new SizingException(
                $"{definition.Name}: the mixer finds no balance of static pressure: the core stream ({coreTotal / 1000.0:F1} kPa "
                    + $"total) at Mach {mixer.CoreMach:F2} has {staticPressure / 1000.0:F1} kPa, the bypass stream "
                    + $"{bypassTotal / 1000.0:F1} kPa total, which must lie above it and within subsonic reach. Change the core Mach "
                    + "number, the fan pressure ratio or the bypass ratio."
            );
    }

    public static void CheckNozzles(EngineDefinition definition, FlowPath<Plain> path)
    {
        foreach (var nozzle in new[] { definition.CoreNozzle, definition.BypassNozzle })
            if (nozzle.ExitAreaRatio > 1.0 && nozzle.Efficiency < 1.0)
                throw new SizingException(
                    $"{definition.Name}: a nozzle has exit_area_ratio = {nozzle.ExitAreaRatio:F3} and efficiency = "
                        + $"{nozzle.Efficiency:F3}; a convergent-divergent nozzle takes its losses in the velocity and "
                        + "discharge coefficients. Drop the efficiency."
                );
        var ambient = path.Inputs[InputLayout.Pressure].Value;
        if (definition.Mixer is not null)
        {
            CheckNozzle(definition, "mixed", path.Mixed.P.Value, ambient);
            return;
        }

        CheckNozzle(definition, "core", path.CoreExit.P.Value, ambient);
        if (definition.Fan is not null)
            CheckNozzle(definition, "bypass", path.BypassExit.P.Value, ambient);
    }

    private static void CheckNozzle(EngineDefinition definition, string which, double total, double ambient)
    {
        if (!(total > ambient * 1.0005))
            throw new SizingException(
                $"{definition.Name}: the {which} nozzle has {total / 1000.0:F1} kPa to expand to {ambient / 1000.0:F1} kPa; "
                    + "there is no jet. The turbines take too much work: raise T4, or lower the bypass ratio, the fan "
                    + "pressure ratio or the core's."
            );
    }
}
