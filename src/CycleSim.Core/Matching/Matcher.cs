using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Matching;

/// <summary>
/// The solver: Newton's method with the exact Jacobian on the imbalances of the flow path and the closing conditions of
/// a <see cref="MatchingProblem"/>. One per thread; after construction a solution allocates nothing.
/// </summary>
/// <remarks>
/// A trial point may leave the maps (they go on straight) so that the way back stays visible; a solution may not. Steps
/// are shortened to what each kind of unknown can bear and halved while they make things worse. Where Newton from the
/// given start fails, the solution is followed from the design point along a straight path of inputs and
/// conditions.
/// </remarks>
public sealed class Matcher
{
    /// <summary>A point is solved when no relative imbalance exceeds this.</summary>
    public const double Tolerance = 1e-10;

    private const int MostIterations = 30;

    private readonly FlowPath<Dual> _path;
    private readonly double[] _x = new double[Dual.Width];
    private readonly double[] _trial = new double[Dual.Width];
    private readonly double[] _largestStep = new double[Dual.Width];
    private readonly double[] _lower = new double[Dual.Width];
    private readonly double[] _upper = new double[Dual.Width];
    private readonly double[] _residual = new double[Dual.Width];
    private readonly Vector512<double>[] _jacobian = new Vector512<double>[Dual.Width];
    private readonly double[] _shift = new double[Dual.Width];
    private readonly double[] _fullShift = new double[Dual.Width];
    private readonly double[] _wantedInputs;
    private readonly double[] _coldStart = new double[Dual.Width];
    private readonly double[] _pathStart = new double[Dual.Width];
    private int _n;
    private MatchingProblem _problem;

    public Matcher(SizedEngine engine)
    {
        Engine = engine;
        _path = new FlowPath<Dual>(engine);
        Inputs = (double[])engine.DesignInputs.Clone();
        _wantedInputs = new double[Inputs.Length];
        _problem = MatchingProblem.For(Quantity.T4, engine.Definition.Design.CombustorExitTemperature);
        if (engine.UnknownCount > Dual.Width)
            throw new ArgumentException("an engine has at most three spools and four compressors", nameof(engine));
    }

    public SizedEngine Engine { get; }

    /// <summary>Inputs of the next solution; freed ones hold their solved value afterwards.</summary>
    public double[] Inputs { get; }

    /// <summary>Unknowns of the last solution followed by the freed inputs (scaled).</summary>
    public ReadOnlySpan<double> Solution => _x.AsSpan(0, _n);

    /// <summary>The differentiated pass at the last point evaluated.</summary>
    public FlowPath<Dual> Path => _path;

    /// <summary>Solves from the design point.</summary>
    public MatchOutcome Solve(MatchingProblem problem) => Solve(problem, Engine.DesignUnknowns);

    /// <summary>Solves from a start: the unknowns of a solved point near by (spool speeds, positions, T4/1000).</summary>
    public MatchOutcome Solve(MatchingProblem problem, ReadOnlySpan<double> start)
    {
        Prepare(problem, start);
        Array.Clear(_shift);
        var outcome = Newton();
        if (outcome.Status == MatchStatus.NotConverged && ColdStart.Guess(Engine, Inputs, problem, _coldStart))
        {
            var (iterations, evaluations) = (outcome.Iterations, outcome.Evaluations);
            Prepare(problem, _coldStart);
            outcome = Newton();
            outcome = outcome with
            {
                Iterations = outcome.Iterations + iterations,
                Evaluations = outcome.Evaluations + evaluations,
            };
        }

        if (outcome.Status == MatchStatus.NotConverged)
        {
            var followed = Follow(outcome.Iterations, outcome.Evaluations);
            if (followed.Status != MatchStatus.NotConverged)
                outcome = followed;
            else
                outcome = followed with { Residual = double.IsFinite(outcome.Residual) ? outcome.Residual : 1.0 };
        }

        StoreFreed();
        return outcome.Status == MatchStatus.Solved ? Admissible(outcome) : outcome;
    }

