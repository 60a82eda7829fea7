using System.Globalization;
using CycleSim.Maps;

namespace CycleSim.Tests.Maps;

public class CompressorMapTableTests
{
    [Fact]
    public void A_table_written_and_read_is_the_same_map()
    {
        var map = CompressorShape.Build(12.0);
        var text = CompressorMapTable.Write(map, "high-pressure compressor\ngeneral shape", 0.86);
        Assert.StartsWith(
            "# high-pressure compressor\n# general shape\nspeed,beta,flow,pressure_ratio,efficiency\n",
            text
        );
        var read = CompressorMapTable.Read(text, "map.csv");
        Assert.Equal(text, CompressorMapTable.Write(read.Map, "high-pressure compressor\ngeneral shape"));
        foreach (var (speed, beta) in new[] { (0.33, 0.1), (0.71, 0.52), (0.987, 0.6), (1.19, 0.97) })
        {
            map.Read(speed, beta, out var before);
            read.Map.Read(speed, beta, out var after);
            Assert.Equal(before.Value[0], after.Value[0], 1e-8);
            Assert.Equal(before.Value[1], after.Value[1], 1e-7);
            Assert.Equal(0.86 * before.Value[2], after.Value[2], 1e-8);
        }
    }

    [Fact]
    public void The_design_point_goes_where_the_design_speed_is_most_efficient() =>
        Assert.Equal(0.6, CompressorMapTable.Read(string.Join('\n', Table()), "map.csv").DesignBeta, 0.03);

    [Fact]
    public void Rows_may_come_in_any_order_with_comments_blank_lines_and_carriage_returns()
    {
        var table = Table();
        var mixed = table.Take(2).Concat(table.Skip(2).Reverse()).Append("").Append("# end");
        Assert.Equal(
            Write(CompressorMapTable.Read(string.Join('\n', table), "map.csv")),
            Write(CompressorMapTable.Read(string.Join("\r\n", mixed), "map.csv"))
        );

        static string Write(PlacedMap placed) => CompressorMapTable.Write(placed.Map);
    }

    // Line 2 is the header; line 3 the row of speed 0.4, beta 0; from there betas 0, 0.125 to 1, then the next speed.
    [Theory]
    [InlineData(2, "speed,beta,flow,ratio,efficiency", 2, "the header must read speed,beta,flow,pressure_ratio")]
    [InlineData(3, "0.40,0,one,1.1,0.7", 3, "is not five numbers")]
    [InlineData(3, "0.40,0,0.2,1.1", 3, "is not five numbers")]
    [InlineData(3, "0.40,0,NaN,1.1,0.7", 3, "is not five numbers")]
    [InlineData(3, "0.40,0,-0.2,1.1,0.7", 3, "flow must be above 0; it is -0.2")]
    [InlineData(3, "0.40,-0.1,0.2,1.1,0.7", 3, "beta must lie between 0 and 1")]
    [InlineData(3, "0.40,0,0.2,1,0.7", 3, "pressure_ratio must be above 1; it is 1.")]
    [InlineData(3, "0.40,0,0.2,1.1,86", 3, "efficiency must lie above 0 and at most at 1; it is 86")]
    [InlineData(4, "0.40,0,0.2,1.1,0.7", 4, "gives speed 0.4, beta 0 again; the first is in line 3")]
    [InlineData(4, "# left out", 11, "no row for speed 0.4, beta 0.125")]
    [InlineData(4, "0.40,0.12,0.2,1.1,0.7", 4, "beta 0.12 is given at few speeds")]
    [InlineData(4, "0.41,0.125,0.2,1.1,0.7", 4, "speed 0.41 has few of the betas")]
    [InlineData(4, "0.40,0.125,5,1.3,0.7", 4, "the flow rises with beta along the line of speed 0.4")]
    [InlineData(3, "0.40,0,0.3,9,0.7", 4, "the pressure ratio does not rise with beta")]
    [InlineData(3, "0.40,0,5,1.04,0.7", 12, "the line of speed 0.45 crosses that of 0.4 (line 3) at beta 0")]
    public void A_table_that_cannot_be_a_map_is_refused_with_its_line(int line, string text, int at, string message)
    {
        var lines = Table();
        lines[line - 1] = text;
        var error = Refused(lines);
        Assert.Contains(error.Problems, p => p.Line == at && p.Message.Contains(message));
        Assert.Contains($"map.csv, line {at}: ", error.Message);
    }

