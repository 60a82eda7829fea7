using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Studies;
using Units = CycleSim.Definitions.Units;

namespace CycleSim.Cli;

/// <summary>Named loads on the command line: a name, then what it takes from ports and spools.</summary>
internal sealed class LoadOption
{
    private const string Example = "\"packs: customer-bleed=1.2 kg/s, high=40 kW\"";

    public readonly Option<string[]> Option = new("--load")
    {
        Description =
            $"A load by name and what it takes, for instance {Example}: air by kg/s or % of the flow into the port's "
            + "compressor, power by kW from a spool; on top of --bleed and --offtake; may be repeated.",
    };

    public IReadOnlyList<NamedLoad> Read(ParseResult result) => [.. (result.GetValue(Option) ?? []).Select(Load)];

    private NamedLoad Load(string text)
    {
        var at = text.IndexOf(':');
        if (at <= 0 || text[..at].Trim().Length == 0)
            throw new UsageException($"{Option.Name}: '{text}' is not of the form {Example}.");
        var items = text[(at + 1)..].Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries);
        if (items.Length == 0)
            throw new UsageException($"{Option.Name}: '{text}' takes nothing; write it as in {Example}.");
        return new NamedLoad(text[..at].Trim(), [.. items.Select(Item)]);
    }

    private LoadItem Item(string text)
    {
        var at = text.IndexOf('=');
        if (at <= 0 || at == text.Length - 1)
            throw new UsageException($"{Option.Name}: '{text}' is not of the form customer-bleed=1.2 kg/s.");
        var (source, value) = (text[..at].Trim(), text[(at + 1)..].Trim());
        if (Units.TryRead(value, Dimension.Share, out var share, out _))
            return LoadItem.AirShare(source, share);
        if (Units.TryRead(value, Dimension.MassFlow, out var flow, out _))
            return LoadItem.Air(source, flow);
        return Units.TryRead(value, Dimension.Power, out var power, out _)
            ? LoadItem.Shaft(source, power)
            : throw new UsageException(
                $"{Option.Name}: '{value}' is neither air (1.2 kg/s, 2 %) nor power (40 kW) that {source} could give."
            );
    }
}
