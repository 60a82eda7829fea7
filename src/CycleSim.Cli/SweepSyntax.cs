using System.Globalization;
using System.Text.RegularExpressions;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Studies;

namespace CycleSim.Cli;

/// <summary>How axes of a sweep are written: NAME=VALUES, several joined by '&amp;' where they go together.</summary>
internal sealed partial class SweepSyntax(SizedEngine engine)
{
    public const string Help = """
        An axis is NAME=VALUES. Values are a list (mach=0.3,0.5,0.78), steps ("altitude=0 ft..40000 ft by 5000 ft") or a
        number of values ("lever=0 %..100 % in 11"). The first --over is the outermost loop, the last one runs fastest.
        Axes joined by & take their values together: "altitude=0 ft,10000 ft & cas=250 kt,280 kt".

        Names: altitude, mach, cas, isa, temperature, humidity; one power setting: rating, share RATING (of its thrust),
        thrust, installed-thrust, fuel-flow, T3, T4, T41, EGT, T5, N1, N2, N3, corrected-N1, EPR, P3, lever; and bleed PORT (in % or kg/s),
        offtake SPOOL, worn COMPONENT efficiency, worn COMPONENT flow.
        """;

    private static readonly Dictionary<string, (SweepInput Input, Dimension Dimension)> Plain = new(
        StringComparer.OrdinalIgnoreCase
    )
    {
        ["altitude"] = (SweepInput.Altitude, Dimension.Length),
        ["mach"] = (SweepInput.Mach, Dimension.Number),
        ["cas"] = (SweepInput.CalibratedAirspeed, Dimension.Speed),
        ["isa"] = (SweepInput.IsaOffset, Dimension.TemperatureDifference),
        ["temperature"] = (SweepInput.OutsideTemperature, Dimension.Temperature),
        ["humidity"] = (SweepInput.RelativeHumidity, Dimension.Share),
        ["thrust"] = (SweepInput.Power(Quantity.NetThrust), Dimension.Force),
        ["installed-thrust"] = (SweepInput.Power(Quantity.InstalledThrust), Dimension.Force),
        ["fuel-flow"] = (SweepInput.Power(Quantity.FuelFlow), Dimension.MassFlow),
        ["T3"] = (SweepInput.Power(Quantity.T3), Dimension.Temperature),
        ["T4"] = (SweepInput.Power(Quantity.T4), Dimension.Temperature),
        ["T41"] = (SweepInput.Power(Quantity.T41), Dimension.Temperature),
        ["EGT"] = (SweepInput.Power(Quantity.T45), Dimension.Temperature),
        ["T5"] = (SweepInput.Power(Quantity.T5), Dimension.Temperature),
        ["N1"] = (SweepInput.Power(Quantity.N1), Dimension.Share),
        ["N2"] = (SweepInput.Power(Quantity.N2), Dimension.Share),
        ["N3"] = (SweepInput.Power(Quantity.N3), Dimension.Share),
        ["corrected-N1"] = (SweepInput.Power(Quantity.CorrectedN1), Dimension.Share),
        ["EPR"] = (SweepInput.Power(Quantity.Epr), Dimension.Number),
        ["P3"] = (SweepInput.Power(Quantity.P3), Dimension.Pressure),
        ["lever"] = (SweepInput.Power(Quantity.Lever), Dimension.Share),
    };

    /// <summary>One --over.</summary>
    /// <exception cref="UsageException">It cannot be understood.</exception>
    public SweepLevel Level(string text)
    {
        var axes = text.Split('&').Select(Axis).ToList();
        try
        {
            return SweepLevel.Paired([.. axes.Select(a => a.Input)], [.. axes.Select(a => a.Values)]);
        }
        catch (SweepException error)
        {
            throw new UsageException($"--over \"{text}\": {error.Message}");
        }
    }

    /// <summary>An input that is held, from an option of the same name.</summary>
    public static KeyValuePair<SweepInput, double> Held(string name, string text)
    {
        var (input, dimension) = Plain[name];
        return new(input, Value($"--{name}", text.Trim(), dimension));
    }

    private (SweepInput Input, double[] Values) Axis(string text)
    {
        var at = text.IndexOf('=');
        if (at <= 0 || at == text.Length - 1)
            throw new UsageException($"--over: '{text.Trim()}' is not of the form \"altitude=0 ft,10000 ft\".");
        var name = text[..at].Trim();
        var values = text[(at + 1)..].Trim();
        if (name.Equals("rating", StringComparison.OrdinalIgnoreCase))
        {
            var names = values.Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries);
            return (SweepInput.Ratings(names), [.. Enumerable.Range(0, names.Length).Select(i => (double)i)]);
        }

