using System.Globalization;
using CycleSim.Engine;

namespace CycleSim.Matching;

/// <summary>Says in words why a point has no solution: which equation, limit, bound or map edge stood in the way.</summary>
public static class Diagnosis
{
    public static string Of(SizedEngine engine, Matcher matcher, MatchOutcome outcome)
    {
        var compressor =
            outcome.Culprit == 0 ? "fan"
            : outcome.Culprit > 0 && outcome.Culprit <= engine.Compressors.Length
                ? engine.Compressors[outcome.Culprit - 1].Name
            : "a compressor";
        var speed =
            outcome.Culprit >= 0 && outcome.Culprit <= engine.Compressors.Length
                ? matcher.Path.CorrectedSpeed[outcome.Culprit].Value
                : double.NaN;
        return outcome.Status switch
        {
            MatchStatus.Solved => "solved",
            MatchStatus.BeyondSurge => Text(
                $"the equations meet only beyond the surge line of {compressor}, at {speed * 100.0:F1} % corrected speed. Open a handling bleed there, or ask for a power nearer the design point."
            ),
            MatchStatus.BeyondChoke => Text(
                $"the equations meet only beyond the choked end of the speed line of {compressor}, at {speed * 100.0:F1} % corrected speed."
            ),
            MatchStatus.OutsideMapSpeed => Text(
                $"the equations meet only at {speed * 100.0:F1} % corrected speed of {compressor}, off its map."
            ),
            MatchStatus.NoThroughflow => Text(
                $"the equations meet only with the {(outcome.Culprit == 1 ? "bypass" : "core")} nozzle short of pressure or its flow reversed: too little power for this flight speed."
            ),
            MatchStatus.NoCombustion =>
                "the equations meet only without heat from the combustor or with more fuel than the air can burn.",
            _ => NotConverged(engine, matcher, outcome),
        };
    }

    private static string NotConverged(SizedEngine engine, Matcher matcher, MatchOutcome outcome)
    {
        var path = matcher.Path;
        var edges = new List<string>();
        var beta = engine.Spools.Length;
        if (engine.Fan is { } fan)
            Edge(fan, 0, matcher.Solution[beta++]);
        for (var k = 0; k < engine.Compressors.Length; k++)
            Edge(engine.Compressors[k], k + 1, matcher.Solution[beta++]);
        if (edges.Count == 0)
            edges.Add(Equation(engine, outcome.Culprit) + " could not be met");
        return Text(
            $"no solution; followed from the design point, {matcher.Progress * 100.0:F0} % of the way is solvable, to {path.NetThrust.Value / 1000.0:F2} kN at T4 = {path.CombustorExit.Tt.Value:F0} K, then {string.Join(" and ", edges)} (largest relative imbalance {outcome.Residual:E1})."
        );

        void Edge(ScaledCompressor compressor, int index, double position)
        {
            var speed = path.CorrectedSpeed[index].Value;
            if (speed > 0.99 * compressor.Map.HighestSpeed)
                edges.Add(Text($"{compressor.Name} reaches the top of its map ({speed * 100.0:F0} % corrected speed)"));
            else if (speed < 1.01 * compressor.Map.LowestSpeed)
                edges.Add(
                    Text($"{compressor.Name} reaches the bottom of its map ({speed * 100.0:F0} % corrected speed)")
                );
            if (position > 0.99)
                edges.Add(Text($"{compressor.Name} reaches its surge line ({speed * 100.0:F0} % corrected speed)"));
            else if (position < 0.01)
                edges.Add(Text($"{compressor.Name} chokes ({speed * 100.0:F0} % corrected speed)"));
        }
    }

    private static string Equation(SizedEngine engine, int row)
    {
        var names = new List<string>();
        for (var k = 1; k < engine.Compressors.Length; k++)
            names.Add($"the flow of {engine.Compressors[k].Name}");
        foreach (var turbine in engine.Turbines)
            names.Add($"the capacity of {turbine.Definition.Name}");
        if (engine.Definition.Mixer is not null)
            names.Add("the balance of static pressures in the mixer");
        names.Add("the flow of the core nozzle");
        if (engine.HasFan && engine.Definition.Mixer is null)
            names.Add("the flow of the bypass nozzle");
        return row >= 0 && row < names.Count ? names[row] : "the power setting";
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
