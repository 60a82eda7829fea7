using CycleSim.Air;
using CycleSim.Engine;

namespace CycleSim.Definitions;

/// <summary>The design point, from its alternatives.</summary>
internal static class DesignPointBuilder
{
    private static readonly string[] Water = ["relative_humidity", "water_air_ratio"];
    private static readonly string[] Air = ["altitude", "pressure", "mach", "isa_offset", "temperature", .. Water];

    public static DesignPoint? Build(TableReader design, TableReader fan, TableReader gas)
    {
        if (!design.Present)
            return null;
        var place = design.ExactlyOne("altitude", "pressure");
        if (design.Has("temperature") && design.Has("isa_offset"))
            design.Report("temperature", "is given beside isa_offset; give one of the two.");
        design.ExactlyOne("mass_flow", "net_thrust");
        design.ExactlyOne("T4", "T41");
        var bypass = design.Number("bypass_ratio", 0.0);
        if (bypass > 0.0 && !fan.Present)
            design.Report("bypass_ratio", "is above zero, but there is no [fan] to feed a bypass duct.");
        if (bypass == 0.0 && fan.Present)
            design.Report(
                "bypass_ratio",
                "must be above zero for an engine with a [fan], for instance bypass_ratio = 5.8."
            );
        if (design.Has("relative_humidity") && design.Has("water_air_ratio"))
            design.Report("water_air_ratio", "is given beside relative_humidity; give one of the two.");
        foreach (var key in Water.Where(k => gas.Text("model") == "constant" && design.Number(k, 0.0) > 0.0))
            design.Report(key, "needs model = \"thermally perfect\" in [gas]; the constant gas is dry air.");
        // What was refused has been reported; a flight condition cannot be made from the rest.
        if (!place || !design.Has("mach") || Air.Any(k => double.IsNaN(design.Number(k, 0.0))))
            return null;
        try
        {
            return new DesignPoint
            {
                Flight = Flight(design),
                MassFlow = design.Number("mass_flow", 0.0),
                NetThrust = design.Number("net_thrust", 0.0),
                BypassRatio = bypass,
                CombustorExitTemperature = design.Number("T4", 0.0),
                RotorInletTemperature = design.Number("T41", 0.0),
            };
        }
        catch (ArgumentOutOfRangeException error)
        {
            design.Report("", error.Message.Split(" (Parameter")[0]);
            return null;
        }
    }

    private static FlightCondition Flight(TableReader design)
    {
        var mach = design.Number("mach");
        var water = design.Number("water_air_ratio", 0.0);
        var pressure = design.Has("pressure")
            ? design.Number("pressure")
            : StandardAtmosphere.Pressure(design.Number("altitude"));
        var altitude = design.Has("altitude")
            ? design.Number("altitude")
            : StandardAtmosphere.PressureAltitude(pressure);
        var temperature = design.Has("temperature")
            ? design.Number("temperature")
            : StandardAtmosphere.Temperature(altitude) + design.Number("isa_offset", 0.0);
        var flight = design.Has("pressure")
            ? FlightCondition.AtPressure(pressure, mach, temperature, water)
            : FlightCondition.AtTemperature(altitude, mach, temperature, water);
        return design.Has("relative_humidity")
            ? flight.WithRelativeHumidity(design.Number("relative_humidity"))
            : flight;
    }
}
