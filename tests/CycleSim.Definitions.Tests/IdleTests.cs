using CycleSim.Air;
using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

public class IdleTests
{
    // Poll and Schumann, An estimation method for the fuel burn and other performance characteristics of civil transport
    // aircraft, The Aeronautical Journal: idle fuel flow in flight over that at sea level, 1 - 0.178 x + 0.0085 x2 with x the
    // altitude in 10 000 ft; for large transports. The wide-body and the geared engine are of that kind.
    [Theory]
    [InlineData("torvik-75", 0.4)]
    [InlineData("lunde-14g", 0.4)]
    public void Fuel_flow_at_flight_idle_falls_with_altitude_as_published(string name, double mach)
    {
        var model = new EngineModel(EngineLibrary.Load(name).Engine);
        double Fuel(double feet) => model.AtIdle(FlightCondition.AtIsaOffset(feet * 0.3048, mach, 0.0)).FuelFlow;
        var ground = Fuel(0.0);
        foreach (var x in new[] { 1.0, 2.0, 3.0 })
            Assert.Equal(1.0 - 0.178 * x + 0.0085 * x * x, Fuel(x * 10000.0) / ground, 0.03);
    }

    // ICAO Annex 16, volume II: idle of the landing and take-off cycle is 7 % of the rated thrust.
    [Theory]
    [MemberData(nameof(Engines))]
    public void Ground_idle_is_seven_per_cent_of_the_rated_thrust(string name)
    {
        var model = new EngineModel(EngineLibrary.Load(name).Engine);
        var rated = model.Rating(model.Engine.Definition.Ratings[0].Name).FlatThrust(0.0, 0.0);
        var idle = model.AtIdle(FlightCondition.AtIsaOffset(0.0, 0.0, 0.0));
        Assert.Equal(0.07, idle.NetThrust / rated, 0.005);
    }

    public static TheoryData<string> Engines => [.. EngineLibrary.Names];

    [Fact]
    public void Without_an_idle_speed_there_is_no_idle()
    {
        var text = EngineLibrary.Text("velda-27").Replace("idle_core_speed", "# idle_core_speed");
        var model = new EngineModel(DefinitionFile.Parse(text, "no-idle").Engine);
        var none = Assert.Throws<NoSolutionException>(() => model.AtIdle(FlightCondition.AtIsaOffset(0.0, 0.0, 0.0)));
        Assert.Contains("idle_core_speed", none.Message);
    }
}
