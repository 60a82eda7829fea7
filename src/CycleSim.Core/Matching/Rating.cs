using CycleSim.Air;
using CycleSim.Engine;

namespace CycleSim.Matching;

/// <summary>
/// A rating of a sized engine, with what its definition left open worked out at sea level static: thrust, flat-to
/// temperature and gas-temperature limit hang together, any two give the third.
/// </summary>
/// <remarks>
/// The flat thrust at any altitude and Mach number is what the limits allow at ISA plus the flat-to offset with the
/// definition's own bleeds and offtakes; colder, the engine is throttled to it, hotter, the first limit rules. Loads
/// beyond the definition's leave the flat thrust as it is and bring the break down. One instance per thread.
/// </remarks>
public sealed class Rating
{
    private readonly Matcher _matcher;
    private readonly SizedEngine _engine;
    private readonly double[] _reference;
    private readonly MatchingProblem _limitsOnly;

    /// <exception cref="RatingException">The definition's thrust, flat-to temperature and limits cannot be reconciled.</exception>
    public Rating(SizedEngine engine, RatingDefinition definition)
    {
        (_engine, Definition) = (engine, definition);
        _matcher = new Matcher(engine);
        _reference = engine.Layout.Defaults(engine.Definition, engine.Definition.Design.Flight);
        var limits = definition.Limits;
        FlatTo = definition.FlatTo;
        ImpliedLimit = null;
        var hasThrust = definition.Thrust > 0.0;
        var hasFlatTo = !double.IsNaN(definition.FlatTo);
        var hasTemperature = limits.Any(l => IsTemperature(l.Quantity));
        if (hasThrust && hasFlatTo && hasTemperature)
            throw new RatingException(
                $"rating '{definition.Name}': thrust, flat_to and a gas temperature limit are all given, but any two of "
                    + "them fix the third. Drop one."
            );
        if (hasThrust && hasFlatTo)
        {
            ImpliedLimit = LimitFor(definition);
            limits = [.. limits, ImpliedLimit.Value];
        }

        if (limits.Count == 0)
            throw new RatingException(
                $"rating '{definition.Name}' has nothing that ends its flat part: give it a limit (for instance T41), or "
                    + "both thrust and flat_to."
            );
        Limits = limits;
        _limitsOnly = MatchingProblem.FirstLimit([.. limits]);
        if (hasThrust && !hasFlatTo)
            FlatTo = FlatToFor(definition.Thrust);
        else if (!hasThrust && !hasFlatTo)
            throw new RatingException(
                $"rating '{definition.Name}' gives neither thrust nor flat_to: say how far its thrust is flat."
            );
    }

    public RatingDefinition Definition { get; }

    /// <summary>All limits, the implied one included.</summary>
    public IReadOnlyList<Limit> Limits { get; }

    /// <summary>The T41 limit that thrust and flat-to temperature amount to, where the definition gives both.</summary>
    public Limit? ImpliedLimit { get; }

    /// <summary>Offset from ISA up to which the thrust is flat, K.</summary>
    public double FlatTo { get; }

    /// <summary>The matcher with its state after the last call, for reports.</summary>
    public Matcher Matcher => _matcher;

    /// <summary>Flat thrust (N) at an altitude and Mach number, dry air, the definition's bleeds and offtakes.</summary>
    /// <exception cref="RatingException">The engine has no solution there.</exception>
    public double FlatThrust(double pressureAltitude, double mach)
    {
        var corner = FlightCondition.AtIsaOffset(pressureAltitude, mach, FlatTo);
        _reference.CopyTo(_matcher.Inputs, 0);
        InputLayout.SetFlight(_matcher.Inputs, corner);
        var outcome = _matcher.Solve(_limitsOnly);
        return outcome.Solved
            ? _matcher.Path.NetThrust.Value
            : throw new RatingException(
                $"rating '{Definition.Name}' at {pressureAltitude:F0} m, Mach {mach:F2}, ISA{FlatTo:+0.#;-0.#;+0} K: "
                    + Diagnosis.Of(_engine, _matcher, outcome)
            );
    }

