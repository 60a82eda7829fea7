namespace CycleSim.Cli.Tests;

public class PowerTablesCommandTests
{
    [Fact]
    public void Tables_show_settings_marks_corrections_and_the_caution()
    {
        var run = CommandLine.Run(
            "power-setting",
            "velda-27",
            "--temperatures",
            "C",
            "--units",
            "us",
            "--load",
            "packs: customer-bleed=1.2 kg/s"
        );
        Assert.Equal(0, run.ExitCode);
        foreach (
            var text in new[]
            {
                "N1, % of design",
                "N1, rpm",
                "EPR",
                "f flat thrust",
                "T41",
                "at the corners",
                "no range of altitude",
                "not for dispatch",
            }
        )
            Assert.Contains(text, run.Output);
    }

    [Fact]
    public void Cells_agree_with_a_rated_point()
    {
        var cell = CommandLine
            .Run(
                "power-setting",
                "velda-27",
                "--altitudes",
                "2000 ft",
                "--outside",
                "35 °C",
                "--cas",
                "60 kt",
                "--json"
            )
            .Json.GetProperty("tables")[0]
            .GetProperty("cells")[0];
        var point = CommandLine.Run(
            "point",
            "velda-27",
            "--altitude",
            "2000 ft",
            "--temperature",
            "35 °C",
            "--cas",
            "60 kt",
            "--rating",
            "take-off",
            "--json"
        );
        Assert.Equal(point.Number("net_thrust_N"), cell.GetProperty("net_thrust_N").GetDouble(), 1e-3);
        Assert.Equal("T41", cell.GetProperty("set_by").GetString());
    }

    [Fact]
    public void Several_ratings_go_to_one_file()
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".csv");
        try
        {
            var run = CommandLine.Run(
                "power-setting",
                "velda-27",
                "--rating",
                "max-climb",
                "--rating",
                "max-cruise",
                "--mach",
                "0.78",
                "--altitudes",
                "31000 ft, 35000 ft",
                "--isa-offsets",
                "0 K, 10 K",
                "--csv",
                path
            );
            Assert.Equal(0, run.ExitCode);
            var lines = File.ReadAllLines(path);
            Assert.Equal(4, lines.Count(l => l.StartsWith("max-climb,", StringComparison.Ordinal)));
            Assert.Equal(4, lines.Count(l => l.StartsWith("max-cruise,", StringComparison.Ordinal)));
        }
        finally
        {
            File.Delete(path);
        }
    }

    [Fact]
    public void A_take_off_run_holds_N1_past_the_airspeed_at_which_it_is_set()
    {
        var run = CommandLine.Run(
            "power-setting",
            "velda-27",
            "--set-at",
            "60 kt",
            "--altitudes",
            "2000 ft",
            "--outside",
            "30 °C"
        );
        Assert.Equal(0, run.ExitCode);
        Assert.Contains("N1 to be reached by 60.0 kt calibrated", run.Output);
        Assert.Contains("exceeded by", run.Output);
        Assert.Contains("not for dispatch", run.Output);
    }

    [Theory]
    [InlineData(3, "it has 'take-off'", "--rating", "cruise")]
    [InlineData(2, "use one of them", "--mach", "0.3", "--cas", "200 kt")]
    [InlineData(2, "use one of them", "--outside", "0 °C", "--isa-offsets", "0 K")]
    [InlineData(2, "lists nothing", "--altitudes", ",")]
    [InlineData(2, "has no unit", "--altitudes", "0 ft, 2000")]
    [InlineData(2, "must lie below", "--coldest", "10 K", "--hottest", "0 K")]
    [InlineData(2, "more than 12", "--set-at", "60 kt")]
    [InlineData(2, "between standstill", "--set-at", "160 kt", "--altitudes", "0 ft", "--outside", "15 °C")]
    [InlineData(2, "belongs to a take-off run", "--hold-to", "150 kt")]
    [InlineData(2, "it has vane-cooling", "--load", "packs: cabin=1 %")]
    [InlineData(2, "outside 170 to 340 K", "--outside", "400 K", "--hottest", "200 K")]
    public void Questions_without_meaning_are_refused(int code, string message, params string[] arguments)
    {
        var run = CommandLine.Run(["power-setting", "velda-27", .. arguments]);
        Assert.Equal(code, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
    }

    [Fact]
    public void An_interrupted_table_stops_and_leaves_no_file()
    {
        var path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".csv");
        var start = new System.Diagnostics.ProcessStartInfo("dotnet")
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        var altitudes = string.Join(", ", Enumerable.Range(0, 60).Select(n => $"{150 * n} ft"));
        var offsets = string.Join(", ", Enumerable.Range(-40, 80).Select(n => $"{n} K"));
        string[] table = ["power-setting", "torvik-75", "--altitudes", altitudes, "--isa-offsets", offsets];
        var loads = Enumerable
            .Range(1, 20)
            .SelectMany(n => new[] { "--load", $"load-{n}: customer-bleed={n}e-3 kg/s" });
        foreach (
            var argument in new[] { Path.Combine(AppContext.BaseDirectory, "cyclesim.dll") }
                .Concat(table)
                .Concat(loads)
                .Concat(["--csv", path])
        )
            start.ArgumentList.Add(argument);
        using var process = System.Diagnostics.Process.Start(start)!;
        Thread.Sleep(1500);
        System.Diagnostics.Process.Start("kill", ["-INT", process.Id.ToString()]).WaitForExit();
        var error = process.StandardError.ReadToEnd();
        process.WaitForExit();
        Assert.Equal(130, process.ExitCode);
        Assert.DoesNotContain("exception", error, StringComparison.OrdinalIgnoreCase);
        Assert.False(File.Exists(path));
    }
}
