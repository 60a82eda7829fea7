using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;

namespace CycleSim.Benchmarks;

/// <summary>
/// The common work: net thrusts of one engine over altitude and Mach number, in serpentine order so that each point is
/// close to the one before. Points without a solution are left out when the sweep is laid out.
/// </summary>
internal sealed class Sweep
{
    private const int Altitudes = 10,
        Machs = 10,
        Thrusts = 20;

    private const double HighestAltitude = 12000.0,
        RotorInletTemperature = 1520.0,
        FallbackSpeed = 1.02,
        LowestThrust = 0.15;

    private readonly List<SweepPoint> _points = [];
    private readonly Matcher _matcher;

    public Sweep(SizedEngine engine)
    {
        Engine = engine;
        _matcher = new Matcher(engine);
        var machUp = true;
        var thrustDown = true;
        for (var i = 0; i < Altitudes; i++)
        {
            var altitude = HighestAltitude * i / (Altitudes - 1);
            var fastest = Math.Min(0.85, 0.45 + 0.45 * altitude / 9000.0);
            for (var j = 0; j < Machs; j++)
            {
                var mach = fastest * (machUp ? j : Machs - 1 - j) / (Machs - 1);
                AddThrusts(FlightCondition.AtIsaOffset(altitude, mach, 0.0), thrustDown);
                thrustDown = !thrustDown;
            }

            machUp = !machUp;
        }
    }

    public SizedEngine Engine { get; }

    public IReadOnlyList<SweepPoint> Points => _points;

    public int Skipped { get; private set; }

    private void AddThrusts(in FlightCondition flight, bool down)
    {
        var inputs = Engine.Layout.Defaults(Engine.Definition, flight);
        if (
            !Solve(inputs, MatchingProblem.For(Quantity.T41, RotorInletTemperature))
            && !Solve(inputs, MatchingProblem.For(Quantity.CorrectedN1, FallbackSpeed))
        )
        {
            Skipped += Thrusts;
            return;
        }

        var full = _matcher.Path.NetThrust.Value;
        for (var k = 0; k < Thrusts; k++)
        {
            var share = (down ? k : Thrusts - 1 - k) / (Thrusts - 1.0);
            var thrust = full * (1.0 - (1.0 - LowestThrust) * share);
            var problem = MatchingProblem.For(Quantity.NetThrust, thrust);
            if (Solve(inputs, problem))
                _points.Add(new SweepPoint(inputs, thrust, problem, _matcher.Solution.ToArray()));
            else
                Skipped++;
        }
    }

    private bool Solve(double[] inputs, MatchingProblem problem)
    {
        inputs.CopyTo(_matcher.Inputs, 0);
        return _matcher.Solve(problem).Solved;
    }
}

/// <summary>One point of the sweep: flight inputs, thrust in N, and the unknowns that solve it.</summary>
internal sealed record SweepPoint(double[] Inputs, double Thrust, MatchingProblem Problem, double[] Solution);