    private void Prepare(MatchingProblem problem, ReadOnlySpan<double> start)
    {
        _problem = problem;
        var m = Engine.UnknownCount;
        _n = m + problem.Freed.Length;
        if (_n > Dual.Width)
            throw new ArgumentException(
                $"{problem.Freed.Length} freed inputs are more than this engine's equations leave room for "
                    + $"({Dual.Width - m})."
            );
        if (problem.ConditionCount != problem.Freed.Length + 1)
            throw new ArgumentException("the number of conditions must be that of the freed inputs plus one");
        start[..m].CopyTo(_x);
        var spools = Engine.Spools.Length;
        for (var i = 0; i < m; i++)
        {
            var speed = i < spools;
            var temperature = i == m - 1;
            _largestStep[i] =
                speed ? 0.15
                : temperature ? 0.35
                : 0.4;
            _lower[i] =
                speed ? 0.05
                : temperature ? 0.25
                : -0.6;
            _upper[i] =
                speed ? 1.6
                : temperature ? 2.9
                : 1.6;
        }

        for (var k = 0; k < problem.Freed.Length; k++)
        {
            var scale = FreedScale(problem.Freed[k]);
            _x[m + k] = Inputs[problem.Freed[k]] / scale;
            _largestStep[m + k] = 0.15;
            _lower[m + k] = problem.Freed[k] is InputLayout.Temperature ? 0.5 : -2.0;
            _upper[m + k] = problem.Freed[k] is InputLayout.Temperature ? 1.5 : 5.0;
        }
    }

    // A freed input is solved for in units in which it is of order one.
    private double FreedScale(int input) =>
        input switch
        {
            InputLayout.Temperature => 288.15,
            InputLayout.Pressure => 101325.0,
            InputLayout.SpecificHumidity => 0.05,
            _ when input >= Engine.Layout.PowerOfftake(0) && input < Engine.Layout.PortFraction(0) => 1e6,
            _ => 1.0,
        };

    private void StoreFreed()
    {
        var m = Engine.UnknownCount;
        for (var k = 0; k < _problem.Freed.Length; k++)
            Inputs[_problem.Freed[k]] = _x[m + k] * FreedScale(_problem.Freed[k]);
    }

    private MatchOutcome Newton()
    {
        LoadInputs();
        var norm = EvaluateAt(_x);
        var evaluations = 1;
        Span<double> step = stackalloc double[Dual.Width];
        Span<Vector512<double>> rows = stackalloc Vector512<double>[Dual.Width];
        var iteration = 0;
        for (; iteration < MostIterations; iteration++)
        {
            if (norm <= Tolerance)
                return new MatchOutcome(MatchStatus.Solved, norm, iteration, evaluations, -1);
            if (!double.IsFinite(norm))
                break;
            _residual.AsSpan(0, _n).CopyTo(step);
            _jacobian.AsSpan(0, _n).CopyTo(rows);
            if (!LinearSystem.Solve(rows, step, _n))
                break;
            var share = 1.0;
            for (var i = 0; i < _n; i++)
                if (Math.Abs(step[i]) * share > _largestStep[i])
                    share = _largestStep[i] / Math.Abs(step[i]);

            var better = false;
            for (var halving = 0; halving < 8; halving++)
            {
                for (var i = 0; i < _n; i++)
                    _trial[i] = Math.Clamp(_x[i] - share * step[i], _lower[i], _upper[i]);
                var next = EvaluateAt(_trial);
                evaluations++;
                // A little growth is let pass: residuals of choked passages rise before they fall.
                if (next < norm * (halving == 0 ? 1.5 : 1.0 - 0.1 * share))
                {
                    _trial.AsSpan(0, _n).CopyTo(_x);
                    norm = next;
                    better = true;
                    break;
                }

                share *= 0.4;
            }

            if (!better)
            {
                norm = EvaluateAt(_x);
                break;
            }
        }

        return norm <= Tolerance
            ? new MatchOutcome(MatchStatus.Solved, norm, iteration, evaluations, -1)
            : new MatchOutcome(MatchStatus.NotConverged, norm, iteration, evaluations, Worst());
    }

