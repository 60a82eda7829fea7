namespace CycleSim.Cli.Tests;

public class PointCommandTests
{
    [Fact]
    public void The_design_point_is_printed_with_units_and_caution()
    {
        var run = CommandLine.Run("point", "velda-27", "--design");
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "net thrust",
                "kN",
                "g/(kN s)",
                "Tt K",
                "Pt kPa",
                "hpt rotor inlet",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
        Assert.Equal("", run.Error);
    }

    [Fact]
    public void Json_carries_SI_with_units_in_the_names()
    {
        var run = CommandLine.Run("point", "velda-27", "--design", "--json");
        Assert.Equal(1520.0, run.Number("T4_K"), 1e-6);
        Assert.Equal(5.8, run.Number("bypass_ratio"), 1e-9);
        Assert.Equal(
            run.Number("fuel_flow_kg_per_s") / run.Number("net_thrust_N"),
            run.Number("sfc_kg_per_N_s"),
            1e-15
        );
        Assert.InRange(run.Number("residual"), 0.0, 1e-10);
        Assert.InRange(run.Number("iterations"), 0, 10);
        var stations = run.Json.GetProperty("stations").EnumerateArray().ToList();
        var face = stations.Single(s => s.GetProperty("station").GetString() == "2");
        Assert.Equal(168.0, face.GetProperty("mass_flow_kg_per_s").GetDouble(), 1e-6);
        Assert.All(stations, s => Assert.True(s.GetProperty("total_pressure_Pa").GetDouble() > 1e4));
        Assert.All(stations, s => Assert.True(s.GetProperty("total_temperature_K").GetDouble() > 200.0));
    }

    // By definition: 1 lbf = 4.4482216152605 N, 1 lb = 0.45359237 kg; SFC in lb/h per lbf is fuel over thrust in those units.
    [Fact]
    public void US_units_are_the_same_point()
    {
        string[] point = ["point", "velda-27", "--altitude", "35000 ft", "--mach", "0.78", "--thrust", "22 kN"];
        var si = CommandLine.Run([.. point, "--json"]);
        var us = CommandLine.Run([.. point, "--units", "us"]);
        var fuel = si.Number("fuel_flow_kg_per_s") * 3600.0 / 0.45359237;
        var thrust = si.Number("net_thrust_N") / 4.4482216152605;
        Assert.Contains(FormattableString.Invariant($"{thrust:F0} lbf"), us.Output);
        Assert.Contains(FormattableString.Invariant($"{fuel:F1} lb/h"), us.Output);
        Assert.Contains(FormattableString.Invariant($"{fuel / thrust:F4} lb/(h lbf)"), us.Output);
        Assert.Contains("35000 ft", us.Output);
    }

    [Theory]
    [InlineData("--thrust", "60 kN", "net_thrust_N", 60000.0)]
    [InlineData("--thrust", "13488.54 lbf", "net_thrust_N", 60000.0)]
    [InlineData("--fuel-flow", "0.6 kg/s", "fuel_flow_kg_per_s", 0.6)]
    [InlineData("--T4", "1400 K", "T4_K", 1400.0)]
    [InlineData("--T41", "1126.85 °C", "T41_K", 1400.0)]
    [InlineData("--EGT", "700 degC", "T45_K", 973.15)]
    [InlineData("--EPR", "1.3", "engine_pressure_ratio", 1.3)]
    [InlineData("--lever", "70 %", "lever_position", 0.7)]
    public void Any_of_the_settings_is_met(string option, string value, string field, double expected)
    {
        var run = CommandLine.Run(
            "point",
            "velda-27",
            "--altitude",
            "2000 ft",
            "--mach",
            "0.2",
            option,
            value,
            "--json"
        );
        Assert.Equal(0, run.ExitCode);
        Assert.Equal(1.0, run.Number(field) / expected, 2e-6);
    }

    [Fact]
    public void Spool_speeds_bleed_and_offtake_are_met()
    {
        var run = CommandLine.Run(
            "point",
            "velda-27",
            "--altitude",
            "0 m",
            "--cas",
            "100 kt",
            "--isa",
            "-10 K",
            "--humidity",
            "60 %",
            "--N2",
            "98 %",
            "--bleed",
            "customer-bleed=2 %",
            "--offtake",
            "high=120 kW",
            "--json"
        );
        Assert.Equal(0, run.ExitCode);
        var spool = run.Json.GetProperty("spools")[1];
        Assert.Equal(0.98, spool.GetProperty("relative_speed").GetDouble(), 1e-9);
        Assert.Equal(120e3, spool.GetProperty("power_offtake_W").GetDouble(), 1e-6);
        var bleed = run
            .Json.GetProperty("air")
            .EnumerateArray()
            .Single(a => a.GetProperty("name").GetString() == "customer-bleed");
        var hpc = run
            .Json.GetProperty("stations")
            .EnumerateArray()
            .Single(s => s.GetProperty("station").GetString() == "25");
        Assert.Equal(
            0.02,
            bleed.GetProperty("mass_flow_kg_per_s").GetDouble() / hpc.GetProperty("mass_flow_kg_per_s").GetDouble(),
            1e-12
        );
        Assert.True(run.Json.GetProperty("flight").GetProperty("water_air_ratio").GetDouble() > 0.002);
    }

