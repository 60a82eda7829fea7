using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace CycleSim.Scalars;

/// <summary>
/// A value with its partial derivatives with respect to eight seeded variables, held in one 512-bit vector
/// (two 256-bit ones on machines without the wider unit; the runtime splits it).
/// </summary>
public readonly struct Dual(double value, Vector512<double> partials) : IScalar<Dual>
{
    /// <summary>How many derivatives are carried.</summary>
    public const int Width = 8;

    private readonly Vector512<double> _partials = partials;

    public double Value { get; } = value;

    /// <summary>The eight partial derivatives, in the order in which the variables were seeded.</summary>
    public Vector512<double> Partials
    {
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        get => _partials;
    }

    public double Partial(int index) => _partials[index];

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Constant(double value) => new(value, Vector512<double>.Zero);

    /// <summary>The variable itself: derivative one in its own place.</summary>
    public static Dual Variable(double value, int index) => new(value, Vector512<double>.Zero.WithElement(index, 1.0));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator +(in Dual a, in Dual b) => new(a.Value + b.Value, a._partials + b._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator -(in Dual a, in Dual b) => new(a.Value - b.Value, a._partials - b._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator *(in Dual a, in Dual b) =>
        new(a.Value * b.Value, Fma(a._partials, Vector512.Create(b.Value), b._partials * Vector512.Create(a.Value)));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator /(in Dual a, in Dual b)
    {
        var r = 1.0 / b.Value;
        var q = a.Value * r;
        return new(q, Fma(b._partials, Vector512.Create(-q * r), a._partials * Vector512.Create(r)));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator +(in Dual a, double b) => new(a.Value + b, a._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator -(in Dual a, double b) => new(a.Value - b, a._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator -(double a, in Dual b) => new(a - b.Value, -b._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator *(in Dual a, double b) => new(a.Value * b, a._partials * Vector512.Create(b));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator /(in Dual a, double b) => a * (1.0 / b);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual operator -(in Dual a) => new(-a.Value, -a._partials);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Chain(double value, in Dual x, double dx) => new(value, x._partials * Vector512.Create(dx));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Chain(double value, in Dual x, double dx, in Dual y, double dy) =>
        new(value, Fma(x._partials, Vector512.Create(dx), y._partials * Vector512.Create(dy)));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Chain(double value, in Dual x, double dx, in Dual y, double dy, in Dual z, double dz) =>
        new(
            value,
            Fma(
                x._partials,
                Vector512.Create(dx),
                Fma(y._partials, Vector512.Create(dy), z._partials * Vector512.Create(dz))
            )
        );

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Sqrt(in Dual x)
    {
        var r = Math.Sqrt(x.Value);
        return Chain(r, x, 0.5 / r);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Exp(in Dual x)
    {
        var r = Math.Exp(x.Value);
        return Chain(r, x, r);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Log(in Dual x) => Chain(Math.Log(x.Value), x, 1.0 / x.Value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Dual Max(in Dual a, in Dual b) => a.Value >= b.Value ? a : b;

    // Vector512.FusedMultiplyAdd falls to a library call per lane where the machine has no such instruction.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) =>
        System.Runtime.Intrinsics.X86.Fma.IsSupported || System.Runtime.Intrinsics.Arm.AdvSimd.Arm64.IsSupported
            ? Vector512.FusedMultiplyAdd(a, b, c)
            : a * b + c;
}
