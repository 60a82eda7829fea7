using CycleSim.Scalars;

namespace CycleSim.Components;

/// <summary>
/// A nozzle coefficient over the nozzle's pressure ratio: monotone cubic between the given points (Fritsch and Carlson 1980),
/// level outside them.
/// </summary>
public sealed class CoefficientCurve
{
    private readonly double[] _at,
        _values,
        _slopes;

    /// <param name="pressureRatios">total over ambient pressure, rising, at least two</param>
    /// <param name="values">the coefficient at each, above 0 and at most 1</param>
    /// <exception cref="ArgumentException">Fewer than two points, unequal numbers, pressure ratios that do not rise.</exception>
    public CoefficientCurve(IReadOnlyList<double> pressureRatios, IReadOnlyList<double> values)
    {
        if (pressureRatios.Count != values.Count)
            throw new ArgumentException(
                $"{pressureRatios.Count} pressure ratios and {values.Count} coefficients; expected one for each."
            );
        if (pressureRatios.Count < 2)
            throw new ArgumentException("a coefficient over pressure ratio needs at least two points.");
        for (var i = 1; i < pressureRatios.Count; i++)
            if (!(pressureRatios[i] > pressureRatios[i - 1]))
                throw new ArgumentException(
                    FormattableString.Invariant(
                        $"the pressure ratios must rise; {pressureRatios[i]} follows {pressureRatios[i - 1]}."
                    )
                );
        foreach (var value in values)
            if (value is not (> 0.0 and <= 1.0))
                throw new ArgumentException(
                    FormattableString.Invariant($"a coefficient of {value}; expected above 0 and at most 1.")
                );
        (_at, _values) = ([.. pressureRatios], [.. values]);
        _slopes = Slopes(_at, _values);
    }

    public IReadOnlyList<double> PressureRatios => _at;

    public IReadOnlyList<double> Values => _values;

    /// <summary>The coefficient at a pressure ratio.</summary>
    public T At<T>(in T pressureRatio)
        where T : struct, IScalar<T>
    {
        var x = pressureRatio.Value;
        if (!(x > _at[0]))
            return T.Constant(_values[0]);
        if (x >= _at[^1])
            return T.Constant(_values[^1]);
        var k = 0;
        while (x > _at[k + 1])
            k++;
        // Cubic Hermite over the interval, u from 0 to 1.
        var width = _at[k + 1] - _at[k];
        var u = (x - _at[k]) / width;
        double rise = _values[k + 1] - _values[k],
            a = _slopes[k] * width,
            b = _slopes[k + 1] * width;
        var square = 3.0 * rise - 2.0 * a - b;
        var cube = a + b - 2.0 * rise;
        var value = _values[k] + u * (a + u * (square + u * cube));
        return T.Chain(value, pressureRatio, (a + u * (2.0 * square + 3.0 * u * cube)) / width);
    }

    // Level at both ends, so that the curve has no corner where it ends; harmonic mean of the neighbouring slopes between,
    // level at a turning point: the curve stays between its points.
    private static double[] Slopes(double[] at, double[] values)
    {
        var slopes = new double[at.Length];
        for (var i = 1; i < at.Length - 1; i++)
        {
            var before = (values[i] - values[i - 1]) / (at[i] - at[i - 1]);
            var after = (values[i + 1] - values[i]) / (at[i + 1] - at[i]);
            slopes[i] = before * after > 0.0 ? 2.0 * before * after / (before + after) : 0.0;
        }

        return slopes;
    }
}
