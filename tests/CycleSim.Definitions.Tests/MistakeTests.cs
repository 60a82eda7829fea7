namespace CycleSim.Definitions.Tests;

/// <summary>Each mistake made in a good file gives one problem, at the right line and key, in words that help.</summary>
public class MistakeTests
{
    private static readonly string Velda = EngineLibrary.Text("velda-27");

    // What is replaced, by what; the line at which it is reported, key path, part of the message.
    public static TheoryData<string, string, string, string, string> Mistakes =>
        new()
        {
            // Units and kinds of value.
            { "\"35000 ft\"", "\"35000\"", "altitude = \"35000\"", "design.altitude", "has no unit" },
            { "\"35000 ft\"", "35000", "altitude = 35000", "design.altitude", "\"35000 ft\"" },
            { "\"35000 ft\"", "\"35000 kg/s\"", "altitude = \"35000 kg/s\"", "design.altitude", "is a mass flow" },
            { "\"35000 ft\"", "\"35000 kg\"", "altitude = \"35000 kg\"", "design.altitude", "unknown unit, 'kg'" },
            { "\"35000 ft\"", "\"10,668 km\"", "altitude = \"10,668 km\"", "design.altitude", "has a comma" },
            { "\"35000 ft\"", "\"NaN m\"", "altitude = \"NaN m\"", "design.altitude", "cannot be read" },
            { "\"35000 ft\"", "\"1e400 m\"", "altitude = \"1e400 m\"", "design.altitude", "too large" },
            { "\"35000 ft\"", "\"10 668 m\"", "altitude = \"10 668 m\"", "design.altitude", "unknown unit, '668 m'" },
            { "\"35000 ft\"", "true", "altitude = true", "design.altitude", "cannot be read" },
            { "\"80 kW\"", "\"80 KW\"", "power_offtake = \"80 KW\"", "spool[2].power_offtake", "Did you mean 'kW'?" },
            { "\"0 K\"", "\"0 m\"", "isa_offset = \"0 m\"", "design.isa_offset", "is a length" },
            { "\"7 %\"", "\"7\"", "fraction = \"7\"", "air[1].fraction", "has no unit" },
            { "mach = 0.80", "mach = nan", "mach = nan", "design.mach", "must be finite" },
            { "mach = 0.80", "mach = \"0.80\"", "mach = \"0.80\"", "design.mach", "without quotes" },
            { "stages = 4", "stages = 4.5", "stages = 4.5", "turbine[2].stages", "whole number" },
            { "spool = \"low\"", "spool = 1", "spool = 1", "fan.spool", "text in quotes" },
            // Keys and tables.
            { "mach = 0.80", "Mach = 0.80\nmach = 0.80", "Mach = 0.80", "design.Mach", "Did you mean 'mach'?" },
            { "mach = 0.80", "", "[design]", "design.mach", "is missing" },
            {
                "mach = 0.80",
                "mach = 0.80\nmach = 0.81",
                "mach = 0.81",
                "design.mach",
                "is given twice; the first is in line"
            },
            { "[core_duct]", "[core_ducts]", "[core_ducts]", "core_ducts", "Did you mean 'core_duct'?" },
            { "[core_duct]", "[ab]\n[core_duct]", "[ab]", "ab", "is not a table of a definition file. Its tables" },
            {
                "[bypass_duct]",
                "[inlet]\npressure_recovery = 0.9\n[bypass_duct]",
                "[inlet]",
                "inlet",
                "is given twice"
            },
            { "[[rating.limit]]", "[rating.limit]", "[rating.limit]", "rating.limit", "[[rating.limit]]" },
            // Ports and nozzles.
            {
                "work_fraction = 0.6\nto = \"overboard\"\nfraction = \"0 %\"",
                "stage = 4\nto = \"overboard\"\nfraction = \"0 %\"",
                "stage = 4",
                "air[4].stage",
                "needs the stages of 'hpc'"
            },
            { "normally = \"shut\"", "normally = \"closed\"", "normally = \"closed\"", "air[6].normally", "\"shut\"" },
            {
                "from = \"hpc\"\nwork_fraction = 0.5\nto = \"overboard\"\nflow",
                "from = \"fan\"\nwork_fraction = 0.5\nto = \"overboard\"\nflow",
                "work_fraction = 0.5",
                "air[6].work_fraction",
                "is for a core compressor"
            },
            {
                "[core_nozzle]\nvelocity_coefficient = 0.995",
                "[core_nozzle]\nefficiency = 0.95\nexit_area_ratio = 1.2",
                "efficiency = 0.95",
                "core_nozzle.efficiency",
                "convergent-divergent"
            },
            {
                "[bypass_nozzle]\nvelocity_coefficient = 0.995",
                "[bypass_nozzle]\n[[bypass_nozzle.coefficients]]\npressure_ratio = 1.2\nvelocity = 0.99\ndischarge = 0.95\n[[bypass_nozzle.coefficients]]\npressure_ratio = 1.8\nvelocity = 0.99",
                "[[bypass_nozzle.coefficients]]",
                "bypass_nozzle.coefficients[2].discharge",
                "the other points of this nozzle give it"
            },
            {
                "[bypass_nozzle]\nvelocity_coefficient = 0.995",
                "[bypass_nozzle]\n[[bypass_nozzle.coefficients]]\npressure_ratio = 1.8\nvelocity = 0.99\n[[bypass_nozzle.coefficients]]\npressure_ratio = 1.2\nvelocity = 0.98",
                "velocity = 0.99",
                "bypass_nozzle.coefficients[1].velocity",
                "must rise"
            },
            {
                "[core_duct]",
                "[nacelle]\ndrag_area = \"0.4 m\"\n[core_duct]",
                "drag_area = \"0.4 m\"",
                "nacelle.drag_area",
                "is a length"
            },
            // Alternatives.
            {
                "mach = 0.80",
                "mach = 0.80\npressure = \"0.4 bar\"",
                "pressure = \"0.4 bar\"",
                "design.pressure",
                "one of the two"
            },
            {
                "isa_offset = \"0 K\"",
                "isa_offset = \"0 K\"\ntemperature = \"288 K\"",
                "temperature = \"288 K\"",
                "design.temperature",
                "one of the two"
            },
            {
                "mass_flow = \"168 kg/s\"",
                "mass_flow = \"168 kg/s\"\nnet_thrust = \"28 kN\"",
                "net_thrust = \"28 kN\"",
                "design.net_thrust",
                "one of the two"
            },
            { "mass_flow = \"168 kg/s\"", "", "[design]", "design", "needs mass_flow or net_thrust" },
            { "T4 = \"1520 K\"", "", "[design]", "design", "needs T4 or T41" },
            { "altitude = \"35000 ft\"", "", "[design]", "design", "needs altitude or pressure" },
            {
                "pressure_recovery = 0.995",
                "pressure_recovery = 0.995\nram_efficiency = 0.9",
                "ram_efficiency = 0.9",
                "inlet.ram_efficiency",
                "one of the two"
            },
            {
                "isentropic_efficiency = 0.89",
                "",
                "[[turbine]]",
                "turbine[1]",
                "needs isentropic_efficiency or polytropic_efficiency"
            },
            {
                "mach = 0.80",
                "mach = 0.80\nrelative_humidity = 0.5\nwater_air_ratio = 0.001",
                "water_air_ratio = 0.001",
                "design.water_air_ratio",
                "one of the two"
            },
            // Ranges.
            { "mach = 0.80", "mach = 3.5", "mach = 3.5", "design.mach", "0 to 3" },
            { "\"35000 ft\"", "\"33 km\"", "altitude = \"33 km\"", "design.altitude", "-2000 m to 32000 m" },
            { "\"0 K\"", "\"-50 K\"", "[design]", "design", "outside air temperature of 168.8 K" },
            { "bypass_ratio = 5.8", "bypass_ratio = -1", "bypass_ratio = -1", "design.bypass_ratio", "out of range" },
            { "bypass_ratio = 5.8", "", "[design]", "design.bypass_ratio", "must be above zero" },
            {
                "pressure_ratio = 12.0",
                "pressure_ratio = 1.0",
                "pressure_ratio = 1.0",
                "compressor[2].pressure_ratio",
                "above 1"
            },
            {
                "hub_pressure_ratio = 1.50",
                "hub_pressure_ratio = 0.9",
                "hub_pressure_ratio = 0.9",
                "fan.hub_pressure_ratio",
                "1 to 5"
            },
            {
                "hub_pressure_ratio = 1.50",
                "hub_pressure_ratio = 1.50\ngear_ratio = 0",
                "gear_ratio = 0",
                "fan.gear_ratio",
                "above 0 to 1"
            },
            {
                "efficiency = 0.999",
                "efficiency = \"101 %\"",
                "efficiency = \"101 %\"",
                "combustor.efficiency",
                "to 1"
            },
            { "fraction = \"7 %\"", "fraction = \"100 %\"", "fraction = \"100 %\"", "air[1].fraction", "below 1" },
            { "fraction = \"7 %\"", "fraction = \"97 %\"", "fraction = \"0 %\"", "air[4].fraction", "less than 100 %" },
            { "shut_above = 0.92", "", "[[air]]", "air[5]", "open_below and shut_above together" },
            { "fraction = \"1.5 %\"", "", "[[air]]", "air[3]", "needs fraction or flow" },
            // Names and references.
            { "name = \"velda-27\"", "name = \"velda=27\"", "name = \"velda=27\"", "name", "cannot be a name" },
            {
                "name = \"blade-cooling\"",
                "name = \"Vane-cooling\"",
                "name = \"Vane-cooling\"",
                "air[2].name",
                "already the name"
            },
            {
                "name = \"max-climb\"",
                "name = \"take-off\"",
                "name = \"take-off\"",
                "rating[3].name",
                "already the name"
            },
            {
                "spool = \"high\"",
                "spool = \"hihg\"",
                "spool = \"hihg\"",
                "compressor[2].spool",
                "Did you mean 'high'?"
            },
            { "to = \"lpt vane\"", "to = \"lpt vain\"", "to = \"lpt vain\"", "air[3].to", "Did you mean 'lpt vane'?" },
            { "from = \"booster\"", "from = \"ipc\"", "from = \"ipc\"", "air[5].from", "booster, hpc" },
            // Gas.
            { "fuel = \"Jet A-1\"", "fuel = \"petrol\"", "fuel = \"petrol\"", "gas.fuel", "none of" },
            {
                "fuel = \"Jet A-1\"",
                "air_gamma = 1.4",
                "air_gamma = 1.4",
                "gas.air_gamma",
                "belongs to model = \"constant\""
            },
            {
                "fuel = \"Jet A-1\"",
                "count_fuel_mass = true",
                "count_fuel_mass = true",
                "gas.count_fuel_mass",
                "belongs to model"
            },
            {
                "fuel = \"Jet A-1\"",
                "fuel_air_ratio = \"chart\"",
                "fuel_air_ratio = \"chart\"",
                "gas.fuel_air_ratio",
                "belongs to model"
            },
            // Ratings.
            { "value = \"1500 K\"", "value = 1500", "value = 1500", "rating[3].limit[1].value", "needs a unit" },
            {
                "value = \"110 %\"",
                "value = 110",
                "value = 110",
                "rating[1].limit[2].value",
                "11000 % of the design speed"
            },
            { "value = \"110 %\"", "value = \"-1 %\"", "value = \"-1 %\"", "rating[1].limit[2].value", "above zero" },
            {
                "quantity = \"N2\"",
                "quantity = \"N3\"",
                "quantity = \"N3\"",
                "rating[1].limit[2].quantity",
                "needs a spool"
            },
            {
                "quantity = \"N2\"",
                "quantity = \"N1\"",
                "quantity = \"N1\"",
                "rating[1].limit[2].quantity",
                "limited already"
            },
            {
                "quantity = \"N2\"\nvalue = \"110 %\"",
                "quantity = \"T4\"\nvalue = \"1700 K\"",
                "[[rating]]",
                "rating[1]",
                "any two fix the third"
            },
            { "thrust = \"108 kN\"\nflat_to = \"10 K\"", "", "[[rating]]", "rating[2]", "needs thrust or flat_to" },
            {
                "[[rating.limit]]\nquantity = \"T41\"\nvalue = \"1500 K\"",
                "",
                "[[rating]]",
                "rating[3]",
                "nothing that ends its flat part"
            },
        };

