namespace CycleSim.Maps;

/// <summary>Makes a compressor's map by stacking its stages.</summary>
public static class StackedMap
{
    private const int Positions = 17;
    private const double LowestSpeed = 0.20,
        HighestSpeed = 1.10,
        Step = 0.025;

    // What a line must have to be of use: points, and pressure rise at surge over that at its choked end.
    private const int FewestPoints = 8;
    private const double LeastSpan = 1.2;

    /// <summary>
    /// Stacks the stages at every speed of the grid; below the lowest at which they go together the lines go on by the law of
    /// <see cref="CompressorShape"/>. Above design speed the map ends with the last speed at which they do.
    /// </summary>
    /// <exception cref="ArgumentException">The stages do not go together at design speed, or the design point is past surge.</exception>
    public static PlacedMap Build(StageStack stack)
    {
        var founded = Founded(stack);
        var lowest = founded.Keys.First();
        var speeds = new List<double>();
        for (var n = LowestSpeed; n < lowest - 1e-9; n = Grid(n + Step))
            speeds.Add(n);
        var lines = speeds.Select(n => Extend(founded[lowest], lowest, n)).Concat(founded.Values).ToArray();
        speeds.AddRange(founded.Keys);

        var betas = new double[Positions];
        for (var j = 0; j < Positions; j++)
            betas[j] = j / (Positions - 1.0);
        double[,] flow = new double[speeds.Count, Positions],
            ratio = new double[speeds.Count, Positions],
            efficiency = new double[speeds.Count, Positions];
        for (var i = 0; i < speeds.Count; i++)
        for (var j = 0; j < Positions; j++)
            (flow[i, j], ratio[i, j], efficiency[i, j]) = (lines[i][j, 0], lines[i][j, 1], lines[i][j, 2]);
        var map = new CompressorMap([.. speeds], betas, flow, ratio, efficiency);
        return new PlacedMap(map, DesignPosition(map, stack.Design.PressureRatio), lowest);
    }

    /// <summary>The lines from the lowest speed to the highest at which the stages go together, without a gap about 1.</summary>
    private static SortedDictionary<double, double[,]> Founded(StageStack stack)
    {
        var lines = new SortedDictionary<double, double[,]>();
        void Go(double from, double step)
        {
            for (var n = from; n > LowestSpeed - 1e-9 && n < HighestSpeed + 1e-9; n = Grid(n + step))
                if (Resample(stack.SpeedLine(n)) is { } line)
                    lines.Add(n, line);
                else
                    return;
        }

        Go(1.0, -Step);
        if (lines.Count == 0)
            throw new ArgumentException(
                "The stages do not go together at design speed: one of them stalls or chokes before the others work. "
                    + "Check flow coefficients and the tops of the characteristics."
            );
        Go(Grid(1.0 + Step), Step);
        return lines;
    }

    private static double Grid(double speed) => Math.Round(speed, 6);

    /// <summary>
    /// Puts a line on evenly spaced positions from choke (0) to surge (1), spaced by the length along it with flow and
    /// pressure ratio taken over their own size, so that the steep part gets its share. Null where the line is too short.
    /// </summary>
    private static double[,]? Resample(IReadOnlyList<(double Flow, StackPoint Point)> line)
    {
        if (line.Count < FewestPoints)
            return null;
        // From the choked end to surge; what lies below a quarter of the pressure rise is of no use to a working line.
        var most = line[0].Point.PressureRatio;
        var points = line.Reverse().SkipWhile(p => p.Point.PressureRatio - 1.0 < 0.25 * (most - 1.0)).ToList();
        if (points.Count < FewestPoints || most - 1.0 < LeastSpan * (points[0].Point.PressureRatio - 1.0))
            return null;
        var length = new double[points.Count];
        for (var k = 1; k < points.Count; k++)
        {
            var dw = (points[k].Flow - points[k - 1].Flow) / points[0].Flow;
            var dp = (points[k].Point.PressureRatio - points[k - 1].Point.PressureRatio) / most;
            length[k] = length[k - 1] + Math.Sqrt(25.0 * dw * dw + dp * dp);
        }

        var line3 = new double[Positions, 3];
        var at = 0;
        for (var j = 0; j < Positions; j++)
        {
            var wanted = length[^1] * j / (Positions - 1.0);
            while (at < points.Count - 2 && length[at + 1] < wanted)
                at++;
            var u = (wanted - length[at]) / (length[at + 1] - length[at]);
            double Between(double a, double b) => a + u * (b - a);
            line3[j, 0] = Between(points[at].Flow, points[at + 1].Flow);
            line3[j, 1] = Between(points[at].Point.PressureRatio, points[at + 1].Point.PressureRatio);
            line3[j, 2] = Between(points[at].Point.Efficiency, points[at + 1].Point.Efficiency);
        }

        return line3;
    }

    private static double[,] Extend(double[,] line, double fromSpeed, double toSpeed)
    {
        var extended = new double[Positions, 3];
        for (var j = 0; j < Positions; j++)
            (extended[j, 0], extended[j, 1], extended[j, 2]) = CompressorShape.CarryDown(
                line[j, 0],
                line[j, 1],
                line[j, 2],
                fromSpeed,
                toSpeed
            );
        return extended;
    }

    private static double DesignPosition(CompressorMap map, double pressureRatio)
    {
        double low = 0.0,
            high = 1.0;
        for (var i = 0; i < 60; i++)
        {
            var middle = 0.5 * (low + high);
            map.Read(1.0, middle, out var m);
            if (m.Value[1] + 1.0 < pressureRatio)
                low = middle;
            else
                high = middle;
        }

        return low < 0.999
            ? low
            : throw new ArgumentException("The design point lies on or past the surge line of its own stages.");
    }
}
