using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Reports;

namespace CycleSim.Cli;

/// <summary>The options that say at what power a point is wanted; exactly one of them is needed.</summary>
internal sealed class PowerSetting
{
    private sealed record Choice(Option<string?> Option, Quantity Quantity, Dimension Dimension);

    private readonly Option<bool> _design = new("--design") { Description = "The design point itself." };

    private readonly Option<string?> _rating = CommonOptions.Text(
        "--rating",
        "Power of a rating of the definition, for instance take-off."
    );

    private readonly Option<bool> _idle = new("--idle")
    {
        Description = "Idle, on the ground or in flight: the core speed at which the definition's control holds it.",
    };

    private readonly Choice[] _choices =
    [
        Of("--thrust", "Net thrust, for instance \"100 kN\".", Quantity.NetThrust, Dimension.Force),
        Of(
            "--installed-thrust",
            "Net thrust less nacelle losses, for instance \"98 kN\".",
            Quantity.InstalledThrust,
            Dimension.Force
        ),
        Of("--fuel-flow", "Fuel flow, for instance \"0.8 kg/s\".", Quantity.FuelFlow, Dimension.MassFlow),
        Of("--T4", "Combustor exit temperature, for instance \"1600 K\".", Quantity.T4, Dimension.Temperature),
        Of("--T41", "Rotor inlet temperature, for instance \"1550 K\".", Quantity.T41, Dimension.Temperature),
        Of(
            "--EGT",
            "Gas temperature behind the first turbine (station 45), for instance \"850 °C\".",
            Quantity.T45,
            Dimension.Temperature
        ),
        Of("--N1", "Low-pressure speed over its design value, for instance \"95 %\".", Quantity.N1, Dimension.Share),
        Of("--N2", "Speed of the second spool over its design value.", Quantity.N2, Dimension.Share),
        Of("--N3", "Speed of the third spool over its design value.", Quantity.N3, Dimension.Share),
        Of("--EPR", "Engine pressure ratio P5/P2, for instance 1.45.", Quantity.Epr, Dimension.Number),
        Of("--lever", "Lever position between idle and full, for instance \"80 %\".", Quantity.Lever, Dimension.Share),
    ];

    private bool _hasRating;

    public void AddTo(Command command, bool rating)
    {
        _hasRating = rating;
        command.Add(_design);
        command.Add(_idle);
        if (rating)
            command.Add(_rating);
        foreach (var choice in _choices)
            command.Add(choice.Option);
    }

    /// <summary>Refuses a command line that sets the power twice or not at all.</summary>
    public void RequireOne(ParseResult result, CommonOptions common)
    {
        var given = _choices.Where(c => result.GetValue(c.Option) is not null).Select(c => c.Option.Name).ToList();
        if (Rating(result) is not null)
            given.Add(_rating.Name);
        if (result.GetValue(_design))
            given.Add(_design.Name);
        if (result.GetValue(_idle))
            given.Add(_idle.Name);
        if (given.Count == 0)
            throw new UsageException(
                $"say at what power: --design, --idle, {(_hasRating ? "--rating, " : "")}{string.Join(", ", _choices.Select(c => c.Option.Name))}."
            );
        if (given.Count > 1)
            throw new UsageException($"{string.Join(" and ", given)} each set the power; use one of them.");
        if (result.GetValue(_design) && common.GivesConditions(result))
            throw new UsageException("--design is the point of the definition; it takes no condition or load.");
    }

    public OperatingPoint Solve(ParseResult result, CommonOptions common, EngineModel model)
    {
        if (result.GetValue(_design))
            return model.DesignPoint();
        var flight = common.Flight(result);
        var inputs = model.Inputs(flight);
        common.Loads(result, model.Engine)(inputs);
        if (result.GetValue(_idle))
            return model.AtIdle(flight, inputs);
        if (Rating(result) is { } name)
            return model.AtRating(flight, model.Rating(name), inputs);
        var choice = _choices.Single(c => result.GetValue(c.Option) is not null);
        return model.At(flight, choice.Quantity, Value(choice, result.GetValue(choice.Option)!), inputs);
    }

    /// <summary>Adds the options that set the power by a quantity alone.</summary>
    public void AddQuantitiesTo(Command command)
    {
        foreach (var choice in _choices)
            command.Add(choice.Option);
    }

    /// <summary>The one quantity that sets the power.</summary>
    public Limit Single(ParseResult result)
    {
        var given = _choices.Where(c => result.GetValue(c.Option) is not null).ToList();
        return given.Count == 1 ? new Limit(given[0].Quantity, Value(given[0], result.GetValue(given[0].Option)!))
            : given.Count == 0
                ? throw new UsageException(
                    $"say at what power: one of {string.Join(", ", _choices.Select(c => c.Option.Name))}."
                )
            : throw new UsageException(
                $"{string.Join(" and ", given.Select(c => c.Option.Name))} each set the power; use one of them."
            );
    }

    /// <summary>A power setting by the name of its option without the dashes; null for any other name.</summary>
    public Limit? Named(string name, string text) =>
        _choices.FirstOrDefault(c => c.Option.Name == "--" + name) is { } choice
            ? new Limit(choice.Quantity, Value(choice, text))
            : null;

    /// <summary>The names that <see cref="Named"/> knows.</summary>
    public IEnumerable<string> Names => _choices.Select(c => c.Option.Name[2..]);

    private static double Value(Choice choice, string text)
    {
        var value = choice.Dimension switch
        {
            Dimension.Share => CommonOptions.Share(choice.Option.Name, text),
            Dimension.Number => CommonOptions.Plain(choice.Option.Name, text),
            _ => CommonOptions.Quantity(choice.Option.Name, text, choice.Dimension),
        };
        if (choice.Quantity == Quantity.Lever && value is not (>= 0.0 and <= 1.0))
            throw new UsageException($"--lever: '{text}' must lie between 0 % (idle) and 100 % (full).");
        if (choice.Dimension == Dimension.Share && value > 2.0)
            throw new UsageException(
                $"{choice.Option.Name}: '{text}' is {value * 100.0:0} % of design; write a share such as \"95 %\"."
            );
        return value;
    }

    /// <summary>
    /// The rating whose limits a point is held against: the one asked for, else the first of the definition that can be worked
    /// out; null without any.
    /// </summary>
    public Matching.Rating? LimitsOf(ParseResult result, EngineModel model)
    {
        if (Rating(result) is { } name)
            return model.Rating(name);
        foreach (var rating in model.Engine.Definition.Ratings)
            try
            {
                return model.Rating(rating.Name);
            }
            catch (Matching.RatingException)
            {
                // A point stands without its ratings; 'flat-rating' says what is wrong with this one.
                continue;
            }

        return null;
    }

    private string? Rating(ParseResult result) => _hasRating ? result.GetValue(_rating) : null;

    private static Choice Of(string name, string description, Quantity quantity, Dimension dimension) =>
        new(CommonOptions.Text(name, description), quantity, dimension);
}
