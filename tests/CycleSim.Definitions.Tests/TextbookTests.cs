using CycleSim.Reports;

namespace CycleSim.Definitions.Tests;

/// <summary>
/// Worked examples of Saravanamuttoo, Rogers and Cohen, Gas Turbine Theory, run from definition files like any engine.
/// Values: the book's inputs (from memory), recomputed by hand calculation independent of this project; they agree with
/// the printed answers (from memory) to three or four digits. Stations to 0.1 %; the book reads the fuel-air ratio off a
/// chart: fuel consumption to 2 %.
/// </summary>
public class TextbookTests
{
    private const double Station = 0.001;
    private const double Chart = 0.02;

    [Fact]
    public void Turbojet_at_Mach_0_8()
    {
        var point = Design("turbojet-mach-0.8.toml");
        Same(251.868, point.Station("2").TotalTemperature);
        Same(0.392758e5, point.Station("2").TotalPressure);
        Same(486.785, point.Station("3").TotalTemperature);
        Same(3.14206e5, point.Station("3").TotalPressure);
        Same(3.01638e5, point.Station("4").TotalPressure);
        Same(992.268, point.Station("5").TotalTemperature);
        Same(1.28349e5, point.Station("5").TotalPressure);
        var nozzle = point.Nozzles[0];
        Assert.True(nozzle.Choked);
        Same(4.84334, nozzle.PressureRatio);
        Same(850.515, nozzle.ExitTemperature);
        Same(0.668803e5, nozzle.ExitPressure);
        Same(570.494, nozzle.ExitSpeed);
        Same(0.00639756, nozzle.EffectiveArea);
        Same(239.629, point.Airspeed);
        Same(589.201, point.NetThrust);
        Assert.Equal(1.0, point.FuelAirRatio / 0.0197959, Chart);
        Assert.Equal(1.0, point.Sfc * 3600.0 / 0.120952, Chart);
    }

    [Fact]
    public void Twin_spool_turbofan_static()
    {
        var point = Design("turbofan-static.toml");
        Same(337.625, point.Station("13").TotalTemperature);
        Same(800.171, point.Station("3").TotalTemperature);
        Same(23.5e5, point.Station("4").TotalPressure);
        Same(1140.98, point.Station("45").TotalTemperature);
        Same(877.685, point.Station("5").TotalTemperature);
        Same(3.90255, point.Turbines[0].ExpansionRatio);
        Same(3.20921, point.Turbines[1].ExpansionRatio);
        Same(1.87638e5, point.Station("5").TotalPressure);
        Same(179.167, point.Station("13").MassFlow);
        Same(35.8333, point.Station("5").MassFlow);
        Assert.All(point.Nozzles, n => Assert.False(n.Choked));
        Same(527.926, point.Nozzles[0].ExitSpeed);
        Same(293.167, point.Nozzles[1].ExitSpeed);
        Same(18917.3, point.Nozzles[0].GrossThrust);
        Same(52525.8, point.Nozzles[1].GrossThrust);
        Same(71443.1, point.NetThrust);
        // 0.0403 kg/(h N) in the book (from memory).
        Assert.Equal(1.0, point.Sfc * 3600.0 / 0.0403, Chart);
    }

    [Fact]
    public void Jet_pipe_with_a_choked_nozzle()
    {
        var point = Design("jet-pipe-nozzle.toml");
        Same(1000.0, point.Station("5").TotalTemperature);
        Same(2.4e5, point.Station("5").TotalPressure);
        var nozzle = point.Nozzles[0];
        Assert.True(nozzle.Choked);
        Same(857.143, nozzle.ExitTemperature);
        Same(1.29546e5, nozzle.ExitPressure);
        Same(572.713, nozzle.ExitSpeed);
        Same(0.0762609, nozzle.EffectiveArea);
        Same(15349.3, point.NetThrust);
    }

