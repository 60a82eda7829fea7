using CycleSim.Benchmarks;
using CycleSim.Definitions;
using CycleSim.Engine;

const string Usage =
    "Usage: CycleSim.Benchmarks [--rounds N], N from 1 to 1000 (7 unless given); or CycleSim.Benchmarks --sweep.";
var rounds = 7;
if (args is ["--sweep"])
{
    StudySweep.Run();
    return 0;
}

if (
    args.Length > 0
    && (args is not ["--rounds", var text] || !int.TryParse(text, out rounds) || rounds is < 1 or > 1000)
)
{
    Console.Error.WriteLine($"'{string.Join(' ', args)}' was not understood. {Usage}");
    return 2;
}

var sweep = new Sweep(Sizing.Size(EngineLibrary.Load("velda-27").Engine));
List<Contestant> contestants =
[
    new MatcherContestant(sweep, true),
    new MatcherContestant(sweep, false),
    new BroydenContestant(sweep, true),
    new BroydenContestant(sweep, false),
];
if (HybridContestant.IsInstalled)
{
    contestants.Add(new HybridContestant(sweep, true));
    contestants.Add(new HybridContestant(sweep, false));
}
else
    Console.WriteLine("MINPACK hybrd1 is left out: install libcminpack1 to compare with it.");

List<Measurement> measurements = [.. contestants.Select(c => new Measurement(c))];

// The other arrangements by our own solver alone: what a point of them costs beside the twin-spool's.
List<Measurement> others =
[
    .. new[] { "torvik-75", "lunde-14g", "pelda-4m" }.Select(name => new Measurement(
        new MatcherContestant(new Sweep(Sizing.Size(EngineLibrary.Load(name).Engine)), true)
    )),
];
var elements = new Elements(sweep);
List<(double Property, double Plain, double Dual)> times = [];
foreach (var measurement in measurements.Concat(others))
    measurement.WarmUp();
for (var i = 0; i < 30; i++)
    Time();
times.Clear();

// All in each round and each round begun with another, so that a slow spell of the machine falls on all alike.
for (var round = 0; round < rounds; round++)
{
    for (var k = 0; k < measurements.Count; k++)
        measurements[(round + k) % measurements.Count].RunRound();
    foreach (var other in others)
        other.RunRound();
    Time();
}

Report.Print(sweep, measurements, others, times);
foreach (var contestant in contestants)
    (contestant as IDisposable)?.Dispose();
return 0;

void Time() => times.Add((elements.Property(), elements.PlainPass(), elements.DualPass()));
