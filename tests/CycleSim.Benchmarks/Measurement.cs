using System.Diagnostics;
using CycleSim.Engine;
using CycleSim.Gas;
using CycleSim.Scalars;

namespace CycleSim.Benchmarks;

/// <summary>Sweeps of one contestant: the time of each round in seconds, what the last one cost, bytes allocated.</summary>
internal sealed class Measurement(Contestant contestant)
{
    private const int WarmUpSweeps = 6;

    private static readonly TimeSpan WarmUpTime = TimeSpan.FromSeconds(1.0),
        LongestWarmUp = TimeSpan.FromSeconds(3.0);

    public Contestant Contestant { get; } = contestant;

    public List<double> Seconds { get; } = [];

    public Tally Tally { get; private set; }

    /// <summary>Bytes allocated in the last sweep.</summary>
    public long Bytes { get; private set; }

    /// <summary>Six sweeps and a second, so that the compiler has done its best; three seconds at most.</summary>
    public void WarmUp()
    {
        var watch = Stopwatch.StartNew();
        for (var i = 0; (i < WarmUpSweeps || watch.Elapsed < WarmUpTime) && watch.Elapsed < LongestWarmUp; i++)
            Contestant.RunSweep();
    }

    public void RunRound()
    {
        var bytes = GC.GetAllocatedBytesForCurrentThread();
        var start = Stopwatch.GetTimestamp();
        Tally = Contestant.RunSweep();
        var elapsed = Stopwatch.GetElapsedTime(start);
        Bytes = GC.GetAllocatedBytesForCurrentThread() - bytes;
        Seconds.Add(elapsed.TotalSeconds);
    }

    /// <summary>Median over the rounds of this contestant's time over another's in the same round.</summary>
    public double TimeOver(Measurement other) => Median(Seconds.Zip(other.Seconds, (a, b) => a / b));

    public static double Median(IEnumerable<double> values)
    {
        double[] sorted = [.. values.Order()];
        var middle = sorted.Length / 2;
        return sorted.Length % 2 == 1 ? sorted[middle] : 0.5 * (sorted[middle - 1] + sorted[middle]);
    }
}

/// <summary>Times of what a solution is made of, each in a loop whose turns do not wait for one another; ns.</summary>
internal sealed class Elements
{
    private const int Properties = 500_000,
        PassesAPoint = 10;

    private readonly Sweep _sweep;
    private readonly GasModel _gas;
    private readonly double[] _temperatures = new double[1024];
    private readonly double[] _residual;
    private readonly PlainResidual _plain;
    private readonly FlowPath<Dual> _dual;

    public Elements(Sweep sweep)
    {
        _sweep = sweep;
        _gas = sweep.Engine.Definition.Gas;
        for (var i = 0; i < _temperatures.Length; i++)
            _temperatures[i] = 300.0 + 1400.0 * (i * 389 % _temperatures.Length) / _temperatures.Length;
        _residual = new double[sweep.Engine.UnknownCount];
        _plain = new PlainResidual(sweep.Engine);
        _dual = new FlowPath<Dual>(sweep.Engine);
    }

    /// <summary>Where the results of the loops go, so that none is left out as unused.</summary>
    public double Sink { get; private set; }

    /// <summary>Enthalpy, entropy function and specific heat of burnt gas (y = 0.02, dry), 300 to 1700 K in mixed order.</summary>
    public double Property()
    {
        double sum = 0.0;
        var watch = Stopwatch.StartNew();
        for (var i = 0; i < Properties; i++)
        {
            _gas.AtTemperature(_temperatures[i & 1023], 0.02, 0.0, out var point);
            sum += point.H + point.Phi + point.Cp;
        }

        Sink += sum;
        return watch.Elapsed.TotalNanoseconds / Properties;
    }

    /// <summary>One pass without derivatives, at the solutions of the sweep.</summary>
    public double PlainPass()
    {
        var watch = Stopwatch.StartNew();
        foreach (var point in _sweep.Points)
        {
            _plain.Load(point);
            for (var i = 0; i < PassesAPoint; i++)
                Sink += _plain.Evaluate(point.Solution, _residual);
        }

        return watch.Elapsed.TotalNanoseconds / (PassesAPoint * _sweep.Points.Count);
    }

    /// <summary>One pass with all derivatives, at the solutions of the sweep.</summary>
    public double DualPass()
    {
        var watch = Stopwatch.StartNew();
        foreach (var point in _sweep.Points)
        {
            for (var i = 0; i < point.Inputs.Length; i++)
                _dual.Inputs[i] = Dual.Constant(point.Inputs[i]);
            for (var i = 0; i < PassesAPoint; i++)
                Sink += DualResidual(point);
        }

        return watch.Elapsed.TotalNanoseconds / (PassesAPoint * _sweep.Points.Count);
    }

    private double DualResidual(SweepPoint point)
    {
        for (var k = 0; k < point.Solution.Length; k++)
            _dual.Unknowns[k] = Dual.Variable(point.Solution[k], k);
        _dual.Evaluate();
        var thrust = _dual.NetThrust / point.Thrust - 1.0;
        return Math.Abs(thrust.Value) + thrust.Partials[0];
    }
}