    [Fact]
    public void Aft_fan_behind_the_same_jet_pipe()
    {
        var point = Design("aft-fan.toml");
        Same(288.0 + 56.7432, point.Station("13").TotalTemperature);
        Same(900.65, point.Station("5").TotalTemperature);
        Same(1.50318e5, point.Station("5").TotalPressure);
        Assert.All(point.Nozzles, n => Assert.False(n.Choked));
        Same(442.36, point.Nozzles[0].ExitSpeed);
        Same(319.984, point.Nozzles[1].ExitSpeed);
        Same(24894.0, point.NetThrust);
    }

    // Worked example 4.15 of a textbook (Farokhi, Aircraft Propulsion, title from memory): every printed digit of the mixer (131.23 kPa ideal, 0.9907, 0.9709).
    [Fact]
    public void Mixed_exhaust_at_Mach_2()
    {
        var point = Design("mixed-exhaust-mach-2.toml");
        Assert.Equal(70.420e3, point.Station("2").TotalPressure, 0.02e3);
        Assert.Equal(492.12, point.Station("13").TotalTemperature, 0.02);
        Assert.Equal(906.17, point.Station("3").TotalTemperature, 0.05);
        Assert.Equal(1101.27, point.Station("5").TotalTemperature, 0.05);
        var core = point.Station("6");
        Assert.Equal(132.46e3, core.TotalPressure, 0.01e3);
        Assert.Equal(1.0, point.Station("16").TotalPressure / core.TotalPressure, 1e-4);
        Assert.Equal(902.09, point.Station("7").TotalTemperature, 0.05);
        Assert.Equal(131.23e3, point.Station("7").TotalPressure / 0.98, 0.005e3);
        Assert.Equal(0.9907, point.Station("7").TotalPressure / 0.98 / core.TotalPressure, 0.00005);
        Assert.Equal(0.9709, point.Station("7").TotalPressure / core.TotalPressure, 0.00005);
    }

    // Values by hand calculation independent of this project; a check of the bookkeeping of three spools.
    [Fact]
    public void Three_spools_share_the_work()
    {
        var point = Design("three-spool.toml");
        Same(290.46, point.Station("2").TotalTemperature);
        Same(1.0384e5, point.Station("2").TotalPressure);
        Same(326.60, point.Station("13").TotalTemperature);
        Same(566.02, point.Station("24").TotalTemperature);
        Same(888.37, point.Station("3").TotalTemperature);
        Same(36.680e5, point.Station("3").TotalPressure);
        Same(1239.47, point.Station("45").TotalTemperature);
        Same(13.752e5, point.Station("45").TotalPressure);
        Same(1014.02, point.Station("47").TotalTemperature);
        Same(5.7583e5, point.Station("47").TotalPressure);
        Same(808.11, point.Station("5").TotalTemperature);
        Same(2.1495e5, point.Station("5").TotalPressure);
        Same(0.020756, point.FuelAirRatio);
        Same(262.38, point.Nozzles[1].ExitSpeed);
    }

    // Stage pressure ratios 4 and 3 in series give 12 (common practice, no source).
    [Fact]
    public void Pressure_ratios_in_series_multiply()
    {
        var text = File.ReadAllText(Path.Combine("Data", "turbojet-mach-0.8.toml"))
            .Replace("pressure_ratio = 8.0", "pressure_ratio = 4.0")
            .Replace(
                "[combustor]",
                "[[compressor]]\nname = \"rear\"\nspool = \"shaft\"\npressure_ratio = 3.0\nisentropic_efficiency = 0.87\n\n[combustor]"
            );
        var point = new EngineModel(DefinitionFile.Parse(text, "series").Engine).DesignPoint();
        Assert.Equal(12.0, point.OverallPressureRatio, 1e-9);
    }

    private static OperatingPoint Design(string file) =>
        new EngineModel(DefinitionFile.Load(Path.Combine(AppContext.BaseDirectory, "Data", file)).Engine).DesignPoint();

    private static void Same(double expected, double actual) => Assert.Equal(1.0, actual / expected, Station);
}
