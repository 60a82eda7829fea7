using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>Distance of a working point from the surge line of its compressor's map, both common definitions.</summary>
public static class SurgeMargin
{
    /// <summary>
    /// Margins as ratios: at constant corrected flow, PRs/PR - 1 (usage of SAE ARP1420); at constant corrected speed,
    /// (PRs/Ws)/(PR/W) - 1 (usage of NASA stage reports). NaN where the surge line is not on the map.
    /// </summary>
    public static (double ConstantFlow, double ConstantSpeed) Of(ScaledCompressor compressor, double speed, double beta)
    {
        var (flow, ratio) = Point(compressor, speed, beta);
        var (surgeFlow, surgeRatio) = Point(compressor, speed, 1.0);
        var constantSpeed = surgeRatio / surgeFlow / (ratio / flow) - 1.0;

        double low = compressor.Map.LowestSpeed,
            high = compressor.Map.HighestSpeed;
        if (Point(compressor, low, 1.0).Flow > flow || Point(compressor, high, 1.0).Flow < flow)
            return (double.NaN, constantSpeed);
        for (var i = 0; i < 60; i++)
        {
            var middle = 0.5 * (low + high);
            if (Point(compressor, middle, 1.0).Flow < flow)
                low = middle;
            else
                high = middle;
        }

        return (Point(compressor, low, 1.0).Ratio / ratio - 1.0, constantSpeed);
    }

    /// <summary>Margin at constant corrected speed of compressor <paramref name="index"/> (0: fan) of a pass, with its derivatives.</summary>
    public static T ConstantSpeed<T>(SizedEngine engine, FlowPath<T> path, int index)
        where T : struct, IScalar<T>
    {
        var compressor = index == 0 ? engine.Fan! : engine.Compressors[index - 1];
        var beta = path.Position(index);
        var speed = path.CorrectedSpeed[index];
        return Load(compressor, speed, T.Constant(1.0)) / Load(compressor, speed, beta) - 1.0;
    }

    // Pressure ratio over corrected flow: rises along a speed line towards surge.
    private static T Load<T>(ScaledCompressor compressor, in T speed, in T beta)
        where T : struct, IScalar<T>
    {
        compressor.Map.Read(speed.Value, beta.Value, out var m);
        var flow = T.Chain(m.Value[0], speed, m.PerSpeed[0], beta, m.PerBeta[0]) * compressor.FlowScale;
        var rise = T.Chain(m.Value[1], speed, m.PerSpeed[1], beta, m.PerBeta[1]) * compressor.RiseScale;
        return (rise + 1.0) / flow;
    }

    private static (double Flow, double Ratio) Point(ScaledCompressor compressor, double speed, double beta)
    {
        compressor.Map.Read(speed, beta, out var m);
        return (compressor.FlowScale * m.Value[0], 1.0 + compressor.RiseScale * m.Value[1]);
    }
}
