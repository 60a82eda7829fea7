using Tomlyn.Syntax;

namespace CycleSim.Definitions;

/// <summary>Checks one table against its description and hands out its values in SI.</summary>
internal sealed class TableReader
{
    private readonly Dictionary<string, double> _numbers = [];
    private readonly Dictionary<string, string> _texts = [];
    private readonly Dictionary<string, Entry> _entries = [];
    private readonly TableSpec _spec;
    private readonly string _source;
    private readonly List<Problem> _problems;

    public TableReader(TableSpec spec, TomlTableNode? node, string source, List<Problem> problems)
    {
        (_spec, _source, _problems) = (spec, source, problems);
        Node = node ?? new TomlTableNode(spec.Name, spec.Name, 0);
        Present = node is not null;
        foreach (var entry in Node.Entries)
            Take(entry);
        if (!Present)
            return;
        foreach (var key in spec.Keys)
            if (key.Required && !_entries.ContainsKey(key.Name))
                _problems.Add(new Problem(source, Node.Line, 1, Path(key.Name), $"is missing. {Expected(key)}"));
    }

    public TomlTableNode Node { get; }

    public bool Present { get; }

    public bool Has(string key) => _entries.ContainsKey(key);

    /// <summary>The value in SI, or NaN where the key is absent or was refused.</summary>
    public double Number(string key) => _numbers.GetValueOrDefault(key, double.NaN);

    /// <summary>The value in SI, the other one where the key is absent, NaN where it was refused.</summary>
    public double Number(string key, double otherwise) => Has(key) ? Number(key) : otherwise;

    public string Text(string key, string otherwise = "") => _texts.GetValueOrDefault(key, otherwise);

    /// <summary>Reports a problem at a key of this table, or at the table itself where the key is absent.</summary>
    public void Report(string key, string message)
    {
        var entry = _entries.GetValueOrDefault(key);
        _problems.Add(
            new Problem(
                _source,
                entry?.Line ?? Node.Line,
                entry?.Column ?? 1,
                key.Length > 0 ? Path(key) : Node.Path,
                message
            )
        );
    }

    /// <summary>Reports unless exactly one of the keys is there; returns whether that is so.</summary>
    public bool ExactlyOne(string a, string b)
    {
        if (Has(a) != Has(b))
            return true;
        if (Has(a))
            Report(b, $"is given beside {a}; give one of the two.");
        else
            Report("", $"needs {a} or {b}.");
        return false;
    }

    private string Path(string key) => Node.Path.Length > 0 ? $"{Node.Path}.{key}" : key;

    private void Take(Entry entry)
    {
        var spec = _spec.Keys.FirstOrDefault(k => k.Name == entry.Key);
        if (spec is null)
        {
            Refuse(
                entry,
                $"is not a key of {_spec.Header}.{Spelling.Suggest(entry.Key, _spec.Keys.Select(k => k.Name))} "
                    + $"Its keys are {string.Join(", ", _spec.Keys.Select(k => k.Name))}."
            );
            return;
        }

        if (!_entries.TryAdd(entry.Key, entry))
        {
            Refuse(entry, $"is given twice; the first is in line {_entries[entry.Key].Line}.");
            return;
        }

        switch (spec.Dimension)
        {
            case Dimension.Text:
                TakeText(spec, entry);
                break;
            case Dimension.Dependent:
                break;
            case Dimension.Switch:
                if (entry.Value is BooleanValueSyntax flag)
                    _numbers[spec.Name] = flag.Value ? 1.0 : 0.0;
                else
                    Refuse(entry, $"must be true or false, without quotes. {Expected(spec)}");
                break;
            default:
                if (Quantity(entry, spec.Dimension, spec) is { } value)
                    TakeNumber(spec, entry, value);
                break;
        }
    }

    /// <summary>Reads the entry of a key whose dimension the caller knows.</summary>
    public double? Quantity(string key, Dimension dimension) =>
        _entries.TryGetValue(key, out var entry) ? Quantity(entry, dimension, null) : null;

    private double? Quantity(Entry entry, Dimension dimension, KeySpec? spec)
    {
        var expected = spec is null
            ? $"Expected {Units.Name(dimension)}, for instance {Units.Example(dimension)}."
            : Expected(spec);
        var bare = dimension is Dimension.Number or Dimension.Share or Dimension.Whole;
        switch (entry.Value)
        {
            case IntegerValueSyntax whole when bare:
                return whole.Value;
            case FloatValueSyntax number when dimension is Dimension.Number or Dimension.Share:
                if (double.IsFinite(number.Value))
                    return number.Value;
                Refuse(entry, $"must be finite. {expected}");
                return null;
            case IntegerValueSyntax or FloatValueSyntax:
                Refuse(
                    entry,
                    dimension == Dimension.Whole
                        ? $"must be a whole number. {expected}"
                        : $"is a bare number; it needs a unit, in quotes. {expected}"
                );
                return null;
            case StringValueSyntax { Value: { } text }:
                if (dimension is Dimension.Number or Dimension.Whole)
                {
                    Refuse(
                        entry,
                        $"must be a number without quotes and unit; '{Spelling.OneLine(text)}' was given. {expected}"
                    );
                    return null;
                }

                if (Units.TryRead(text, dimension, out var value, out var problem))
                    return value;
                Refuse(entry, problem);
                return null;
            default:
                Refuse(entry, $"cannot be read. {expected}");
                return null;
        }
    }

    private void TakeText(KeySpec spec, Entry entry)
    {
        if (entry.Value is not StringValueSyntax { Value: { } text } || text.Trim().Length == 0)
        {
            Refuse(entry, $"must be a text in quotes. {Expected(spec)}");
            return;
        }

        if (spec.Choices is { } choices)
        {
            var choice = choices.FirstOrDefault(c => c.Equals(text.Trim(), StringComparison.OrdinalIgnoreCase));
            if (choice is null)
            {
                Refuse(entry, $"'{Spelling.OneLine(text)}' is none of {spec.Range}.{Spelling.Suggest(text, choices)}");
                return;
            }

            text = choice;
        }

        _texts[spec.Name] = text.Trim();
    }

    private void TakeNumber(KeySpec spec, Entry entry, double value)
    {
        if (spec.Holds(value))
            _numbers[spec.Name] = value;
        else
            Refuse(
                entry,
                $"{Spelling.OneLine(entry.Value?.ToString() ?? "")} is out of range: {spec.Range} was expected. {spec.Meaning}"
            );
    }

    private void Refuse(Entry entry, string message) =>
        _problems.Add(new Problem(_source, entry.Line, entry.Column, Path(entry.Key), message));

    private static string Expected(KeySpec spec) =>
        $"Expected {Units.Name(spec.Dimension)}, for instance {spec.Name} = {spec.Example ?? Units.Example(spec.Dimension)}.";
}
