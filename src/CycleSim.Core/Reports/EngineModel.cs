using CycleSim.Air;
using CycleSim.Engine;
using CycleSim.Matching;

namespace CycleSim.Reports;

/// <summary>
/// The everyday way in: an engine, sized, that can be asked for operating points. The allocation-free way is
/// <see cref="Matching.Matcher"/>; this is built on it. One instance per thread.
/// </summary>
public sealed class EngineModel
{
    private readonly Matcher _matcher;
    private readonly PointReporter _reporter;
    private readonly Dictionary<string, Rating> _ratings = new(StringComparer.OrdinalIgnoreCase);

    /// <exception cref="SizingException">The design point contradicts itself.</exception>
    public EngineModel(EngineDefinition definition)
        : this(Sizing.Size(definition)) { }

    public EngineModel(SizedEngine engine)
    {
        Engine = engine;
        _matcher = new Matcher(engine);
        _reporter = new PointReporter(engine);
    }

    public SizedEngine Engine { get; }

    public InputLayout Layout => Engine.Layout;

    /// <summary>The design point itself.</summary>
    public OperatingPoint DesignPoint()
    {
        Engine.DesignInputs.CopyTo(_matcher.Inputs, 0);
        var t4 = new Limit(Quantity.T4, Engine.DesignT4);
        var outcome = _matcher.Solve(MatchingProblem.For(t4.Quantity, t4.Value));
        return Report(outcome, Engine.Definition.Design.Flight, t4);
    }

    /// <summary>Inputs for a flight condition with the definition's bleeds and offtakes; change what differs.</summary>
    /// <exception cref="NoSolutionException">Humid air, and a gas that carries no humidity.</exception>
    public double[] Inputs(in FlightCondition flight)
    {
        Check(flight);
        return Layout.Defaults(Engine.Definition, flight);
    }

    /// <summary>The point at which one output takes a value in SI (speeds relative to design).</summary>
    /// <exception cref="NoSolutionException">No such point; the message says what stood in the way.</exception>
    public OperatingPoint At(in FlightCondition flight, Quantity quantity, double value, double[]? inputs = null)
    {
        Check(flight);
        if (quantity is Quantity.N2 && Engine.Spools.Length < 2 || quantity is Quantity.N3 && Engine.Spools.Length < 3)
            throw new NoSolutionException($"{Engine.Definition.Name} has no spool for {quantity}.");
        if (quantity != Quantity.Lever && !(value > 0.0))
            throw new NoSolutionException(
                $"{QuantityText.Name(quantity)} must be above zero; {QuantityText.Format(quantity, value)} was asked for."
            );
        (inputs ?? Inputs(flight)).CopyTo(_matcher.Inputs, 0);
        var outcome = _matcher.Solve(MatchingProblem.For(quantity, value));
        if (!outcome.Solved)
            throw new NoSolutionException(
                $"{Engine.Definition.Name}: {QuantityText.Name(quantity)} = {QuantityText.Format(quantity, value)} cannot be reached at "
                    + $"{flight.PressureAltitude:F0} m, Mach {flight.Mach:F3}, {flight.StaticTemperature:F1} K: "
                    + Diagnosis.Of(Engine, _matcher, outcome)
            );
        return Report(outcome, flight, new Limit(quantity, value));
    }

    /// <summary>
    /// Idle, on the ground or in flight: the high-pressure spool held at the idle speed of the definition. Its thrust may be
    /// negative in flight.
    /// </summary>
    /// <exception cref="NoSolutionException">No such point, or a definition without an idle speed of the core.</exception>
    public OperatingPoint AtIdle(in FlightCondition flight, double[]? inputs = null)
    {
        var speed = Engine.Definition.Control.IdleCoreSpeed;
        return speed > 0.0
            ? At(flight, Quantity.N1 + (Engine.Spools.Length - 1), speed, inputs)
            : throw new NoSolutionException(
                $"{Engine.Definition.Name} gives no idle_core_speed in [control]; say the power by a speed instead."
            );
    }