        if (Plain.TryGetValue(name, out var plain))
            return (plain.Input, Values(name, values, plain.Dimension, v => v));
        var words = name.Split(' ', 2, StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries);
        if (words.Length == 2)
            switch (words[0].ToLowerInvariant())
            {
                case "share":
                    return (SweepInput.ShareOf(words[1]), Values(name, values, Dimension.Share, v => v));
                case "offtake":
                    var spool = $"power_offtake_{words[1]}_W";
                    return (Input(name, spool), Values(name, values, Dimension.Power, v => v));
                case "bleed":
                    return values.Contains("kg/") || values.Contains("lb")
                        ? (Input(name, $"air_{words[1]}_kg_per_s"), Values(name, values, Dimension.MassFlow, v => v))
                        : (Input(name, $"air_{words[1]}_fraction"), Values(name, values, Dimension.Share, v => v));
                case "worn":
                    var health = words[1].Split(' ', StringSplitOptions.RemoveEmptyEntries);
                    if (health is [var component, "efficiency" or "flow"])
                        return (
                            Input(name, $"{health[1]}_factor_{component}"),
                            Values(name, values, Dimension.Share, v => 1.0 + v)
                        );
                    break;
            }

        throw new UsageException(
            $"--over: there is no axis '{name}'; there are {string.Join(", ", Plain.Keys)}, rating, share RATING, bleed PORT, "
                + "offtake SPOOL, worn COMPONENT efficiency, worn COMPONENT flow."
        );
    }

    private SweepInput Input(string name, string input)
    {
        try
        {
            return SweepInput.Load(engine, input);
        }
        catch (SweepException)
        {
            var words = name.Split(' ');
            IEnumerable<string> known =
                words[0] == "bleed" ? engine.Ports.Select(p => p.Port.Name)
                : words[0] == "offtake" ? engine.Spools.Select(s => s.Name)
                : engine
                    .Compressors.Select(c => c.Name)
                    .Concat(engine.Turbines.Select(t => t.Definition.Name))
                    .Concat(engine.HasFan ? ["fan"] : []);
            throw new UsageException(
                $"--over: '{name}' is not in this engine; for '{words[0]}' it has {string.Join(", ", known)}."
            );
        }
    }

    /// <summary>A list, steps or a number of values, given to an option of its own.</summary>
    /// <exception cref="UsageException">It cannot be understood.</exception>
    public static double[] List(string option, string text, Dimension dimension) =>
        Read(option, text, dimension, v => v);

    private static double[] Values(string name, string text, Dimension dimension, Func<double, double> convert) =>
        Read($"--over {name}", text, dimension, convert);

    private static double[] Read(string where, string text, Dimension dimension, Func<double, double> convert)
    {
        if (!text.Contains(".."))
        {
            var parts = text.Split(',', StringSplitOptions.TrimEntries);
            OneUnit(where, parts);
            return [.. parts.Select(p => convert(Value(where, p, dimension)))];
        }

        var match = RangeForm().Match(text);
        if (!match.Success)
            throw new UsageException(
                $"{where}: '{text}' needs steps or a number of values, for instance \"0 ft..40000 ft by 5000 ft\" or "
                    + "\"0 ft..40000 ft in 9\"."
            );
        var (from, to, last) = (match.Groups[1].Value, match.Groups[2].Value, match.Groups[4].Value);
        OneUnit(where, from, to);
        var first = Value(where, from, dimension);
        var end = Value(where, to, dimension);
        try
        {
            if (match.Groups[3].Value == "in")
                return
                [
                    .. SweepValues
                        .Count(
                            first,
                            end,
                            int.TryParse(last, NumberStyles.None, CultureInfo.InvariantCulture, out var count)
                                ? count
                                : throw new UsageException($"{where}: '{last}' is no whole number of values.")
                        )
                        .Select(convert),
                ];
            var difference = dimension == Dimension.Temperature ? Dimension.TemperatureDifference : dimension;
            if (dimension != Dimension.Temperature)
                OneUnit(where, from, last);
            return [.. SweepValues.Steps(first, end, Value(where, last, difference)).Select(convert)];
        }
        catch (SweepException error)
        {
            throw new UsageException($"{where}: {error.Message}");
        }
    }

    // Feet beside metres in one axis are more likely a slip than meant.
    private static void OneUnit(string where, params string[] values)
    {
        var units = values.Select(v => UnitOf().Match(v).Value.Trim()).Distinct().ToList();
        if (units.Count > 1)
            throw new UsageException(
                $"{where}: an axis is written in one unit; '{values.First(v => v.EndsWith(units[1], StringComparison.Ordinal))}' "
                    + $"stands beside '{values[0]}'."
            );
    }

    private static double Value(string where, string text, Dimension dimension) =>
        dimension switch
        {
            Dimension.Number => CommonOptions.Plain(where, text),
            Dimension.Share => CommonOptions.Share(where, text),
            _ => Definitions.Units.TryRead(text, dimension, out var value, out var problem)
                ? value
                : throw new UsageException($"{where}: {problem}"),
        };

    [GeneratedRegex(@"^\s*(.+?)\s*\.\.\s*(.+?)\s+(by|in)\s+(.+?)\s*$")]
    private static partial Regex RangeForm();

    [GeneratedRegex(@"(?<=^\s*[+-]?[0-9.]*(?:[eE][+-]?[0-9]+)?)[^0-9.+-].*$")]
    private static partial Regex UnitOf();
}