    [Theory]
    [MemberData(nameof(Mistakes))]
    public void One_mistake_gives_one_problem_at_its_line(
        string good,
        string bad,
        string line,
        string key,
        string message
    )
    {
        var at = Velda.IndexOf(good, StringComparison.Ordinal);
        Assert.True(at >= 0, good);
        var text = Velda[..at] + bad + Velda[(at + good.Length)..];
        var problem = Assert.Single(ProblemsOf(text));
        Assert.Equal(key, problem.Key);
        Assert.Equal(line, text.Split('\n')[problem.Line - 1]);
        Assert.Contains(message, problem.Message);
        Assert.DoesNotContain('\n', problem.ToString());
    }

    [Theory]
    [InlineData("altitude = \"35000 ft\"", "altitude = 35000 ft", "altitude = \"35000 ft\".")]
    [InlineData("spool = \"low\"", "spool = low", "spool = \"low\".")]
    [InlineData("spool = \"low\"", "spool = \"low", "Close it with a quotation mark")]
    [InlineData("[combustor]", "[combustor", "Write [table] or [[table]].")]
    [InlineData("mach = 0.80", "mach =", "no value behind the equals sign")]
    [InlineData("mach = 0.80", "mach", "neither a table nor a key")]
    public void What_is_not_toml_is_explained_at_its_line(string good, string bad, string message)
    {
        var at = Velda.IndexOf(good, StringComparison.Ordinal);
        var text = Velda[..at] + bad + Velda[(at + good.Length)..];
        var problem = Assert.Single(ProblemsOf(text));
        Assert.Equal(bad, text.Split('\n')[problem.Line - 1]);
        Assert.StartsWith("not readable as TOML", problem.Message);
        Assert.Contains(message, problem.Message);
    }

