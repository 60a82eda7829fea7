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

    // A stride of the continuation that takes more steps than this is too long.
    private const int MostIterationsOfStride = 8;

    // A continuation whose strides have become this short stands before a place without solution.
    private const double ShortestStride = 2e-3;

    // Below this imbalance one or two steps with the Jacobian at hand are expected to solve the point.
    private const double NearlySolved = 2e-4;

    private readonly Equations<Dual> _differentiated;
    private readonly Equations<Plain> _plain;
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
    private readonly double[] _firstStep = new double[Dual.Width];
    private readonly double[] _predicted = new double[Dual.Width];
    private readonly double[] _curvature = new double[Dual.Width];
    private bool _curvatureKnown;
    private int _n;
    private bool _solved;
    private MatchingProblem _problem;

    public Matcher(SizedEngine engine)
    {
        Engine = engine;
        _differentiated = new Equations<Dual>(engine);
        _plain = new Equations<Plain>(engine);
        Inputs = (double[])engine.DesignInputs.Clone();
        _wantedInputs = new double[Inputs.Length];
        _problem = MatchingProblem.For(Quantity.T4, engine.Definition.Design.CombustorExitTemperature);
        if (engine.UnknownCount > Dual.Width)
            throw new ArgumentException("an engine has at most three spools and four compressors", nameof(engine));
    }

    public SizedEngine Engine { get; }

    /// <summary>Inputs of the next solution; freed ones hold their solved value afterwards.</summary>
    public double[] Inputs { get; }

    /// <summary>
    /// Unknowns of the last solution followed by the freed inputs (scaled); the power of a held spool in place of its speed.
    /// </summary>
    public ReadOnlySpan<double> Solution => _x.AsSpan(0, _n);

    /// <summary>The pass at the last solution, or where the last attempt ended.</summary>
    public FlowPath<Plain> Path => _plain.Path;

    /// <summary>Solves from the design point.</summary>
    public MatchOutcome Solve(MatchingProblem problem) => Solve(problem, Engine.DesignUnknowns);

    /// <summary>Solves from a start: the unknowns of a solved point near by (spool speeds, positions, T4/1000).</summary>
    public MatchOutcome Solve(MatchingProblem problem, ReadOnlySpan<double> start)
    {
        Prepare(problem, start);
        // What was met on another line says nothing about the one that begins here.
        _curvatureKnown = false;
        return Finish(Newton());
    }

    /// <summary>
    /// Solves from the solution just found: the quickest way along a line of neighbouring points. The last Jacobian gives
    /// the first step; where that step goes on as the one before it did, what curvature added there is added here too. From
    /// the design point where nothing has been solved yet.
    /// </summary>
    public MatchOutcome SolveNext(MatchingProblem problem)
    {
        if (!_solved || problem.HeldSpeeds.Length > 0 || _problem.HeldSpeeds.Length > 0)
            return Solve(problem);
        var sameConditions = Rescale(problem);
        Prepare(problem, _x.AsSpan(0, Engine.UnknownCount));
        if (!sameConditions || !Predict(out var passes))
            return Finish(Newton());
        var outcome = Finish(Newton());
        _curvatureKnown = outcome.Solved;
        for (var i = 0; i < _n; i++)
            _curvature[i] = _x[i] - _predicted[i];
        return outcome with { Iterations = outcome.Iterations + 1, Passes = outcome.Passes + passes };
    }

    /// <summary>Moves to where the last Jacobian, and the curvature met on the last step, expect the solution.</summary>
    private bool Predict(out int passes)
    {
        passes = 0;
        // With the inputs as they were, the pass at the last solution still stands; only what it is compared with has changed.
        if (_plain.Load(Inputs))
        {
            EvaluatePlain(_x);
            passes = 1;
        }
        else
        {
            _plain.Close(_problem);
            StorePlain();
        }

        Span<double> step = stackalloc double[Dual.Width];
        if (!NewtonStep(step, out var share) || share < 1.0)
            return false;
        double along = 0.0,
            last = 0.0,
            whole = 0.0;
        for (var i = 0; i < _n; i++)
        {
            along += step[i] * _firstStep[i];
            last += _firstStep[i] * _firstStep[i];
            whole += step[i] * step[i];
        }

        // Curvature grows with the square of the step; it is carried on only where the direction stays about the same.
        var stretch = along / last;
        var carry = _curvatureKnown && stretch > 0.0 && along * along > 0.9 * last * whole ? stretch * stretch : 0.0;
        for (var i = 0; i < _n; i++)
        {
            _firstStep[i] = step[i];
            _predicted[i] = _x[i] - step[i];
            _x[i] = Math.Clamp(_predicted[i] + (carry > 0.0 ? carry * _curvature[i] : 0.0), _lower[i], _upper[i]);
        }

        return true;
    }

    private MatchOutcome Finish(MatchOutcome outcome)
    {
        // The other starts are settled points of their own speeds; held ones are followed from near by or not at all.
        var follows = _problem.HeldSpeeds.Length == 0;
        if (follows && outcome.Status == MatchStatus.NotConverged)
        {
            Prepare(_problem, Engine.DesignUnknowns);
            outcome = After(outcome, Newton());
        }

        if (
            follows
            && outcome.Status == MatchStatus.NotConverged
            && ColdStart.Guess(Engine, Inputs, _problem, _coldStart)
        )
        {
            Prepare(_problem, _coldStart);
            outcome = After(outcome, Newton());
        }

        if (follows && outcome.Status == MatchStatus.NotConverged)
        {
            var followed = After(outcome, Follow());
            outcome =
                followed.Status == MatchStatus.NotConverged
                    ? followed with
                    {
                        Residual = double.IsFinite(outcome.Residual) ? outcome.Residual : 1.0,
                    }
                    : followed;
        }

        StoreFreed();
        _solved = outcome.Solved;
        return outcome.Solved ? Admissible(outcome) : outcome;
    }

    private static MatchOutcome After(MatchOutcome first, MatchOutcome then) =>
        then with
        {
            Iterations = first.Iterations + then.Iterations,
            Jacobians = first.Jacobians + then.Jacobians,
            Passes = first.Passes + then.Passes,
        };

    /// <summary>
    /// Fits the rows of the last Jacobian that belong to relative conditions to the values of a new problem; false where the
    /// two problems do not have the same conditions.
    /// </summary>
    private bool Rescale(MatchingProblem next)
    {
        var last = _problem;
        if (
            last.Prescribed.Length != next.Prescribed.Length
            || last.FirstOf.Length != next.FirstOf.Length
            || !last.Freed.AsSpan().SequenceEqual(next.Freed)
        )
            return false;
        for (var k = 0; k < next.Prescribed.Length; k++)
        {
            ref readonly var was = ref last.Prescribed[k];
            ref readonly var becomes = ref next.Prescribed[k];
            if (was.Quantity != becomes.Quantity)
                return false;
            if (was.Value != 0.0 && becomes.Value != 0.0)
                _jacobian[Engine.UnknownCount - 1 + k] *= was.Value / becomes.Value;
        }

        return true;
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
        Array.Clear(_shift);
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

        if (problem.HeldSpeeds.Length is not 0 and var held && held != spools)
            throw new ArgumentException($"{held} speeds are held; this engine has {spools} spools.");
        for (var k = 0; k < problem.HeldSpeeds.Length; k++)
        {
            var spare = Engine.Layout.PowerOfftake(k);
            // Scaled power is in MW; no spool of an engine has 1 MJ to spare for each kilogram of its air.
            var large = Engine.DesignMassFlow;
            _x[k] = Inputs[spare] / Engine.Layout.Scale(spare);
            (_largestStep[k], _lower[k], _upper[k]) = (0.1 * large, -large, large);
        }

        for (var k = 0; k < problem.Freed.Length; k++)
        {
            var scale = Engine.Layout.Scale(problem.Freed[k]);
            _x[m + k] = Inputs[problem.Freed[k]] / scale;
            _largestStep[m + k] = 0.15;
            _lower[m + k] = problem.Freed[k] is InputLayout.Temperature ? 0.5 : -2.0;
            _upper[m + k] = problem.Freed[k] is InputLayout.Temperature ? 1.5 : 5.0;
        }
    }

    private void StoreFreed()
    {
        var m = Engine.UnknownCount;
        for (var k = 0; k < _problem.HeldSpeeds.Length; k++)
            Inputs[Engine.Layout.PowerOfftake(k)] = _x[k] * Engine.Layout.Scale(Engine.Layout.PowerOfftake(k));
        for (var k = 0; k < _problem.Freed.Length; k++)
            Inputs[_problem.Freed[k]] = _x[m + k] * Engine.Layout.Scale(_problem.Freed[k]);
    }

    private MatchOutcome Newton(int mostIterations = MostIterations)
    {
        _differentiated.Load(Inputs);
        _plain.Load(Inputs);
        var norm = EvaluateWithJacobian(_x);
        var plain = false;
        int passes = 0,
            jacobians = 1;
        var gain = 1.0;
        Span<double> step = stackalloc double[Dual.Width];
        var iteration = 0;
        for (; iteration < mostIterations; iteration++)
        {
            if (norm <= Tolerance || !double.IsFinite(norm) || !NewtonStep(step, out var share))
                break;
            var better = false;
            for (var halving = 0; halving < 8; halving++)
            {
                for (var i = 0; i < _n; i++)
                    _trial[i] = Math.Clamp(_x[i] - share * step[i], _lower[i], _upper[i]);
                // Near the solution the Jacobian hardly changes: a pass without derivatives tells how far the step got, and
                // whether the same Jacobian is good for the last one.
                plain = norm < NearlySolved;
                var next = plain ? EvaluatePlain(_trial) : EvaluateWithJacobian(_trial);
                _ = plain ? passes++ : jacobians++;
                if (plain && next > Tolerance)
                {
                    gain = next / norm;
                    if (!(next * gain < 0.3 * Tolerance))
                    {
                        next = EvaluateWithJacobian(_trial);
                        plain = false;
                        jacobians++;
                    }
                }

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
                break;
        }

        if (!plain || !(norm <= Tolerance))
        {
            // What is reported of this point is the plain pass.
            norm = EvaluatePlain(_x);
            passes++;
        }

        return norm <= Tolerance
            ? new MatchOutcome(MatchStatus.Solved, norm, iteration, jacobians, passes, -1)
            : new MatchOutcome(MatchStatus.NotConverged, norm, iteration, jacobians, passes, Worst());
    }

    /// <summary>
    /// The full step from residuals and Jacobian at hand, and the share of it that no unknown is too large for; false where
    /// the Jacobian is singular.
    /// </summary>
    private bool NewtonStep(Span<double> step, out double share)
    {
        Span<Vector512<double>> rows = stackalloc Vector512<double>[Dual.Width];
        _residual.AsSpan(0, _n).CopyTo(step);
        _jacobian.AsSpan(0, _n).CopyTo(rows);
        share = 1.0;
        if (!LinearSystem.Solve(rows, step, _n))
            return false;
        for (var i = 0; i < _n; i++)
            if (Math.Abs(step[i]) * share > _largestStep[i])
                share = _largestStep[i] / Math.Abs(step[i]);
        return true;
    }

    /// <summary>
    /// Continuation from the design point: inputs move in a straight line to the wanted ones while the closing conditions
    /// are let in at the rate at which the line is walked.
    /// </summary>
    private MatchOutcome Follow()
    {
        Array.Copy(Inputs, _wantedInputs, Inputs.Length);
        var m = Engine.UnknownCount;
        Engine.DesignUnknowns.CopyTo(_x, 0);
        Array.Copy(Engine.DesignInputs, Inputs, Inputs.Length);
        for (var k = 0; k < _problem.Freed.Length; k++)
            _x[m + k] = Inputs[_problem.Freed[k]] / Engine.Layout.Scale(_problem.Freed[k]);
        Array.Clear(_shift);
        _plain.Load(Inputs);
        EvaluatePlain(_x);
        for (var i = m - 1; i < _n; i++)
            _fullShift[i] = _residual[i];

        double done = 0.0,
            stride = 0.25;
        var outcome = new MatchOutcome(MatchStatus.NotConverged, 1.0, 0, 0, 0, -1);
        while (done < 1.0 && stride > ShortestStride)
        {
            _x.AsSpan(0, _n).CopyTo(_pathStart);
            var next = Math.Min(1.0, done + stride);
            for (var i = m - 1; i < _n; i++)
                _shift[i] = (1.0 - next) * _fullShift[i];
            for (var i = 0; i < Inputs.Length; i++)
                Inputs[i] = Engine.DesignInputs[i] + next * (_wantedInputs[i] - Engine.DesignInputs[i]);
            var local = Newton(MostIterationsOfStride);
            outcome = After(outcome, local);
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

    /// <summary>Residuals and Jacobian at a point; returns the largest relative imbalance.</summary>
    private double EvaluateWithJacobian(double[] x)
    {
        _differentiated.Evaluate(_problem, x);
        var norm = 0.0;
        for (var i = 0; i < _n; i++)
        {
            ref readonly var row = ref _differentiated.Rows[i];
            _residual[i] = row.Value - _shift[i];
            _jacobian[i] = row.Partials;
            norm = Math.Max(norm, Math.Abs(_residual[i]));
        }

        return norm;
    }

    /// <summary>Residuals alone; the Jacobian stays that of an earlier point.</summary>
    private double EvaluatePlain(double[] x)
    {
        _plain.Evaluate(_problem, x);
        return StorePlain();
    }

    private double StorePlain()
    {
        var norm = 0.0;
        for (var i = 0; i < _n; i++)
        {
            _residual[i] = _plain.Rows[i].Value - _shift[i];
            norm = Math.Max(norm, Math.Abs(_residual[i]));
        }

        return norm;
    }

    /// <summary>The equations of the last solution, differentiated by unknowns and freed inputs.</summary>
    internal Equations<Dual> DifferentiateByUnknowns()
    {
        _differentiated.Load(Inputs);
        _differentiated.Evaluate(_problem, _x);
        return _differentiated;
    }

    /// <summary>The equations of the last solution, differentiated by eight inputs from <paramref name="first"/> on.</summary>
    internal Equations<Dual> DifferentiateByInputs(int first)
    {
        _differentiated.EvaluateByInputs(_problem, _x, Inputs, first);
        return _differentiated;
    }

    /// <summary>The problem last solved.</summary>
    public MatchingProblem Problem => _problem;

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
            var exceedance = _plain.Relative(_problem.FirstOf[k]).Value;
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
        var ambient = _plain.Path.Inputs[InputLayout.Pressure].Value;
        var last = Engine.Definition.Mixer is null ? _plain.Path.CoreExit.P.Value : _plain.Path.Mixed.P.Value;
        if (!(last > ambient) || !(_plain.Path.CombustorInlet.W.Value > 0.0))
            return outcome with { Status = MatchStatus.NoThroughflow, Culprit = 0 };
        if (Engine.HasFan && (!(_plain.Path.BypassExit.P.Value > ambient) || !(_plain.Path.BypassExit.W.Value > 0.0)))
            return outcome with { Status = MatchStatus.NoThroughflow, Culprit = 1 };
        var far = _plain.Path.FuelFlow.Value / _plain.Path.CombustorInlet.W.Value;
        return far > 0.0 && far < Engine.Definition.Gas.StoichiometricFuelAirRatio
            ? outcome
            : outcome with
            {
                Status = MatchStatus.NoCombustion,
            };
    }

    private MatchStatus Refusal(ScaledCompressor compressor, int index, double beta)
    {
        var speed = _plain.Path.CorrectedSpeed[index].Value;
        if (speed < compressor.Map.LowestSpeed || speed > compressor.Map.HighestSpeed)
            return MatchStatus.OutsideMapSpeed;
        return beta > 1.0 ? MatchStatus.BeyondSurge
            : beta < 0.0 ? MatchStatus.BeyondChoke
            : MatchStatus.Solved;
    }
}
