using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

/// <summary>
/// The NASA Energy Efficient Engine flight propulsion system: sized at max climb from its component data, max cruise
/// predicted. Values: NASA CR-168219 tables XII, XIII, XIV (typed from the report); assumptions in the definition file.
/// </summary>
public class PublishedEngineTests
{
    private static readonly EngineModel Engine = new(
        DefinitionFile.Load(Path.Combine(AppContext.BaseDirectory, "Data", "two-spool-mixed-max-climb.toml")).Engine
    );

    private static readonly FlightCondition RatedDay = FlightCondition.AtIsaOffset(10668.0, 0.8, 10.0);
    private static readonly FlightCondition StandardDay = FlightCondition.AtIsaOffset(10668.0, 0.8, 0.0);

    // Temperatures and ratios at the flat-rating temperature, SFC for a standard day at the same thrust, as in the report.
    [Fact]
    public void Max_climb_closes_on_the_report()
    {
        var climb = Engine.DesignPoint();
        Within(0.01, 38.4, climb.OverallPressureRatio);
        Within(0.01, 6.7, climb.BypassRatio);
        Within(0.01, 304.8, climb.Station("25").TotalTemperature);
        Within(0.01, 60469.0, climb.Station("25").TotalPressure);
        Within(0.01, 54.4, climb.Compressors[1].CorrectedFlow);
        Within(0.01, 1517.15, climb.T41);
        Within(0.01, 0.906, climb.Compressors[1].PolytropicEfficiency);
        Within(0.025, 0.0541, OnStandardDay(climb).Sfc * 3600.0);
    }

    // Changes from max climb to max cruise within 1.5 % of the value, T41 within 10 K; the power is set by the overall
    // pressure ratio of the report.
    [Fact]
    public void Max_cruise_is_predicted_from_max_climb()
    {
        var climb = Engine.DesignPoint();
        var cruise = AtOverallPressureRatio(36.5);
        Assert.Equal(1485.15, cruise.T41, 10.0);
        Change(6.7, 6.8, climb.BypassRatio, cruise.BypassRatio);
        Change(1.68, 1.64, Ratio(climb, "13"), Ratio(cruise, "13"));
        Change(1.70, 1.66, Ratio(climb, "21"), Ratio(cruise, "21"));
        Change(23.1, 22.4, climb.Compressors[1].PressureRatio, cruise.Compressors[1].PressureRatio);
        Change(0.0541, 0.0540, OnStandardDay(climb).Sfc * 3600.0, OnStandardDay(cruise).Sfc * 3600.0);
        Change(0.888, 0.894, climb.Compressors[0].IsentropicEfficiency, cruise.Compressors[0].IsentropicEfficiency);
        // High-pressure turbine: work over temperature and flow hardly move over the ratings (NASA CR-167955, table I:
        // 355.5 to 353.4 J/(kg K)).
        Change(355.5, 353.4, climb.Turbines[0].SpecificWork / climb.T41, cruise.Turbines[0].SpecificWork / cruise.T41);
    }

    private static OperatingPoint AtOverallPressureRatio(double wanted)
    {
        double low = 1400.0,
            high = 1517.0;
        for (var i = 0; i < 40; i++)
        {
            var middle = 0.5 * (low + high);
            if (Engine.At(RatedDay, Quantity.T41, middle).OverallPressureRatio < wanted)
                low = middle;
            else
                high = middle;
        }

        return Engine.At(RatedDay, Quantity.T41, low);
    }

    private static OperatingPoint OnStandardDay(OperatingPoint point) =>
        Engine.At(StandardDay, Quantity.NetThrust, point.NetThrust);

    private static double Ratio(OperatingPoint point, string station) =>
        point.Station(station).TotalPressure / point.Station("2").TotalPressure;

    private static void Within(double share, double published, double computed) =>
        Assert.Equal(1.0, computed / published, share);

    private static void Change(double from, double to, double computedFrom, double computedTo) =>
        Assert.Equal((to - from) / from, (computedTo - computedFrom) / computedFrom, 0.015);
}