    [Fact]
    public void A_file_cut_short_anywhere_is_refused_or_complete_in_itself()
    {
        for (var length = 0; length < Velda.Length; length += 7)
        {
            var text = Velda[..length];
            try
            {
                DefinitionFile.Parse(text, "cut");
            }
            catch (DefinitionException error)
            {
                Assert.NotEmpty(error.Problems);
                continue;
            }

            // What stands behind the second spool may be left out.
            Assert.Contains("name = \"high\"", text);
        }
    }

    [Fact]
    public void Any_character_may_be_damaged_without_anything_but_a_list_of_problems()
    {
        var random = new Random(1);
        for (var i = 0; i < 400; i++)
        {
            var text = Velda.ToCharArray();
            for (var n = 0; n < 3; n++)
                text[random.Next(text.Length)] = "\"[]=.#%,\0\n é{}-9eK\ud800"[random.Next(18)];
            try
            {
                DefinitionFile.Parse(new string(text), "damaged");
            }
            catch (DefinitionException error)
            {
                Assert.All(error.Problems, p => Assert.DoesNotContain('\n', p.ToString()));
            }
        }
    }

    [Fact]
    public void Nesting_beyond_reason_is_refused() =>
        Assert.Contains("not readable as TOML", Assert.Single(ProblemsOf("a = " + new string('[', 100_000))).Message);

