namespace CycleSim.Cli.Tests;

public class ExportTests
{
    [Theory]
    [InlineData("output,input,output_value,derivative", "net_thrust_N,ambient_pressure_Pa,", "influence", "--design")]
    [InlineData("compressor,surge_margin_constant_flow", "hpc,", "surge-margin")]
    [InlineData("outside_temperature_K,isa_offset_K,governing", "258.15,-30,", "flat-rating")]
    public void Rows_go_to_files(string heading, string row, string command, params string[] arguments)
    {
        var folder = Directory.CreateTempSubdirectory().FullName;
        try
        {
            var (csv, parquet) = (Path.Combine(folder, "rows.csv"), Path.Combine(folder, "rows.parquet"));
            var run = CommandLine.Run([command, "velda-27", .. arguments, "--csv", csv, "--parquet", parquet]);
            Assert.Equal(0, run.ExitCode);
            var lines = File.ReadAllLines(csv);
            Assert.Contains(lines, l => l.StartsWith("# definition_sha256: ", StringComparison.Ordinal));
            Assert.Contains(lines, l => l.StartsWith(heading, StringComparison.Ordinal));
            Assert.Contains(lines, l => l.StartsWith(row, StringComparison.Ordinal));
            // A Parquet file begins and ends with these four bytes (Apache Parquet format).
            var bytes = File.ReadAllBytes(parquet);
            Assert.Equal("PAR1"u8, bytes.AsSpan(0, 4));
            Assert.Equal("PAR1"u8, bytes.AsSpan(bytes.Length - 4));
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }
}
