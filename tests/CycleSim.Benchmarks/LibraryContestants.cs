using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using CycleSim.Matching;
using MathNet.Numerics.RootFinding;

namespace CycleSim.Benchmarks;

/// <summary>Broyden's method of MathNet.Numerics, its Jacobian started by differences.</summary>
/// <remarks>
/// The library stops on the 2-norm. So that all methods stop at the same test, a residual within tolerance is handed over
/// as zero, which ends its iteration at once.
/// </remarks>
internal sealed class BroydenContestant : Contestant
{
    /// <summary>The library's own default.</summary>
    private const int MostIterations = 100;

    // From 1e-3 to 1e-8 the step makes no difference worth having on this sweep.
    private const double DifferenceStep = 1e-5;

    private readonly PlainResidual _residual;
    private readonly Func<double[], double[]> _function;
    private int _evaluations;
    private bool _met;

    public BroydenContestant(Sweep sweep, bool warm)
        : base("MathNet Broyden", sweep, warm)
    {
        _residual = new PlainResidual(sweep.Engine);
        _function = Evaluate;
    }

    protected override bool Solve(SweepPoint point, double[] start, double[] solution, ref Tally tally)
    {
        _residual.Load(point);
        _evaluations = 0;
        _met = false;
        var found = Broyden.TryFindRootWithJacobianStep(
            _function,
            start,
            Matcher.Tolerance,
            MostIterations,
            DifferenceStep,
            out var root
        );
        tally.PlainEvaluations += _evaluations;
        // The first evaluation and the differences are no steps.
        tally.Iterations += Math.Max(0, _evaluations - 1 - _residual.Count);
        if (!found || !_met)
            return false;
        root.CopyTo(solution, 0);
        return true;
    }

    private double[] Evaluate(double[] unknowns)
    {
        _evaluations++;
        var residual = new double[_residual.Count];
        if (_residual.Evaluate(unknowns, residual) > Matcher.Tolerance)
            return residual;
        _met = true;
        Array.Clear(residual);
        return residual;
    }
}

/// <summary>Powell's hybrid method: hybrd1 of MINPACK in C (cminpack, double precision).</summary>
/// <remarks>
/// The library stops on the size of its steps. So that all methods stop at the same test, the function breaks the
/// iteration off at the first point within tolerance.
/// </remarks>
internal sealed unsafe class HybridContestant : Contestant, IDisposable
{
    private const string Library = "libcminpack.so.1";

    /// <summary>Step tolerance of the library, so small that only the residual test ends the iteration.</summary>
    private const double StepTolerance = 1e-15;

    private const int BreakOff = -1;

    private readonly PlainResidual _residual;
    private readonly double[] _work;
    private readonly double[] _values;
    private GCHandle _self;
    private double[] _solution = [];
    private int _evaluations,
        _steps;
    private bool _met;
    private Exception? _fault;

    public HybridContestant(Sweep sweep, bool warm)
        : base("MINPACK hybrd1", sweep, warm)
    {
        _residual = new PlainResidual(sweep.Engine);
        var n = _residual.Count;
        _work = new double[(n * (3 * n + 13) + 1) / 2];
        _values = new double[n];
        _self = GCHandle.Alloc(this);
    }

    public static bool IsInstalled => NativeLibrary.TryLoad(Library, out _);

    public void Dispose() => _self.Free();

    protected override bool Solve(SweepPoint point, double[] start, double[] solution, ref Tally tally)
    {
        _residual.Load(point);
        _evaluations = 0;
        _steps = 0;
        _met = false;
        _solution = solution;
        var n = _residual.Count;
        var unknowns = stackalloc double[n];
        start.CopyTo(new Span<double>(unknowns, n));
        fixed (double* work = _work)
        fixed (double* values = _values)
            Hybrd1(&Evaluate, (void*)GCHandle.ToIntPtr(_self), n, unknowns, values, StepTolerance, work, _work.Length);
        if (_fault is not null)
            throw new InvalidOperationException("The flow path failed within hybrd1.", _fault);
        tally.PlainEvaluations += _evaluations;
        tally.Iterations += Math.Max(0, _steps - 1);
        return _met;
    }

    [DllImport(Library, EntryPoint = "hybrd1", CallingConvention = CallingConvention.Cdecl)]
    private static extern int Hybrd1(
        delegate* unmanaged[Cdecl]<void*, int, double*, double*, int, int> function,
        void* user,
        int n,
        double* unknowns,
        double* values,
        double tolerance,
        double* work,
        int workLength
    );

    // An exception must not cross native code: it is kept and thrown when the library has returned.
    [UnmanagedCallersOnly(CallConvs = [typeof(CallConvCdecl)])]
    private static int Evaluate(void* user, int n, double* unknowns, double* values, int flag)
    {
        var self = (HybridContestant)GCHandle.FromIntPtr((nint)user).Target!;
        try
        {
            return self.Evaluate(new ReadOnlySpan<double>(unknowns, n), new Span<double>(values, n), flag);
        }
        catch (Exception fault)
        {
            self._fault = fault;
            return BreakOff;
        }
    }

    // Flag 1 is a step (the first one the start), 2 a difference for the Jacobian.
    private int Evaluate(ReadOnlySpan<double> unknowns, Span<double> values, int flag)
    {
        _evaluations++;
        if (flag == 1)
            _steps++;
        if (_residual.Evaluate(unknowns, values) > Matcher.Tolerance)
            return 0;
        _met = true;
        unknowns.CopyTo(_solution);
        return BreakOff;
    }
}