    [Theory]
    [InlineData("")]
    [InlineData("\0")]
    [InlineData(".")]
    public void Paths_that_are_none_are_refused(string path) =>
        Assert.Throws<DefinitionException>(() => DefinitionFile.Load(path));

    [Fact]
    public void The_low_pressure_spool_comes_first()
    {
        var low = Velda.IndexOf("[[spool]]", StringComparison.Ordinal);
        var high = Velda.IndexOf("[[spool]]", low + 1, StringComparison.Ordinal);
        var end = Velda.IndexOf("[[air]]", StringComparison.Ordinal);
        var problem = Assert.Single(ProblemsOf(Velda[..low] + Velda[high..end] + Velda[low..high] + Velda[end..]));
        Assert.Equal("spool[1].name", problem.Key);
        Assert.Contains("'low' to the top", problem.Message);
    }

    [Fact]
    public void A_turbine_and_a_compressor_may_not_share_a_name()
    {
        var text = Velda.Replace("\"lpt\"", "\"booster\"").Replace("lpt vane", "booster vane");
        Assert.Equal("turbine[2].name", Assert.Single(ProblemsOf(text)).Key);
    }

    [Fact]
    public void No_compressor_is_called_as_the_fan()
    {
        var problem = Assert.Single(ProblemsOf(Velda.Replace("\"booster\"", "\"fan\"")));
        Assert.Equal("compressor[1].name", problem.Key);
        Assert.Contains("the name of the fan", problem.Message);
    }

    [Fact]
    public void The_constant_gas_is_dry()
    {
        var text = Velda
            .Replace(
                "model = \"thermally perfect\"",
                "model = \"constant\"\nair_cp = \"1005 J/(kg K)\"\nair_gamma = 1.4\nburnt_cp = \"1148 J/(kg K)\"\nburnt_gamma = 1.333"
            )
            .Replace("mach = 0.80", "mach = 0.80\nwater_air_ratio = 0.001");
        Assert.Equal("design.water_air_ratio", Assert.Single(ProblemsOf(text)).Key);
    }

    [Fact]
    public void A_pressure_given_is_used_as_it_stands()
    {
        var text = Velda
            .Replace("altitude = \"35000 ft\"", "pressure = \"1.0 bar\"")
            .Replace("isa_offset = \"0 K\"", "temperature = \"288 K\"\nwater_air_ratio = \"1 %\"");
        var flight = DefinitionFile.Parse(text, "t").Engine.Design.Flight;
        Assert.Equal((1e5, 288.0, 0.01), (flight.StaticPressure, flight.StaticTemperature, flight.WaterAirRatio));
    }

    private static IReadOnlyList<Problem> ProblemsOf(string text) =>
        Assert.Throws<DefinitionException>(() => DefinitionFile.Parse(text, "t")).Problems;
}
