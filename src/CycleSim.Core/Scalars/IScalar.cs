namespace CycleSim.Scalars;

/// <summary>
/// The number type over which every formula of the flow path is written once. <see cref="Plain"/> is one double;
/// <see cref="Dual"/> carries eight exact partial derivatives beside the value.
/// </summary>
/// <remarks>
/// Gas properties and map look-ups are not differentiated operation by operation: they compute a value and its few
/// partial derivatives in doubles and enter through <c>Chain</c>, which touches the vector of partials once per
/// argument. That, and not the width of the vector, is what makes an exact Jacobian nearly free.
/// </remarks>
public interface IScalar<T>
    where T : struct, IScalar<T>
{
    /// <summary>The value without its derivatives.</summary>
    double Value { get; }

    static abstract T Constant(double value);

    /// <summary>A variable with derivative one in the place <paramref name="index"/>, where derivatives are carried.</summary>
    static abstract T Variable(double value, int index);

    static abstract T operator +(in T a, in T b);

    static abstract T operator -(in T a, in T b);

    static abstract T operator *(in T a, in T b);

    static abstract T operator /(in T a, in T b);

    static abstract T operator +(in T a, double b);

    static abstract T operator -(in T a, double b);

    static abstract T operator -(double a, in T b);

    static abstract T operator *(in T a, double b);

    static abstract T operator /(in T a, double b);

    static abstract T operator -(in T a);

    /// <summary>A value with its derivative with respect to one argument.</summary>
    static abstract T Chain(double value, in T x, double dx);

    /// <summary>A value with its derivatives with respect to two arguments.</summary>
    static abstract T Chain(double value, in T x, double dx, in T y, double dy);

    /// <summary>A value with its derivatives with respect to three arguments.</summary>
    static abstract T Chain(double value, in T x, double dx, in T y, double dy, in T z, double dz);

    static abstract T Sqrt(in T x);
    static abstract T Exp(in T x);
    static abstract T Log(in T x);

    /// <summary>The larger of two; the first where they are equal.</summary>
    static abstract T Max(in T a, in T b);
}
