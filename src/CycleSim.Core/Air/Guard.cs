using System.Runtime.CompilerServices;

namespace CycleSim.Air;

/// <summary>Checks shared by the air functions; the message is built only when a check fails.</summary>
internal static class Guard
{
    public static double StaticPressure(double value, [CallerArgumentExpression(nameof(value))] string? name = null) =>
        IsPositive(value)
            ? value
            : throw new ArgumentOutOfRangeException(
                name,
                $"A static pressure must be above 0 Pa and finite; {value:G6} Pa was given. Give it in "
                    + "pascal, absolute."
            );

    public static double StaticTemperature(
        double value,
        [CallerArgumentExpression(nameof(value))] string? name = null
    ) =>
        IsPositive(value)
            ? value
            : throw new ArgumentOutOfRangeException(
                name,
                $"A static temperature must be above 0 K and finite; {value:G6} K was given. Give it in kelvin."
            );

    private static bool IsPositive(double value) => value > 0.0 && double.IsFinite(value);
}
