using CycleSim.Engine;

namespace CycleSim.Definitions.Tests;

public class DefinitionFileTests
{
    private static readonly string Velda = EngineLibrary.Text("velda-27");

    [Fact]
    public void Values_arrive_in_SI()
    {
        var loaded = EngineLibrary.Load("velda-27");
        var engine = loaded.Engine;
        Assert.Equal("velda-27", engine.Name);
        Assert.Equal(35000.0 * 0.3048, engine.Design.Flight.PressureAltitude, 1e-9);
        Assert.Equal(168.0, engine.Design.MassFlow, 1e-12);
        Assert.Equal(1520.0, engine.Design.CombustorExitTemperature, 1e-9);
        Assert.Equal(80e3, engine.Spools[1].PowerOfftake, 1e-9);
        Assert.Equal(14500.0, engine.Spools[1].Speed, 1e-9);
        Assert.Equal(0.07, engine.AirPorts[0].Fraction, 1e-12);
        Assert.Equal(AirDestination.Vane, engine.AirPorts[0].To);
        Assert.Equal("hpt", engine.AirPorts[0].Turbine);
        Assert.Equal(120e3, engine.Ratings[0].Thrust, 1e-9);
        Assert.Equal(64, loaded.Hash.Length);
    }

    [Theory]
    [InlineData("1246.85 °C", Dimension.Temperature, 1520.0)]
    [InlineData("2276.33 degF", Dimension.Temperature, 1520.0)]
    [InlineData("10.668 km", Dimension.Length, 10668.0)]
    [InlineData("1 bar", Dimension.Pressure, 1e5)]
    [InlineData("1013.25 hPa", Dimension.Pressure, 101325.0)]
    [InlineData("370.376 lb/s", Dimension.MassFlow, 168.0)]
    [InlineData("27000 lbf", Dimension.Force, 120101.98)]
    [InlineData("27 °F", Dimension.TemperatureDifference, 15.0)]
    [InlineData("-5 K", Dimension.TemperatureDifference, -5.0)]
    [InlineData("43.1 MJ/kg", Dimension.SpecificEnergy, 43.1e6)]
    [InlineData("1005 J/(kg K)", Dimension.SpecificHeat, 1005.0)]
    [InlineData("7 %", Dimension.Share, 0.07)]
    public void Units_are_read(string text, Dimension dimension, double si)
    {
        Assert.True(Units.TryRead(text, dimension, out var value, out var problem), problem);
        // Exact by definition of the units: 0.45359237 kg, 9.80665 N/kg, 5/9 K; the texts carry six digits.
        Assert.Equal(1.0, value / si, 2e-6);
    }

    public static TheoryData<string, string, string, string> Mistakes =>
        new()
        {
            // what is replaced, by what, key path, part of the message
            { "mach = 0.80", "mahc = 0.80", "design.mahc", "Did you mean 'mach'?" },
            { "mach = 0.80", "", "design.mach", "is missing" },
            { "mach = 0.80", "mach = 3.5", "design.mach", "0 to 3" },
            { "mach = 0.80", "mach = \"0.8\"", "design.mach", "without quotes" },
            { "altitude = \"35000 ft\"", "altitude = \"35000\"", "design.altitude", "has no unit" },
            { "altitude = \"35000 ft\"", "altitude = 35000", "design.altitude", "needs a unit" },
            { "altitude = \"35000 ft\"", "altitude = \"35000 kg/s\"", "design.altitude", "is a mass flow" },
            { "altitude = \"35000 ft\"", "altitude = \"135000 ft\"", "design.altitude", "out of range" },
            { "altitude = \"35000 ft\"", "altitude = \"high\"", "design.altitude", "cannot be read" },
            { "T4 = \"1520 K\"", "T4 = \"1520 K\"\nT41 = \"1500 K\"", "design.T41", "one of the two" },
            { "T4 = \"1520 K\"", "T4 = \"3000 K\"", "design.T4", "600 K to 2500 K" },
            { "mass_flow = \"168 kg/s\"", "mass_flow = \"-168 kg/s\"", "design.mass_flow", "above 0" },
            { "mass_flow = \"168 kg/s\"", "", "design", "needs mass_flow or net_thrust" },
            { "bypass_ratio = 5.8", "bypass_ratio = 0", "design.bypass_ratio", "must be above zero" },
            { "pressure_ratio = 12.0", "pressure_ratio = -12.0", "compressor[2].pressure_ratio", "above 1" },
            {
                "isentropic_efficiency = 0.89",
                "isentropic_efficiency = 1.2",
                "turbine[1].isentropic_efficiency",
                "above 0 to 1"
            },
            {
                "isentropic_efficiency = 0.89",
                "isentropic_efficiency = 0.89\npolytropic_efficiency = 0.9",
                "turbine[1].polytropic_efficiency",
                "one of the two"
            },
            { "pressure_loss = \"4.5 %\"", "pressure_loss = \"55 %\"", "combustor.pressure_loss", "below 0.5" },
            { "stages = 4", "stages = 4.5", "turbine[2].stages", "whole number" },
            { "name = \"lpt\"", "name = \"hpt\"", "turbine[2].name", "already the name" },
            { "to = \"lpt vane\"", "to = \"ltp vane\"", "air[3].to", "Did you mean 'lpt vane'?" },
            { "from = \"booster\"", "from = \"buster\"", "air[5].from", "Did you mean 'booster'?" },
            { "fraction = \"7 %\"", "fraction = \"97 %\"", "air[4].fraction", "less than 100 %" },
            { "open_below = 0.70", "open_below = 0.99", "air[5].open_below", "below shut_above" },
            { "[combustor]", "[combuster]", "combuster", "Did you mean 'combustor'?" },
            { "[combustor]", "[[combustor]]", "combustor", "write this table as [combustor]" },
            { "quantity = \"T41\"", "quantity = \"T42\"", "rating[3].limit[1].quantity", "none of" },
            { "value = \"1500 K\"", "value = \"104 %\"", "rating[3].limit[1].value", "is a share" },
            {
                "idle_speed = \"30 %\"\nfull_speed = \"105 %\"",
                "idle_speed = \"80 %\"\nfull_speed = \"60 %\"",
                "control.idle_speed",
                "below full_speed"
            },
            { "idle_speed = \"30 %\"", "idle_speed = \"5 %\"", "control.idle_speed", "0.1 to 1" },
            { "model = \"thermally perfect\"", "model = \"constant\"", "gas.model", "needs air_cp" },
            { "fuel = \"Jet A-1\"", "fuel = \"petrol\"", "gas.fuel", "none of" },
            { "flat_to = \"15 K\"", "flat_to = \"75 K\"", "rating[1].flat_to", "-60 K to 60 K" },
        };

