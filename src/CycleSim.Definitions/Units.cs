using System.Globalization;
using System.Text.RegularExpressions;

namespace CycleSim.Definitions;

/// <summary>Reads a quantity with its unit into SI.</summary>
public static partial class Units
{
    /// <summary>An example of how a value of this dimension is written.</summary>
    public static string Example(Dimension dimension) =>
        dimension switch
        {
            Dimension.Number => "0.8",
            Dimension.Share => "\"7 %\" or 0.07",
            Dimension.Whole => "4",
            Dimension.Switch => "true",
            Dimension.Length => "\"35000 ft\"",
            Dimension.Area => "\"0.8 m2\"",
            Dimension.Pressure => "\"1013.25 hPa\"",
            Dimension.Temperature => "\"1650 K\"",
            Dimension.TemperatureDifference => "\"15 K\"",
            Dimension.MassFlow => "\"420 kg/s\"",
            Dimension.Force => "\"120 kN\"",
            Dimension.Power => "\"80 kW\"",
            Dimension.RotationalSpeed => "\"3800 rpm\"",
            Dimension.SpecificEnergy => "\"43.1 MJ/kg\"",
            Dimension.SpecificHeat => "\"1005 J/(kg K)\"",
            Dimension.Speed => "\"250 kt\"",
            _ => "\"text\"",
        };

    /// <summary>How a dimension is called in a message.</summary>
    public static string Name(Dimension dimension) =>
        dimension switch
        {
            Dimension.Number => "a number without unit",
            Dimension.Share => "a share",
            Dimension.Whole => "a whole number",
            Dimension.Switch => "true or false",
            Dimension.Length => "a length",
            Dimension.Area => "an area",
            Dimension.Pressure => "a pressure",
            Dimension.Temperature => "a temperature",
            Dimension.TemperatureDifference => "a temperature difference",
            Dimension.MassFlow => "a mass flow",
            Dimension.Force => "a force",
            Dimension.Power => "a power",
            Dimension.RotationalSpeed => "a rotational speed",
            Dimension.SpecificEnergy => "a specific energy",
            Dimension.SpecificHeat => "a specific heat",
            Dimension.Speed => "a speed",
            _ => "a text",
        };

    /// <summary>
    /// Reads a text, a number with a decimal point and then a unit, into SI (m, Pa, K, kg/s, N, W, m/s, 1/min for rotational
    /// speed, J/kg, J/(kg K), shares as ratios). On failure the value is NaN and <paramref name="problem"/> says what was
    /// wrong and what was expected.
    /// </summary>
    public static bool TryRead(string text, Dimension dimension, out double value, out string problem)
    {
        value = double.NaN;
        var expected = $"Expected {Name(dimension)}, for instance {Example(dimension)}.";
        var units = string.Join(", ", UnitTable.Spellings(dimension));
        var shown = $"'{Spelling.OneLine(text)}'";
        var parts = NumberAndUnit().Match(text);
        problem =
            text.Contains(',')
                ? $"{shown} has a comma; write a decimal point, and nothing between thousands. {expected}"
            : !parts.Success ? $"{shown} cannot be read. {expected}"
            : "";
        if (problem.Length > 0)
            return false;

        var number = double.Parse(parts.Groups[1].Value, NumberStyles.Float, CultureInfo.InvariantCulture);
        var unit = Degrees(parts.Groups[2].Value.Trim());
        if (unit.Length == 0)
            problem = $"{shown} has no unit. {expected} Units: {units}.";
        else if (UnitTable.Find(dimension, unit) is not { } known)
            problem = $"{shown} {WrongUnit(unit, dimension)} {expected} Units: {units}.";
        else if (!Fits(number) || !double.IsFinite(known.ToInside(number)))
            problem = $"{shown} is too large a number. {expected}";
        else
            value = known.ToInside(number);
        return problem.Length == 0;
    }

    // Beyond this nothing in an engine is meant, and conversions may overflow.
    private static bool Fits(double number) => Math.Abs(number) < 1e20;

    private static string WrongUnit(string unit, Dimension dimension)
    {
        var other = UnitTable.Dimensions.FirstOrDefault(d => UnitTable.Find(d, unit) is not null, Dimension.Text);
        if (other != Dimension.Text)
            return $"is {Name(other)}.";
        var near = UnitTable
            .Spellings(dimension)
            .FirstOrDefault(u => u.Equals(unit, StringComparison.OrdinalIgnoreCase));
        return $"has an unknown unit, '{Spelling.OneLine(unit)}'." + (near is null ? "" : $" Did you mean '{near}'?");
    }

    // The raised o of Spanish keyboards and the one-letter signs look the same as the degree sign.
    private static string Degrees(string unit) => unit.Replace('º', '°').Replace("℃", "°C").Replace("℉", "°F");

    [GeneratedRegex(
        @"^\s*([+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?)(?![0-9._])(.*)$",
        RegexOptions.Singleline
    )]
    private static partial Regex NumberAndUnit();
}