    [Theory]
    [InlineData("--altitude is missing", "--thrust", "60 kN")]
    [InlineData("say at what power", "--altitude", "0 m")]
    [InlineData("each set the power", "--altitude", "0 m", "--T4", "1400 K", "--N1", "95 %")]
    [InlineData("has no unit", "--altitude", "35000", "--T4", "1400 K")]
    [InlineData("is a mass flow", "--altitude", "35000 kg/s", "--T4", "1400 K")]
    [InlineData("-2000 to 32000 m", "--altitude", "40 km", "--T4", "1400 K")]
    [InlineData("between 0 and 3", "--altitude", "0 m", "--mach", "4", "--T4", "1400 K")]
    [InlineData("use one of them", "--altitude", "0 m", "--mach", "0.2", "--cas", "100 kt", "--T4", "1400 K")]
    [InlineData("use one of them", "--altitude", "0 m", "--isa", "5 K", "--temperature", "290 K", "--T4", "1400 K")]
    [InlineData("is not an air port", "--altitude", "0 m", "--T4", "1400 K", "--bleed", "custom=2 %")]
    [InlineData("between 0 and 100 %", "--altitude", "0 m", "--T4", "1400 K", "--bleed", "customer-bleed=120 %")]
    [InlineData("is not a spool", "--altitude", "0 m", "--T4", "1400 K", "--offtake", "middle=2 kW")]
    [InlineData("between 0 % (idle) and 100 % (full)", "--altitude", "0 m", "--lever", "-10 %")]
    [InlineData("write a share", "--altitude", "0 m", "--N1", "3800")]
    [InlineData("170 to 340 K", "--altitude", "0 m", "--temperature", "400 K", "--T4", "1400 K")]
    public void A_command_line_that_means_nothing_gives_no_number(string message, params string[] arguments)
    {
        var run = CommandLine.Run(["point", "velda-27", .. arguments]);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void A_geared_fan_turns_slower_than_its_spool()
    {
        var run = CommandLine.Run("point", "lunde-14g", "--design", "--json");
        // 9400 rpm and a gear ratio of 0.33 in the definition.
        Assert.Equal(9400.0 * 0.33, run.Number("fan_speed_rpm"), 1e-6);
    }

    [Fact]
    public void What_is_left_before_each_limit_is_shown()
    {
        var rated = CommandLine.Run(
            "point",
            "velda-27",
            "--altitude",
            "0 m",
            "--isa",
            "15 K",
            "--rating",
            "take-off",
            "--json"
        );
        var t41 = rated
            .Json.GetProperty("limit_margins")
            .EnumerateArray()
            .Single(m => m.GetProperty("quantity").GetString() == "T41");
        Assert.Equal(0.0, t41.GetProperty("left").GetDouble(), 1e-4);
        var beyond = CommandLine.Run("point", "velda-27", "--altitude", "0 m", "--T41", "1700 K");
        Assert.Equal(0, beyond.ExitCode);
        Assert.Contains("BEYOND limit T41", beyond.Output);
        Assert.Contains("exceeded by", beyond.Output);
        Assert.Contains(
            "points left",
            CommandLine.Run("point", "velda-27", "--altitude", "0 m", "--T41", "1400 K").Output
        );
    }

    [Fact]
    public void Thrust_beyond_the_engine_gives_the_reason_and_no_number()
    {
        var run = CommandLine.Run("point", "velda-27", "--altitude", "0 m", "--thrust", "400 kN");
        Assert.Equal(4, run.ExitCode);
        Assert.Contains("cannot be reached", run.Error);
        Assert.Contains("map", run.Error);
        Assert.Equal("", run.Output);
    }

    [Theory]
    [InlineData("mach = 0.80", "mahc = 0.80", "Did you mean 'mach'?")]
    [InlineData("T4 = \"1520 K\"", "T4 = \"690 K\"", "not above the compressor delivery")]
    [InlineData("T4 = \"1520 K\"", "T4 = \"1000 K\"", "take too much work")]
    [InlineData("bypass_ratio = 5.8", "bypass_ratio = 25", "more than the gas holds")]
    [InlineData("pressure_ratio = 12.0", "pressure_ratio = -12.0", "above 1")]
    public void A_wrong_definition_is_refused_with_its_line(string good, string bad, string message)
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".toml");
        try
        {
            File.WriteAllText(path, Definitions.EngineLibrary.Text("velda-27").Replace(good, bad));
            var run = CommandLine.Run("point", path, "--design");
            Assert.Equal(3, run.ExitCode);
            Assert.Contains(message, run.Error);
            Assert.Equal("", run.Output);
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Fact]
    public void A_file_that_is_not_there_is_named()
    {
        var run = CommandLine.Run("point", "no/such.toml", "--design");
        Assert.Equal(3, run.ExitCode);
        Assert.Contains("no such file", run.Error);
    }

    [Fact]
    public void Anti_ice_air_is_shut_until_it_is_opened()
    {
        string[] point = ["point", "torvik-75", "--altitude", "0 m", "--mach", "0", "--T41", "1500 K", "--json"];
        double Taken(CommandLine run) =>
            run
                .Json.GetProperty("air")
                .EnumerateArray()
                .Single(a => a.GetProperty("name").GetString() == "nacelle-anti-ice")
                .GetProperty("mass_flow_kg_per_s")
                .GetDouble();
        var shut = CommandLine.Run(point);
        var open = CommandLine.Run([.. point, "--open", "nacelle-anti-ice"]);
        Assert.Equal(0.0, Taken(shut));
        Assert.Equal(0.9, Taken(open));
        Assert.True(open.Number("net_thrust_N") < shut.Number("net_thrust_N"));
        // Static: no nacelle drag, but the jet still scrubs.
        Assert.True(shut.Number("installed_thrust_N") < shut.Number("net_thrust_N"));

        var both = CommandLine.Run([.. point, "--open", "wing-anti-ice", "--shut", "wing-anti-ice"]);
        Assert.Equal(2, both.ExitCode);
        Assert.Contains("use one of them", both.Error);
        var unknown = CommandLine.Run([.. point, "--open", "cowl"]);
        Assert.Equal(2, unknown.ExitCode);
        Assert.Contains("nacelle-anti-ice", unknown.Error);
    }
}