    [Theory]
    [MemberData(nameof(Mistakes))]
    public void A_mistake_is_reported_where_it_stands(string good, string bad, string key, string message)
    {
        var at = Velda.IndexOf(good, StringComparison.Ordinal);
        Assert.True(at >= 0, good);
        var text = Velda[..at] + bad + Velda[(at + good.Length)..];
        var error = Assert.Throws<DefinitionException>(() => DefinitionFile.Parse(text, "test.toml"));
        var problem = Assert.Single(error.Problems, p => p.Key == key && p.Message.Contains(message));
        var line = text[..at].Count(c => c == '\n') + 1;
        if (bad.Length > 0 && key.Contains('.') && !message.Contains("less than"))
            Assert.InRange(problem.Line, line, line + bad.Count(c => c == '\n'));
        Assert.Contains("test.toml:", error.Message);
    }

    [Fact]
    public void All_mistakes_are_reported_together_in_the_order_of_the_file()
    {
        var text = Velda.Replace("mach = 0.80", "mach = 9.9").Replace("stages = 4", "stages = \"four\"");
        var problems = Assert.Throws<DefinitionException>(() => DefinitionFile.Parse(text, "t")).Problems;
        Assert.Equal(["design.mach", "turbine[2].stages"], problems.Select(p => p.Key));
    }

    [Fact]
    public void Spools_must_have_a_turbine_and_something_to_turn()
    {
        var text = Velda + "\n[[spool]]\nname = \"idle\"\n";
        var problems = Assert.Throws<DefinitionException>(() => DefinitionFile.Parse(text, "t")).Problems;
        Assert.Contains(problems, p => p.Message.Contains("has no turbine"));
        Assert.Contains(problems, p => p.Message.Contains("turns neither fan nor compressor"));
    }

    [Fact]
    public void Truncated_and_unreadable_files_are_refused()
    {
        Assert.Contains(
            "not readable as TOML",
            Assert
                .Throws<DefinitionException>(() =>
                    DefinitionFile.Parse(Velda[..(Velda.IndexOf("35000", StringComparison.Ordinal) + 3)], "t")
                )
                .Message
        );
        Assert.Contains(
            "there is no [[turbine]]",
            Assert
                .Throws<DefinitionException>(() =>
                    DefinitionFile.Parse(Velda[..Velda.IndexOf("[[turbine]]", StringComparison.Ordinal)], "t")
                )
                .Message
        );
        Assert.Contains("is missing", Assert.Throws<DefinitionException>(() => DefinitionFile.Parse("", "t")).Message);
        Assert.Contains(
            "no such file",
            Assert.Throws<DefinitionException>(() => DefinitionFile.Load("none/such.toml")).Message
        );
        var path = Path.GetTempFileName();
        try
        {
            File.WriteAllBytes(path, [0x41, 0xc3, 0x28]);
            Assert.Contains("UTF-8", Assert.Throws<DefinitionException>(() => DefinitionFile.Load(path)).Message);
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Fact]
    public void An_engine_that_is_not_shipped_is_named_with_those_that_are()
    {
        var error = Assert.Throws<DefinitionException>(() => EngineLibrary.Load("velda-72"));
        Assert.Contains("Did you mean 'velda-27'?", error.Message);
    }

    [Fact]
    public void Shipped_engines_can_be_sized()
    {
        Assert.NotEmpty(EngineLibrary.Names);
        Assert.All(
            EngineLibrary.Names,
            name => Assert.True(Sizing.Size(EngineLibrary.Load(name).Engine).DesignThrust > 0.0)
        );
    }

    [Fact]
    public void The_reference_page_is_up_to_date()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "CycleSim.sln")))
            folder = folder.Parent;
        var page = Path.Combine(folder!.FullName, "src", "CycleSim.Definitions", "REFERENCE.md");
        Assert.Equal(DefinitionReference.Markdown(), File.ReadAllText(page));
    }
}
