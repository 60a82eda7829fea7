using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Scalars;

namespace CycleSim.Benchmarks;

/// <summary>What a whole sweep cost besides time.</summary>
internal struct Tally
{
    public int Failures,
        OtherRoots,
        MostIterations;

    public long Iterations,
        PlainEvaluations,
        DualEvaluations;

    /// <summary>Largest difference of an unknown from the solution known beforehand.</summary>
    public double Difference;
}

/// <summary>One method run over the sweep, each point started from the last solution (warm) or the design point (cold).</summary>
internal abstract class Contestant(string method, Sweep sweep, bool warm)
{
    /// <summary>Unknowns further apart than this are another solution of the equations, off the maps.</summary>
    private const double SameRoot = 1e-6;

    private readonly double[] _last = new double[sweep.Engine.UnknownCount];
    private readonly double[] _solution = new double[sweep.Engine.UnknownCount];

    public string Method { get; } = method;

    public bool Warm { get; } = warm;

    public Sweep Sweep => sweep;

    protected SizedEngine Engine => sweep.Engine;

    public Tally RunSweep()
    {
        var tally = new Tally();
        Engine.DesignUnknowns.CopyTo(_last, 0);
        for (var i = 0; i < sweep.Points.Count; i++)
        {
            var point = sweep.Points[i];
            var iterations = tally.Iterations;
            var solved = Solve(point, Warm ? _last : Engine.DesignUnknowns, _solution, ref tally);
            tally.MostIterations = Math.Max(tally.MostIterations, (int)(tally.Iterations - iterations));
            var difference = 0.0;
            for (var k = 0; k < _solution.Length; k++)
                difference = Math.Max(difference, Math.Abs(_solution[k] - point.Solution[k]));
            if (!solved || difference > SameRoot)
            {
                tally.Failures++;
                tally.OtherRoots += solved ? 1 : 0;
                continue;
            }

            tally.Difference = Math.Max(tally.Difference, difference);
            _solution.CopyTo(_last, 0);
        }

        return tally;
    }

    /// <summary>Solves one point to <see cref="Matcher.Tolerance"/>; says whether it could.</summary>
    protected abstract bool Solve(SweepPoint point, double[] start, double[] solution, ref Tally tally);
}

/// <summary>The program's own solver.</summary>
internal sealed class MatcherContestant(Sweep sweep, bool warm) : Contestant("Matcher", sweep, warm)
{
    private readonly Matcher _matcher = new(sweep.Engine);

    protected override bool Solve(SweepPoint point, double[] start, double[] solution, ref Tally tally)
    {
        point.Inputs.CopyTo(_matcher.Inputs, 0);
        var outcome = Warm ? _matcher.SolveNext(point.Problem) : _matcher.Solve(point.Problem, start);
        _matcher.Solution.CopyTo(solution);
        tally.Iterations += outcome.Iterations;
        tally.DualEvaluations += outcome.Jacobians;
        tally.PlainEvaluations += outcome.Passes;
        return outcome.Solved;
    }
}

/// <summary>The same equations as the matcher's without derivatives: imbalances of the flow path, then the thrust.</summary>
internal sealed class PlainResidual(SizedEngine engine)
{
    private readonly FlowPath<Plain> _path = new(engine);
    private double _thrust;

    public int Count { get; } = engine.UnknownCount;

    public void Load(SweepPoint point)
    {
        _thrust = point.Thrust;
        for (var i = 0; i < point.Inputs.Length; i++)
            _path.Inputs[i] = Plain.Constant(point.Inputs[i]);
    }

    /// <summary>Fills the residual and returns its largest magnitude; what has no value becomes a large residual.</summary>
    public double Evaluate(ReadOnlySpan<double> unknowns, Span<double> residual)
    {
        const double NoValue = 10.0;
        for (var i = 0; i < Count; i++)
            _path.Unknowns[i] = Plain.Constant(unknowns[i]);
        _path.Evaluate();
        for (var i = 0; i < Count - 1; i++)
            residual[i] = _path.Residuals[i].Value;
        residual[Count - 1] = _path.NetThrust.Value / _thrust - 1.0;
        var largest = 0.0;
        for (var i = 0; i < Count; i++)
        {
            if (!double.IsFinite(residual[i]))
                residual[i] = NoValue;
            largest = Math.Max(largest, Math.Abs(residual[i]));
        }

        return largest;
    }
}
