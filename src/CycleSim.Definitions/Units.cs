using System.Globalization;
using UnitsNet;

namespace CycleSim.Definitions;

/// <summary>What kind of value a key holds.</summary>
public enum Dimension
{
    Text,

    /// <summary>A TOML number without unit.</summary>
    Number,

    /// <summary>A share: a number or a text in per cent.</summary>
    Share,
    Whole,
    Switch,
    Length,
    Pressure,
    Temperature,
    TemperatureDifference,
    MassFlow,
    Force,
    Power,
    RotationalSpeed,
    SpecificEnergy,
    SpecificHeat,
    Speed,

    /// <summary>The dimension follows from another key of the same table.</summary>
    Dependent,
}

/// <summary>Reads a quantity with its unit into SI.</summary>
public static class Units
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

    private static readonly Dimension[] WithUnits =
    [
        Dimension.Length,
        Dimension.Pressure,
        Dimension.Temperature,
        Dimension.MassFlow,
        Dimension.Force,
        Dimension.Power,
        Dimension.RotationalSpeed,
        Dimension.SpecificEnergy,
        Dimension.SpecificHeat,
        Dimension.Speed,
        Dimension.Share,
    ];

    /// <summary>
    /// Reads a text into SI (m, Pa, K, kg/s, N, W, m/s, 1/min for rotational speed, J/kg, J/(kg K), shares as ratios). On
    /// failure <paramref name="problem"/> says what was wrong and what was expected.
    /// </summary>
    public static bool TryRead(string text, Dimension dimension, out double value, out string problem)
    {
        problem = "";
        if (TryParse(text, dimension, out value) && double.IsFinite(value))
            return true;
        var expected = $"Expected {Name(dimension)}, for instance {Example(dimension)}.";
        if (double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out _))
            problem = $"'{text}' has no unit. {expected}";
        else
        {
            var other = WithUnits.FirstOrDefault(d => d != dimension && TryParse(text, d, out _), Dimension.Text);
            problem =
                other != Dimension.Text
                    ? $"'{text}' is {Name(other)}. {expected}"
                    : $"'{text}' cannot be read. {expected}";
        }

        return false;
    }

    private static bool TryParse(string text, Dimension dimension, out double value)
    {
        var culture = CultureInfo.InvariantCulture;
        var t = text.Trim().Replace("degC", "°C").Replace("degF", "°F").Replace("degR", "°R");
        value = double.NaN;
        switch (dimension)
        {
            case Dimension.Share:
                return t.EndsWith('%') && Scaled(t[..^1], 0.01, out value);
            case Dimension.TemperatureDifference:
                return t.EndsWith('K') && Scaled(t[..^1], 1.0, out value)
                    || t.EndsWith("°C", StringComparison.Ordinal) && Scaled(t[..^2], 1.0, out value)
                    || t.EndsWith("°F", StringComparison.Ordinal) && Scaled(t[..^2], 5.0 / 9.0, out value)
                    || t.EndsWith("°R", StringComparison.Ordinal) && Scaled(t[..^2], 5.0 / 9.0, out value);
            case Dimension.Length:
                return Length.TryParse(t, culture, out var length) && Set(length.Meters, out value);
            case Dimension.Pressure:
                return Pressure.TryParse(t, culture, out var pressure) && Set(pressure.Pascals, out value);
            case Dimension.Temperature:
                return Temperature.TryParse(t, culture, out var temperature) && Set(temperature.Kelvins, out value);
            case Dimension.MassFlow:
                return MassFlow.TryParse(t, culture, out var flow) && Set(flow.KilogramsPerSecond, out value);
            case Dimension.Force:
                return Force.TryParse(t, culture, out var force) && Set(force.Newtons, out value);
            case Dimension.Power:
                return Power.TryParse(t, culture, out var power) && Set((double)power.Watts, out value);
            case Dimension.RotationalSpeed:
                return RotationalSpeed.TryParse(t, culture, out var speed)
                    && Set(speed.RevolutionsPerMinute, out value);
            case Dimension.SpecificEnergy:
                return SpecificEnergy.TryParse(t, culture, out var energy) && Set(energy.JoulesPerKilogram, out value);
            case Dimension.Speed:
                return Speed.TryParse(t.EndsWith(" kt", StringComparison.Ordinal) ? t[..^1] + "n" : t, culture, out var v)
                    && Set(v.MetersPerSecond, out value);
            case Dimension.SpecificHeat:
                return t.EndsWith(" kJ/(kg K)", StringComparison.Ordinal) && Scaled(t[..^10], 1000.0, out value)
                    || t.EndsWith(" J/(kg K)", StringComparison.Ordinal) && Scaled(t[..^9], 1.0, out value);
            default:
                return false;
        }
    }

    private static bool Set(double from, out double to)
    {
        to = from;
        return true;
    }

    private static bool Scaled(string number, double factor, out double value)
    {
        var read = double.TryParse(number, NumberStyles.Float, CultureInfo.InvariantCulture, out value);
        value *= factor;
        return read;
    }
}