    /// <summary>
    /// The point just after a step of fuel at a point of this engine: speeds and inputs as they were, fuel flow times
    /// <paramref name="fuelRatio"/>. What the turbines then give beyond what the compressors take stands in the spools' offtake.
    /// </summary>
    /// <param name="settled">a settled point of this engine</param>
    /// <param name="fuelRatio">fuel flow over that of the settled point, 0.2 to 3</param>
    /// <param name="inputs">the inputs of the settled point; its definition's bleeds and offtakes where null</param>
    /// <exception cref="NoSolutionException">No such point: a compressor surges first, or the combustor cannot burn it.</exception>
    public OperatingPoint AfterFuelStep(OperatingPoint settled, double fuelRatio, double[]? inputs = null)
    {
        if (fuelRatio is not (>= 0.2 and <= 3.0))
            throw new NoSolutionException($"a step to {fuelRatio:F3} of the fuel flow; expected 0.2 to 3.");
        At(settled.Flight, Quantity.FuelFlow, settled.FuelFlow, inputs);
        var speeds = settled.Spools.Select(s => s.RelativeSpeed).ToArray();
        Span<double> start = stackalloc double[Engine.UnknownCount];
        var fuel = new Limit(Quantity.FuelFlow, settled.FuelFlow);
        // In small steps: each starts where the last one ended.
        var steps = (int)Math.Ceiling(Math.Abs(fuelRatio - 1.0) / 0.05);
        for (var k = 0; k <= steps; k++)
        {
            _matcher.Solution[..Engine.UnknownCount].CopyTo(start);
            var ratio = steps == 0 ? 1.0 : 1.0 + (fuelRatio - 1.0) * k / steps;
            fuel = fuel with { Value = settled.FuelFlow * ratio };
            var outcome = _matcher.Solve(MatchingProblem.AtHeldSpeeds(speeds, fuel.Quantity, fuel.Value), start);
            if (!outcome.Solved)
                throw new NoSolutionException(
                    $"{Engine.Definition.Name}: a step to {ratio:F3} of the fuel flow at {settled.Flight.PressureAltitude:F0} m, Mach "
                        + $"{settled.Flight.Mach:F3}: {Diagnosis.Of(Engine, _matcher, outcome)}"
                );
            if (k == steps)
                return Report(outcome, settled.Flight, fuel);
        }

        throw new InvalidOperationException("the last step returns");
    }

    /// <summary>A rating by its name in the definition.</summary>
    /// <exception cref="RatingException">No such rating, or one that cannot be reconciled.</exception>
    public Rating Rating(string name)
    {
        if (_ratings.TryGetValue(name, out var known))
            return known;
        var definition =
            Engine.Definition.Ratings.FirstOrDefault(r => r.Name.Equals(name, StringComparison.OrdinalIgnoreCase))
            ?? throw new RatingException(
                $"{Engine.Definition.Name} has no rating '{name}'; it has "
                    + (
                        Engine.Definition.Ratings.Count == 0
                            ? "none"
                            : string.Join(", ", Engine.Definition.Ratings.Select(r => $"'{r.Name}'"))
                    )
                    + "."
            );
        return _ratings[name] = new Rating(Engine, definition);
    }

    /// <summary>The point that a rating allows; the setting of the report is the governing limit.</summary>
    /// <exception cref="NoSolutionException">No such point.</exception>
    public OperatingPoint AtRating(in FlightCondition flight, Rating rating, double[]? inputs = null)
    {
        Check(flight);
        var flat = rating.FlatThrust(flight.PressureAltitude, flight.Mach);
        var outcome = rating.Solve(inputs ?? Inputs(flight), flat, out var governing);
        if (!outcome.Solved)
            throw new NoSolutionException(
                $"{Engine.Definition.Name}: rating '{rating.Definition.Name}' has no point at {flight.PressureAltitude:F0} m, Mach "
                    + $"{flight.Mach:F3}, {flight.StaticTemperature:F1} K: {Diagnosis.Of(Engine, rating.Matcher, outcome)}"
            );
        var setting = governing < 0 ? new Limit(Quantity.NetThrust, flat) : rating.Limits[governing];
        return _reporter.Report(rating.Matcher, outcome, flight, setting);
    }

    /// <summary>Influence coefficients of the point last asked for by <see cref="At"/> or <see cref="DesignPoint"/>.</summary>
    public Influence InfluenceOfLastPoint() => Influence.At(_matcher);

    private OperatingPoint Report(MatchOutcome outcome, in FlightCondition flight, Limit setting) =>
        _reporter.Report(_matcher, outcome, flight, setting);

    private void Check(in FlightCondition flight)
    {
        if (flight.WaterAirRatio > 0.0 && !Engine.Definition.Gas.CarriesHumidity)
            throw new NoSolutionException(
                $"{Engine.Definition.Name} is defined with a constant-specific-heat gas, which carries no humidity. "
                    + "Leave the humidity out or choose the thermally perfect gas."
            );
    }
}

/// <summary>A point without solution; the message says which equation, limit or bound stood in the way.</summary>
public sealed class NoSolutionException(string message) : Exception(message);
