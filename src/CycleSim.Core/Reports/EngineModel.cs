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