    /// <summary>
    /// Continuation from the design point: inputs move in a straight line to the wanted ones while the closing conditions
    /// are let in at the rate at which the line is walked.
    /// </summary>
    private MatchOutcome Follow(int iterations, int evaluations)
    {
        Array.Copy(Inputs, _wantedInputs, Inputs.Length);
        var m = Engine.UnknownCount;
        Engine.DesignUnknowns.CopyTo(_x, 0);
        Array.Copy(Engine.DesignInputs, Inputs, Inputs.Length);
        for (var k = 0; k < _problem.Freed.Length; k++)
            _x[m + k] = Inputs[_problem.Freed[k]] / FreedScale(_problem.Freed[k]);
        Array.Clear(_shift);
        LoadInputs();
        EvaluateAt(_x);
        for (var i = m - 1; i < _n; i++)
            _fullShift[i] = _residual[i];

        double done = 0.0,
            stride = 0.25;
        var outcome = new MatchOutcome(MatchStatus.NotConverged, 1.0, iterations, evaluations, -1);
        while (done < 1.0 && stride > 1e-4)
        {
            _x.AsSpan(0, _n).CopyTo(_pathStart);
            var next = Math.Min(1.0, done + stride);
            for (var i = m - 1; i < _n; i++)
                _shift[i] = (1.0 - next) * _fullShift[i];
            for (var i = 0; i < Inputs.Length; i++)
                Inputs[i] = Engine.DesignInputs[i] + next * (_wantedInputs[i] - Engine.DesignInputs[i]);
            var local = Newton();
            iterations += local.Iterations;
            evaluations += local.Evaluations;
            outcome = local with { Iterations = iterations, Evaluations = evaluations };
            if (local.Solved)
            {
                done = next;
                stride *= 1.6;
            }
            else
            {
                _pathStart.AsSpan(0, _n).CopyTo(_x);
                stride *= 0.4;
            }
        }

        Array.Copy(_wantedInputs, Inputs, Inputs.Length);
        Progress = done;
        return outcome;
    }

    /// <summary>How far (0 to 1) the last continuation from the design point got.</summary>
    public double Progress { get; private set; } = 1.0;

    private void LoadInputs()
    {
        for (var i = 0; i < Inputs.Length; i++)
            _path.Inputs[i] = Dual.Constant(Inputs[i]);
    }

    /// <summary>Residuals and Jacobian at a point; returns the largest relative imbalance.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private double EvaluateAt(double[] x)
    {
        var m = Engine.UnknownCount;
        for (var i = 0; i < m; i++)
            _path.Unknowns[i] = Dual.Variable(x[i], i);
        for (var k = 0; k < _problem.Freed.Length; k++)
        {
            var scale = FreedScale(_problem.Freed[k]);
            _path.Inputs[_problem.Freed[k]] = Dual.Variable(x[m + k], m + k) * scale;
        }

        _path.Evaluate();
        var norm = 0.0;
        for (var i = 0; i < m - 1; i++)
            norm = Math.Max(norm, Store(i, _path.Residuals[i]));
        var row = m - 1;
        foreach (ref readonly var condition in _problem.Prescribed.AsSpan())
            norm = Math.Max(norm, Store(row++, Relative(condition)));
        if (_problem.FirstOf.Length > 0)
            norm = Math.Max(norm, Store(row, MostExceeded()));

        return norm;
    }

    /// <summary>The problem last solved.</summary>
    public MatchingProblem Problem => _problem;

    /// <summary>
    /// Residuals of the last solution with derivatives with respect to eight inputs from <paramref name="first"/> on, the
    /// unknowns held; the pass then carries the same derivatives of every output.
    /// </summary>
    internal void DifferentiateByInputs(int first, Span<Dual> residuals)
    {
        LoadInputs();
        for (var i = 0; i < Engine.UnknownCount; i++)
            _path.Unknowns[i] = Dual.Constant(_x[i]);
        for (var i = 0; i < Dual.Width && first + i < Inputs.Length; i++)
            _path.Inputs[first + i] = Dual.Variable(Inputs[first + i], i);
        _path.Evaluate();
        _path.Residuals.CopyTo(residuals);
        ClosingResiduals(residuals[(Engine.UnknownCount - 1)..]);
    }