    /// <summary>
    /// The rated point: fuel until the flat thrust or the first limit is met. <paramref name="inputs"/> gives flight
    /// condition, bleeds, offtakes and health (see <see cref="InputLayout"/>). <paramref name="governing"/> is an index
    /// into <see cref="Limits"/>, or -1 where the thrust is flat.
    /// </summary>
    public MatchOutcome Solve(ReadOnlySpan<double> inputs, double flatThrust, out int governing)
    {
        inputs.CopyTo(_matcher.Inputs);
        var problem = MatchingProblem.FirstLimit([.. Limits, new Limit(Quantity.NetThrust, flatThrust)]);
        var outcome = _matcher.Solve(problem);
        governing = outcome.Solved ? _matcher.GoverningLimit() : -1;
        if (governing == Limits.Count)
            governing = -1;
        return outcome;
    }

    /// <summary>
    /// The outside temperature (K) at which the first limit is reached with the flat thrust just given: one matching
    /// problem with the temperature freed. The temperature in <paramref name="inputs"/> is where the search begins.
    /// </summary>
    public MatchOutcome Break(ReadOnlySpan<double> inputs, double flatThrust, out double temperature, out int governing)
    {
        inputs.CopyTo(_matcher.Inputs);
        var problem = MatchingProblem.Break(
            InputLayout.Temperature,
            new Limit(Quantity.NetThrust, flatThrust),
            [.. Limits]
        );
        var outcome = _matcher.Solve(problem);
        temperature = outcome.Solved ? _matcher.Inputs[InputLayout.Temperature] : double.NaN;
        governing = outcome.Solved ? _matcher.GoverningLimit() : -1;
        return outcome;
    }

    private Limit LimitFor(RatingDefinition definition)
    {
        _reference.CopyTo(_matcher.Inputs, 0);
        InputLayout.SetFlight(_matcher.Inputs, FlightCondition.AtIsaOffset(0.0, 0.0, definition.FlatTo));
        var outcome = _matcher.Solve(MatchingProblem.For(Quantity.NetThrust, definition.Thrust));
        if (!outcome.Solved)
            throw new RatingException(
                $"rating '{definition.Name}': {definition.Thrust / 1000.0:F1} kN static at sea level, "
                    + $"ISA{definition.FlatTo:+0.#;-0.#;+0} K, is not to be had from this engine: "
                    + Diagnosis.Of(_engine, _matcher, outcome)
            );
        foreach (var limit in definition.Limits)
        {
            var value = _matcher.Path.Output(limit.Quantity).Value;
            if (value > limit.Value)
                throw new RatingException(
                    $"rating '{definition.Name}': its own limit {limit.Quantity} = {QuantityText.Format(limit.Quantity, limit.Value)} is "
                        + $"exceeded ({QuantityText.Format(limit.Quantity, value)}) at {definition.Thrust / 1000.0:F1} kN and "
                        + $"ISA{definition.FlatTo:+0.#;-0.#;+0} K. Lower the thrust or flat_to, or raise the limit."
                );
        }

        return new Limit(Quantity.T41, _matcher.Path.Output(Quantity.T41).Value);
    }

    private double FlatToFor(double thrust)
    {
        _reference.CopyTo(_matcher.Inputs, 0);
        InputLayout.SetFlight(_matcher.Inputs, FlightCondition.AtIsaOffset(0.0, 0.0, 15.0));
        var outcome = Break(_matcher.Inputs.ToArray(), thrust, out var temperature, out _);
        return outcome.Solved
            ? temperature - StandardAtmosphere.SeaLevelTemperature
            : throw new RatingException(
                $"rating '{Definition.Name}': no outside temperature makes the limits meet {thrust / 1000.0:F1} kN static at "
                    + $"sea level: {Diagnosis.Of(_engine, _matcher, outcome)}"
            );
    }

    private static bool IsTemperature(Quantity q) => q is Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5;
}

/// <summary>A rating that cannot be worked out; the message says why.</summary>
public sealed class RatingException(string message) : Exception(message);
