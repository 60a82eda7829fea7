using System.CommandLine;
using CycleSim.Definitions;
using CycleSim.Engine;
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
            + "compressor, \"open\" for what the definition lets through a port that is normally shut, power by kW from a spool; on top of --bleed and --offtake; may be repeated.",
    };

    public IReadOnlyList<NamedLoad> Read(ParseResult result, EngineDefinition engine) =>
        [.. (result.GetValue(Option) ?? []).Select(text => Load(text, engine))];

    private NamedLoad Load(string text, EngineDefinition engine)
    {
        var at = text.IndexOf(':');
        if (at <= 0 || text[..at].Trim().Length == 0)
            throw new UsageException($"{Option.Name}: '{text}' is not of the form {Example}.");
        var items = text[(at + 1)..].Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries);
        if (items.Length == 0)
            throw new UsageException($"{Option.Name}: '{text}' takes nothing; write it as in {Example}.");
        return new NamedLoad(text[..at].Trim(), [.. items.SelectMany(item => Items(item, engine))]);
    }

    private IEnumerable<LoadItem> Items(string text, EngineDefinition engine)
    {
        var at = text.IndexOf('=');
        if (at <= 0 || at == text.Length - 1)
            throw new UsageException($"{Option.Name}: '{text}' is not of the form customer-bleed=1.2 kg/s.");
        var (source, value) = (text[..at].Trim(), text[(at + 1)..].Trim());
        if (value == "open")
            return Open(source, engine);
        if (Units.TryRead(value, Dimension.Share, out var share, out _))
            return [LoadItem.AirShare(source, share)];
        if (Units.TryRead(value, Dimension.MassFlow, out var flow, out _))
            return [LoadItem.Air(source, flow)];
        return Units.TryRead(value, Dimension.Power, out var power, out _)
            ? [LoadItem.Shaft(source, power)]
            : throw new UsageException(
                $"{Option.Name}: '{value}' is neither air (1.2 kg/s, 2 %) nor power (40 kW) that {source} could give."
            );
    }

    private IEnumerable<LoadItem> Open(string name, EngineDefinition engine)
    {
        var shut = engine.AirPorts.Where(p => p.NormallyShut).ToList();
        var port =
            shut.Find(p => p.Name == name)
            ?? throw new UsageException(
                $"{Option.Name}: '{name}' is not a port that is normally shut; this engine has "
                    + (shut.Count == 0 ? "none." : string.Join(", ", shut.Select(p => p.Name)) + ".")
            );
        if (port.Fraction > 0.0)
            yield return LoadItem.AirShare(name, port.Fraction);
        if (port.Flow > 0.0)
            yield return LoadItem.Air(name, port.Flow);
    }
}