    /// <summary>The same with respect to the unknowns and freed inputs.</summary>
    internal void DifferentiateByUnknowns(Span<Dual> residuals)
    {
        LoadInputs();
        EvaluateAt(_x);
        _path.Residuals.CopyTo(residuals);
        ClosingResiduals(residuals[(Engine.UnknownCount - 1)..]);
    }

    private void ClosingResiduals(Span<Dual> residuals)
    {
        var row = 0;
        foreach (ref readonly var condition in _problem.Prescribed.AsSpan())
            residuals[row++] = Relative(condition);
        if (_problem.FirstOf.Length > 0)
            residuals[row] = MostExceeded();
    }

    private Dual MostExceeded()
    {
        var worst = Relative(_problem.FirstOf[0]);
        for (var k = 1; k < _problem.FirstOf.Length; k++)
            worst = Dual.Max(worst, Relative(_problem.FirstOf[k]));
        return worst;
    }

    private Dual Relative(in Limit condition)
    {
        var output = _path.Output(condition.Quantity);
        return condition.Value == 0.0 ? output : output / condition.Value - 1.0;
    }

    private double Store(int row, in Dual residual)
    {
        _residual[row] = residual.Value - _shift[row];
        _jacobian[row] = residual.Partials;
        return Math.Abs(_residual[row]);
    }

    private int Worst()
    {
        var worst = 0;
        for (var i = 1; i < _n; i++)
            if (Math.Abs(_residual[i]) > Math.Abs(_residual[worst]))
                worst = i;
        return worst;
    }

    /// <summary>Of the limits of the problem's rating, the one that is met; -1 without a rating.</summary>
    public int GoverningLimit()
    {
        var governing = -1;
        var largest = double.NegativeInfinity;
        for (var k = 0; k < _problem.FirstOf.Length; k++)
        {
            var exceedance = Relative(_problem.FirstOf[k]).Value;
            if (exceedance > largest)
                (governing, largest) = (k, exceedance);
        }

        return governing;
    }

    private MatchOutcome Admissible(MatchOutcome outcome)
    {
        var beta = Engine.Spools.Length;
        if (Engine.Fan is { } fan && Refusal(fan, 0, _x[beta++]) is var fanRefusal and not MatchStatus.Solved)
            return outcome with { Status = fanRefusal, Culprit = 0 };
        for (var k = 0; k < Engine.Compressors.Length; k++)
            if (Refusal(Engine.Compressors[k], k + 1, _x[beta++]) is var refusal and not MatchStatus.Solved)
                return outcome with { Status = refusal, Culprit = k + 1 };
        var ambient = _path.Inputs[InputLayout.Pressure].Value;
        var last = Engine.Definition.Mixer is null ? _path.CoreExit.P.Value : _path.Mixed.P.Value;
        if (!(last > ambient) || !(_path.CombustorInlet.W.Value > 0.0))
            return outcome with { Status = MatchStatus.NoThroughflow, Culprit = 0 };
        if (Engine.HasFan && (!(_path.BypassExit.P.Value > ambient) || !(_path.FanTip.W.Value > 0.0)))
            return outcome with { Status = MatchStatus.NoThroughflow, Culprit = 1 };
        var far = _path.FuelFlow.Value / _path.CombustorInlet.W.Value;
        return far > 0.0 && far < Engine.Definition.Gas.StoichiometricFuelAirRatio
            ? outcome
            : outcome with
            {
                Status = MatchStatus.NoCombustion,
            };
    }

    private MatchStatus Refusal(ScaledCompressor compressor, int index, double beta)
    {
        var speed = _path.CorrectedSpeed[index].Value;
        if (speed < compressor.Map.LowestSpeed || speed > compressor.Map.HighestSpeed)
            return MatchStatus.OutsideMapSpeed;
        return beta > 1.0 ? MatchStatus.BeyondSurge
            : beta < 0.0 ? MatchStatus.BeyondChoke
            : MatchStatus.Solved;
    }
}