    [Fact]
    public void Every_breach_of_a_kind_is_listed_at_once()
    {
        var lines = Table();
        (lines[5], lines[9]) = ("0.40,0.375,0.2,0.5,0.7", "0.40,0.875,0.2,2,1.7");
        Assert.Equal([6, 10], Refused(lines).Problems.Select(p => p.Line));
    }

    [Fact]
    public void A_table_without_header_rows_or_extent_is_refused()
    {
        Assert.Contains("has no header", Refused(["# nothing"]).Message);
        Assert.Contains("has no rows", Refused(Table().Take(2)).Message);
        Assert.Contains("at least four speeds", Refused(Table().Take(2 + 3 * 9)).Message);
        Assert.Contains("must cover speed 1", Refused(Table().Take(2 + 9 * 9)).Message);
        Assert.Contains("from 0 to 0.875", Refused(Table().Where((_, i) => i < 2 || (i - 2) % 9 != 8)).Message);
    }

    // Two neighbouring rows at an efficiency of 1 pass one by one; the curve through them goes higher.
    [Fact]
    public void Curves_that_leave_the_bounds_between_the_rows_are_refused()
    {
        var lines = Table();
        foreach (var index in new[] { 2 + 9 * 6 + 4, 2 + 9 * 6 + 5 })
            lines[index] = lines[index][..(lines[index].LastIndexOf(',') + 1)] + "1";
        var error = Refused(lines);
        Assert.Contains(
            error.Problems,
            p => p.Line == 2 + 9 * 6 + 5 && p.Message.Contains("leave the efficiencies from 0 to 1")
        );
    }

    // The line of speed 0.7 is moved up to just below that of 0.75: each row still rises with speed, the curve bends back.
    [Fact]
    public void Curves_that_cross_between_the_rows_are_refused()
    {
        var lines = Table();
        for (var j = 0; j < 9; j++)
        {
            var (moved, next) = (lines[2 + 9 * 6 + j].Split(','), lines[2 + 9 * 7 + j].Split(','));
            moved[2] = (0.9999 * double.Parse(next[2], CultureInfo.InvariantCulture)).ToString(
                CultureInfo.InvariantCulture
            );
            lines[2 + 9 * 6 + j] = string.Join(',', moved);
        }

        Assert.All(Refused(lines).Problems, p => Assert.Contains("cross, flow or pressure ratio falling", p.Message));
    }

    private static MapTableException Refused(IEnumerable<string> lines) =>
        Assert.Throws<MapTableException>(() => CompressorMapTable.Read(string.Join('\n', lines), "map.csv"));

    // Comment, header, rows from the general shape at a pressure ratio of 12, speeds from 0.4, nine betas: a table like any user's.
    private static string[] Table()
    {
        var map = CompressorShape.Build(12.0);
        var lines = new List<string> { "# test map", "speed,beta,flow,pressure_ratio,efficiency" };
        foreach (var speed in map.Speeds.Where(s => s > 0.39))
        foreach (var beta in map.Betas.Where((_, j) => j % 2 == 0))
        {
            map.Read(speed, beta, out var m);
            lines.Add(
                string.Create(
                    CultureInfo.InvariantCulture,
                    $"{speed:F2},{beta},{m.Value[0]:F8},{m.Value[1] + 1.0:F8},{0.86 * m.Value[2]:F8}"
                )
            );
        }

        return [.. lines];
    }
}
