using System.Text.Json;

namespace CycleSim.Cli.Tests;

public sealed class SweepCommandTests : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("cyclesim-");

    private static readonly string[] Question =
    [
        "sweep",
        "velda-27",
        "--over",
        "altitude=0 ft..36000 ft by 3000 ft",
        "--over",
        "mach=0.2..0.8 in 10",
        "--over",
        "lever=70 %..100 % in 16",
        "--outputs",
        "net_thrust_N,residual",
    ];

    public void Dispose() => _folder.Delete(true);

    private string File(string name) => Path.Combine(_folder.FullName, name);

    [Fact]
    public void Rows_follow_the_axes_and_a_summary_follows_the_rows()
    {
        var run = CommandLine.Run(
            "sweep",
            "velda-27",
            "--over",
            "altitude=0 ft,10000 ft & cas=200 kt,250 kt",
            "--rating",
            "max-climb",
            "--json"
        );
        Assert.Equal(0, run.ExitCode);
        var columns = run
            .Json.GetProperty("columns")
            .EnumerateArray()
            .ToDictionary(c => c.GetProperty("name").GetString()!, c => c.GetProperty("values"));
        Assert.Equal([0.0, 3048.0], columns["pressure_altitude_m"].EnumerateArray().Select(v => v.GetDouble()));
        // 200 and 250 kt are 102.89 and 128.61 m/s; the knot is 1852 m an hour.
        Assert.Equal(
            [102.8889, 128.6111],
            columns["calibrated_airspeed_m_per_s"].EnumerateArray().Select(v => Math.Round(v.GetDouble(), 4))
        );
        Assert.All(columns["outcome"].EnumerateArray(), v => Assert.Equal("solved", v.GetString()));
        Assert.Equal(2, run.Number("points_solved"));
    }

    [Fact]
    public void Parts_joined_are_the_whole_and_a_csv_file_has_every_row()
    {
        var whole = CommandLine.Run([.. Question, "--parquet", File("whole.parquet"), "--csv", File("whole.csv")]);
        Assert.Equal(0, whole.ExitCode);
        Assert.Contains("2080 points", whole.Output);
        Assert.Contains("not for dispatch", whole.Output);
        Assert.Equal(2080, System.IO.File.ReadLines(File("whole.csv")).Count(line => line[0] is not '#' and not 'p'));
        foreach (var part in new[] { "1", "2" })
            Assert.Equal(
                0,
                CommandLine
                    .Run([.. Question, "--part", part + "/2", "--threads", part, "--parquet", File(part + ".parquet")])
                    .ExitCode
            );
        var join = CommandLine.Run("join", File("joined.parquet"), File("2.parquet"), File("1.parquet"));
        Assert.Equal(0, join.ExitCode);
        Assert.Equal(
            System.IO.File.ReadAllBytes(File("whole.parquet")),
            System.IO.File.ReadAllBytes(File("joined.parquet"))
        );
        var missing = CommandLine.Run("join", File("none.parquet"), File("2.parquet"));
        Assert.Equal(2, missing.ExitCode);
        Assert.Contains("missing: 1/2", missing.Error);
        Assert.False(System.IO.File.Exists(File("none.parquet")));
    }

    [Fact]
    public void A_killed_sweep_goes_on_to_the_same_bytes()
    {
        string[] question =
        [
            "sweep",
            "velda-27",
            "--over",
            "altitude=0 ft..36000 ft in 16",
            "--over",
            "mach=0.2..0.8 in 30",
            "--over",
            "lever=70 %..100 % in 40",
        ];
        Assert.Equal(0, CommandLine.Run([.. question, "--parquet", File("whole.parquet"), "--threads", "1"]).ExitCode);
        var killed = File("killed.parquet");
        var start = new System.Diagnostics.ProcessStartInfo("dotnet") { RedirectStandardOutput = true };
        start.ArgumentList.Add(Path.Combine(AppContext.BaseDirectory, "cyclesim.dll"));
        foreach (var argument in (string[])[.. question, "--parquet", killed])
            start.ArgumentList.Add(argument);
        using (var process = System.Diagnostics.Process.Start(start)!)
        {
            // Some blocks are on disk; whether the last one is whole is left to chance.
            while (!process.HasExited && !(new FileInfo(killed + ".unfinished") is { Exists: true, Length: > 400_000 }))
                Thread.Sleep(1);
            process.Kill();
            process.WaitForExit();
        }

        var again = CommandLine.Run([.. question, "--parquet", killed]);
        Assert.Equal(0, again.ExitCode);
        Assert.Contains("19200 points", again.Output);
        Assert.Equal(System.IO.File.ReadAllBytes(File("whole.parquet")), System.IO.File.ReadAllBytes(killed));
        Assert.False(System.IO.File.Exists(killed + ".unfinished"));
    }

    [Fact]
    public void More_parts_than_work_leave_empty_parts_that_join_all_the_same()
    {
        string[] question = ["sweep", "velda-27", "--over", "altitude=0 ft,5000 ft", "--rating", "take-off"];
        Assert.Equal(0, CommandLine.Run([.. question, "--parquet", File("whole.parquet")]).ExitCode);
        foreach (var part in new[] { "1", "2" })
            Assert.Equal(
                0,
                CommandLine.Run([.. question, "--part", part + "/2", "--parquet", File(part + ".parquet")]).ExitCode
            );
        Assert.Equal(0, CommandLine.Run("join", File("joined.parquet"), File("1.parquet"), File("2.parquet")).ExitCode);
        Assert.Equal(
            System.IO.File.ReadAllBytes(File("whole.parquet")),
            System.IO.File.ReadAllBytes(File("joined.parquet"))
        );
    }

    [Theory]
    [InlineData("must not be zero", "--over", "altitude=0 ft..9000 ft by 0 ft")]
    [InlineData("in one unit", "--over", "altitude=0 ft..1000 ft by 100 m")]
    [InlineData("is a temperature", "--over", "altitude=0 K,10 K")]
    [InlineData("there is no axis 'height'", "--over", "height=0 ft")]
    [InlineData("no point of the sweep lies inside", "--over", "altitude=40000 ft", "--ceiling", "39000 ft")]
    [InlineData("is no part", "--over", "altitude=0 ft", "--parquet", "never.parquet", "--part", "4/3")]
    [InlineData("name it with --parquet", "--over", "altitude=0 ft", "--part", "1/3")]
    [InlineData("customer-bleed", "--over", "altitude=0 ft", "--over", "bleed cabin=1 %")]
    public void Questions_without_meaning_are_refused(string message, params string[] arguments)
    {
        var run = CommandLine.Run(["sweep", "velda-27", "--rating", "max-climb", .. arguments]);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains(message, run.Error);
        Assert.Equal("", run.Output);
        Assert.False(System.IO.File.Exists("never.parquet"));
    }

    [Fact]
    public void A_throttle_loop_names_the_bottom_of_its_bucket()
    {
        var run = CommandLine.Run(
            "throttle",
            "velda-27",
            "--altitude",
            "35000 ft",
            "--mach",
            "0.78",
            "--rating",
            "max-cruise",
            "--json"
        );
        Assert.Equal(0, run.ExitCode);
        var least = run.Json.GetProperty("least_consumption");
        Assert.Equal("inside", least.GetProperty("where").GetString());
        Assert.All(
            run.Json.GetProperty("rows").EnumerateArray(),
            row =>
                Assert.True(
                    row.GetProperty("sfc_kg_per_N_s").GetDouble() > least.GetProperty("sfc_kg_per_N_s").GetDouble()
                )
        );
        var altitude = CommandLine.Run(
            "throttle",
            "velda-27",
            "--mach",
            "0.78",
            "--best-altitude",
            "--thrust",
            "20 kN"
        );
        Assert.Equal(0, altitude.ExitCode);
        Assert.Contains("Least consumption", altitude.Output);
        Assert.Contains("not for dispatch", altitude.Output);
        Assert.Equal(2, CommandLine.Run("throttle", "velda-27", "--mach", "0.78", "--best-altitude").ExitCode);
    }

    [Fact]
    public void Tables_state_their_error()
    {
        var run = CommandLine.Run(
            "tables",
            "velda-27",
            "--rating",
            "max-climb",
            "--altitudes",
            "20000 ft,30000 ft",
            "--machs",
            "0.6,0.7",
            "--isa-offsets",
            "0 K,10 K",
            "--csv",
            File("t.csv")
        );
        Assert.Equal(0, run.ExitCode);
        Assert.Contains("net_thrust_N against mid-points: largest", run.Output);
        Assert.Contains("# interpolation_error_1: net_thrust_N", System.IO.File.ReadAllText(File("t.csv")));
        var refused = CommandLine.Run("tables", "velda-27", "--machs", "0.7,0.6");
        Assert.Equal(2, refused.ExitCode);
        Assert.Contains("must rise", refused.Error);
    }

    [Fact]
    public void Every_name_of_the_documents_is_described()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (folder is not null && !System.IO.File.Exists(Path.Combine(folder.FullName, "CycleSim.sln")))
            folder = folder.Parent;
        var page = System.IO.File.ReadAllText(Path.Combine(folder!.FullName, "src", "CycleSim.Cli", "JSON.md"));
        string[][] commands =
        [
            ["sweep", "velda-27", "--over", "altitude=0 ft", "--over", "thrust=100 kN,900 kN"],
            ["throttle", "velda-27", "--altitude", "35000 ft", "--mach", "0.78", "--points", "5"],
            ["tables", "velda-27", "--altitudes", "0 ft,2000 ft", "--machs", "0,0.1", "--isa-offsets", "0 K,10 K"],
        ];
        foreach (var command in commands)
            Check(CommandLine.Run([.. command, "--json"]).Json, page);
    }

    private static void Check(JsonElement element, string page)
    {
        if (element.ValueKind == JsonValueKind.Object)
            foreach (var property in element.EnumerateObject())
            {
                Assert.Contains($"`{property.Name}`", page);
                Check(property.Value, page);
            }
        else if (element.ValueKind == JsonValueKind.Array)
            foreach (var item in element.EnumerateArray())
                Check(item, page);
    }
}
