using CycleSim.Engine;

namespace CycleSim.Definitions;

/// <summary>Ratings with their limits.</summary>
internal static class RatingBuilder
{
    /// <summary>Beyond this share of the design speed 107 has been written for 107 %.</summary>
    private const double HighestSpeed = 2.0;

    public static RatingDefinition Build(TableReader rating, int spools, string source, List<Problem> problems)
    {
        var limits = new List<Limit>();
        var seen = new Dictionary<Quantity, int>();
        foreach (var node in rating.Node.Children.Where(n => n.Name == "rating.limit"))
        {
            var limit = new TableReader(Schema.Find(node.Name)!, node, source, problems);
            if (limit.Text("quantity") is not { Length: > 0 } name)
                continue;
            var quantity = name == "EGT" ? Quantity.T45 : Enum.Parse<Quantity>(name, ignoreCase: true);
            if (!seen.TryAdd(quantity, node.Line))
                limit.Report("quantity", $"{name} is limited already in line {seen[quantity]}; drop one of the two.");
            if (quantity == Quantity.N2 && spools < 2 || quantity == Quantity.N3 && spools < 3)
                limit.Report("quantity", $"{name} needs a spool that this engine has not; it has {spools}.");
            if (limit.Quantity("value", DimensionOf(quantity)) is not { } value)
                continue;
            if (!(value > 0.0))
                limit.Report("value", "must be above zero.");
            else if (DimensionOf(quantity) == Dimension.Share && value > HighestSpeed)
                limit.Report(
                    "value",
                    $"is {value * 100.0:0.##} % of the design speed; at most {HighestSpeed * 100.0:0} % was expected, for "
                        + "instance \"107 %\" or 1.07."
                );
            else
                limits.Add(new Limit(quantity, value));
        }

        CheckEnds(rating, seen.Keys);
        return new RatingDefinition
        {
            Name = rating.Text("name"),
            Thrust = rating.Number("thrust", 0.0),
            FlatTo = rating.Number("flat_to"),
            Limits = limits,
        };
    }

    private static Dimension DimensionOf(Quantity quantity) =>
        quantity switch
        {
            Quantity.P3 => Dimension.Pressure,
            Quantity.N1 or Quantity.N2 or Quantity.N3 => Dimension.Share,
            Quantity.Epr => Dimension.Number,
            _ => Dimension.Temperature,
        };

    // What a rating must say before anything can be worked out from it; here with the line, before anything runs.
    private static void CheckEnds(TableReader rating, ICollection<Quantity> limited)
    {
        var (thrust, flatTo) = (rating.Has("thrust"), rating.Has("flat_to"));
        var hot = limited.Any(q => q is Quantity.T4 or Quantity.T41 or Quantity.T45 or Quantity.T5);
        if (!thrust && !flatTo)
            rating.Report("", "needs thrust or flat_to: nothing says how far the thrust is flat.");
        else if (limited.Count == 0 && !(thrust && flatTo))
            rating.Report("", "has nothing that ends its flat part; add a limit, or give both thrust and flat_to.");
        else if (thrust && flatTo && hot)
            rating.Report(
                "",
                "gives thrust, flat_to and a limit on a gas temperature; any two fix the third, so drop one."
            );
    }
}
