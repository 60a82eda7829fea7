using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using CycleSim.Scalars;

namespace CycleSim.Matching;

/// <summary>Dense linear equations of at most eight unknowns, one vector a row, on the caller's memory.</summary>
internal static class LinearSystem
{
    /// <summary>
    /// Solves rows * x = rhs by elimination with partial pivoting; rows and rhs are overwritten, rhs with the solution.
    /// False where the matrix is singular to rounding.
    /// </summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public static bool Solve(Span<Vector512<double>> rows, Span<double> rhs, int n)
    {
        for (var k = 0; k < n; k++)
        {
            var pivot = k;
            var largest = Math.Abs(Element(rows, k, k));
            for (var i = k + 1; i < n; i++)
            {
                var size = Math.Abs(Element(rows, i, k));
                if (size > largest)
                    (pivot, largest) = (i, size);
            }

            if (!(largest > 1e-14))
                return false;
            if (pivot != k)
            {
                (rows[pivot], rows[k]) = (rows[k], rows[pivot]);
                (rhs[pivot], rhs[k]) = (rhs[k], rhs[pivot]);
            }

            var reciprocal = 1.0 / Element(rows, k, k);
            for (var i = k + 1; i < n; i++)
            {
                var factor = Element(rows, i, k) * reciprocal;
                if (factor == 0.0)
                    continue;
                rows[i] -= rows[k] * Vector512.Create(factor);
                rhs[i] -= rhs[k] * factor;
            }
        }

        for (var k = n - 1; k >= 0; k--)
        {
            var sum = rhs[k];
            for (var j = k + 1; j < n; j++)
                sum -= Element(rows, k, j) * rhs[j];
            rhs[k] = sum / Element(rows, k, k);
        }

        return true;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static double Element(Span<Vector512<double>> rows, int i, int j) =>
        Unsafe.Add(ref Unsafe.As<Vector512<double>, double>(ref rows[i]), j);
}
