using System.Runtime.CompilerServices;

namespace CycleSim.Scalars;

/// <summary>A double as a scalar of the flow path: sizing, replay of a solved point, checks by hand.</summary>
public readonly struct Plain(double value) : IScalar<Plain>
{
    public double Value { get; } = value;

    public static Plain Constant(double value) => new(value);

    public static Plain Variable(double value, int index) => new(value);

    public static Plain operator +(in Plain a, in Plain b) => new(a.Value + b.Value);

    public static Plain operator -(in Plain a, in Plain b) => new(a.Value - b.Value);

    public static Plain operator *(in Plain a, in Plain b) => new(a.Value * b.Value);

    public static Plain operator /(in Plain a, in Plain b) => new(a.Value / b.Value);

    public static Plain operator +(in Plain a, double b) => new(a.Value + b);

    public static Plain operator -(in Plain a, double b) => new(a.Value - b);

    public static Plain operator -(double a, in Plain b) => new(a - b.Value);

    public static Plain operator *(in Plain a, double b) => new(a.Value * b);

    public static Plain operator /(in Plain a, double b) => new(a.Value / b);

    public static Plain operator -(in Plain a) => new(-a.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Plain Chain(double value, in Plain x, double dx) => new(value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Plain Chain(double value, in Plain x, double dx, in Plain y, double dy) => new(value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Plain Chain(double value, in Plain x, double dx, in Plain y, double dy, in Plain z, double dz) =>
        new(value);

    public static Plain Sqrt(in Plain x) => new(Math.Sqrt(x.Value));

    public static Plain Exp(in Plain x) => new(Math.Exp(x.Value));

    public static Plain Log(in Plain x) => new(Math.Log(x.Value));

    public static Plain Max(in Plain a, in Plain b) => a.Value >= b.Value ? a : b;
}
