using CycleSim.Engine;
using CycleSim.Scalars;

namespace CycleSim.Matching;

/// <summary>
/// The equations of a matching problem: the imbalances of the flow path and the closing conditions, with derivatives where
/// <typeparamref name="T"/> carries them.
/// </summary>
internal sealed class Equations<T>(SizedEngine engine)
    where T : struct, IScalar<T>
{
    private readonly T[] _rows = new T[Dual.Width];

    // Not a number where the path holds a variable instead of a loaded constant.
    private readonly double[] _loaded = [.. Enumerable.Repeat(double.NaN, engine.Layout.Count)];

    public FlowPath<T> Path { get; } = new(engine);

    /// <summary>Rows of the last evaluation, imbalances first.</summary>
    public ReadOnlySpan<T> Rows => _rows;

    /// <summary>Takes over the inputs that have changed since the last time; false where none has.</summary>
    public bool Load(ReadOnlySpan<double> inputs)
    {
        var changed = false;
        for (var i = 0; i < inputs.Length; i++)
            if (inputs[i] != _loaded[i])
            {
                Path.Inputs[i] = T.Constant(inputs[i]);
                _loaded[i] = inputs[i];
                changed = true;
            }

        return changed;
    }

    /// <summary>Evaluates at unknowns followed by freed inputs, which are the variables; inputs must have been loaded.</summary>
    public void Evaluate(MatchingProblem problem, ReadOnlySpan<double> x)
    {
        var m = engine.UnknownCount;
        for (var i = 0; i < m; i++)
            Path.Unknowns[i] = T.Variable(x[i], i);
        for (var k = 0; k < problem.HeldSpeeds.Length; k++)
        {
            var spare = engine.Layout.PowerOfftake(k);
            _loaded[spare] = double.NaN;
            Path.Unknowns[k] = T.Constant(problem.HeldSpeeds[k]);
            Path.Inputs[spare] = T.Variable(x[k], k) * engine.Layout.Scale(spare);
        }

        for (var k = 0; k < problem.Freed.Length; k++)
        {
            _loaded[problem.Freed[k]] = double.NaN;
            Path.Inputs[problem.Freed[k]] = T.Variable(x[m + k], m + k) * engine.Layout.Scale(problem.Freed[k]);
        }

        Run(problem);
    }

    /// <summary>Evaluates at unknowns held constant, with eight inputs from <paramref name="first"/> on as the variables.</summary>
    public void EvaluateByInputs(
        MatchingProblem problem,
        ReadOnlySpan<double> x,
        ReadOnlySpan<double> inputs,
        int first
    )
    {
        Load(inputs);
        for (var i = 0; i < engine.UnknownCount; i++)
            Path.Unknowns[i] = T.Constant(x[i]);
        for (var i = 0; i < Dual.Width && first + i < inputs.Length; i++)
        {
            _loaded[first + i] = double.NaN;
            Path.Inputs[first + i] = T.Variable(inputs[first + i], i);
        }

        Run(problem);
    }

    /// <summary>How far an output is from a value, relative to it.</summary>
    public T Relative(in Limit condition)
    {
        var output = Path.Output(condition.Quantity);
        return condition.Value == 0.0 ? output : output / condition.Value - 1.0;
    }

    private void Run(MatchingProblem problem)
    {
        Path.Evaluate();
        Path.Residuals.CopyTo(_rows, 0);
        Close(problem);
    }

    /// <summary>Draws up the closing conditions from the pass as it stands: enough where nothing else has changed.</summary>
    public void Close(MatchingProblem problem)
    {
        var row = engine.UnknownCount - 1;
        foreach (ref readonly var condition in problem.Prescribed.AsSpan())
            _rows[row++] = Relative(condition);
        if (problem.FirstOf.Length == 0)
            return;
        var worst = Relative(problem.FirstOf[0]);
        for (var k = 1; k < problem.FirstOf.Length; k++)
            worst = T.Max(worst, Relative(problem.FirstOf[k]));
        _rows[row] = worst;
    }
}
