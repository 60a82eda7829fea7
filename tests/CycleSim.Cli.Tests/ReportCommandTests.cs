using System.Text.RegularExpressions;

namespace CycleSim.Cli.Tests;

public partial class ReportCommandTests
{
    [Fact]
    public void One_file_holds_everything_and_fetches_nothing()
    {
        var folder = Directory.CreateTempSubdirectory("cyclesim-").FullName;
        try
        {
            var path = Path.Combine(folder, "velda.html");
            var run = CommandLine.Run(["report", "velda-27", "--out", path]);
            Assert.Equal(0, run.ExitCode);
            Assert.Contains("not for dispatch", run.Output);
            var html = File.ReadAllText(path);
            Assert.InRange(html.Length, 1_000_000, 8_000_000);
            var own = Library().Replace(html, "", 1);
            foreach (
                var text in new[]
                {
                    "Definition",
                    "Design point",
                    "Ratings",
                    "Envelope",
                    "Compressors and surge margins",
                    "What bleed, power and wear cost",
                    "Provenance",
                    "not for dispatch",
                    "The definition as it was read",
                    "polytropic_efficiency = 0.905",
                    "Turbines",
                    "Nozzles",
                    "ISA +20 K: what sets the power",
                    "1 % from customer-bleed",
                    "least SFC",
                    "definition sha256",
                    "Flat to ISA 15.0 K",
                }
            )
                Assert.Contains(text, own);
            Assert.DoesNotContain("NaN", own);
            Assert.DoesNotContain("Not shown", own);
            Assert.DoesNotMatch("(src|href)=\"(?!#)", own);
            Assert.DoesNotMatch("https?://|@import|url\\(", own);
            Assert.InRange(ChartElement().Count(own), 12, 40);

            // The same question gives the same bytes, and nothing else is left in the folder.
            CommandLine.Run(["report", "velda-27", "--out", path]);
            Assert.Equal(html, File.ReadAllText(path));
            Assert.Single(Directory.GetFiles(folder));

            var us = CommandLine.Run(["report", "velda-27", "--units", "us", "--out", path]);
            Assert.Equal(0, us.ExitCode);
            var american = Library().Replace(File.ReadAllText(path), "", 1);
            Assert.Contains("Net thrust, lbf", american);
            Assert.Contains("Pressure altitude, ft", american);
            Assert.DoesNotContain("Net thrust, kN", american);
            Assert.DoesNotContain("kg/s", american[..american.IndexOf("The definition as it was read</h2>")]);
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }

    [Fact]
    public void A_place_that_cannot_be_written_is_named()
    {
        var run = CommandLine.Run(["report", "velda-27", "--out", Path.Combine("no", "such", "folder", "r.html")]);
        Assert.Equal(2, run.ExitCode);
        Assert.Contains("--out", run.Error);
    }

    // The drawing library is the first script; charts follow with theirs.
    [GeneratedRegex("<script>.*?</script>", RegexOptions.Singleline)]
    private static partial Regex Library();

    [GeneratedRegex("class=\"cyclesim-chart\"")]
    private static partial Regex ChartElement();
}
