using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace CycleSim.Maps;

/// <summary>Value and gradient of a compressor map at one speed and one position along the speed line.</summary>
public struct MapReading
{
    /// <summary>Lanes: corrected flow, pressure ratio less one, isentropic efficiency.</summary>
    public Vector256<double> Value,
        PerSpeed,
        PerBeta;
}

/// <summary>
/// A compressor map as a grid over relative corrected speed (1 at design) and beta, the position along a speed line from
/// 0 at its choked end to 1 on the surge line. Bicubic between the grid points, with slopes from natural cubic splines,
/// so that values and first derivatives are continuous (the second too, along the grid lines). It is never extrapolated
/// silently: a reading outside goes on straight from the edge and the solver refuses a solution there.
/// </summary>
public sealed class CompressorMap
{
    private readonly double[] _speeds,
        _betas;
    private readonly Vector256<double>[] _coefficients;

    /// <param name="speeds">relative corrected speeds, rising</param>
    /// <param name="betas">positions, rising from 0 to 1</param>
    /// <param name="flow">corrected flow, any unit, indexed [speed, beta]</param>
    /// <param name="pressureRatio">total-pressure ratio, above 1</param>
    /// <param name="efficiency">isentropic efficiency, 0 to 1</param>
    public CompressorMap(double[] speeds, double[] betas, double[,] flow, double[,] pressureRatio, double[,] efficiency)
    {
        (_speeds, _betas) = (speeds, betas);
        int ns = speeds.Length,
            nb = betas.Length;
        var f = new Vector256<double>[ns, nb];
        for (var i = 0; i < ns; i++)
        for (var j = 0; j < nb; j++)
            f[i, j] = Vector256.Create(flow[i, j], pressureRatio[i, j] - 1.0, efficiency[i, j], 0.0);

        var fs = Slopes(f, speeds, alongFirst: true);
        var fb = Slopes(f, betas, alongFirst: false);
        var fsb = Slopes(fs, betas, alongFirst: false);
        _coefficients = new Vector256<double>[(ns - 1) * (nb - 1) * 16];
        for (var i = 0; i < ns - 1; i++)
        for (var j = 0; j < nb - 1; j++)
            FillCell(i, j, f, fs, fb, fsb);
    }

    public double LowestSpeed => _speeds[0];

    public double HighestSpeed => _speeds[^1];

    /// <summary>Grid speeds and positions, for drawing.</summary>
    public IReadOnlyList<double> Speeds => _speeds;

    public IReadOnlyList<double> Betas => _betas;

    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    public void Read(double speed, double beta, out MapReading reading)
    {
        var s = Math.Clamp(speed, _speeds[0], _speeds[^1]);
        var b = Math.Clamp(beta, 0.0, 1.0);
        var i = Cell(_speeds, s);
        var j = Cell(_betas, b);
        var hs = 1.0 / (_speeds[i + 1] - _speeds[i]);
        var hb = 1.0 / (_betas[j + 1] - _betas[j]);
        var u = Vector256.Create((s - _speeds[i]) * hs);
        var v = Vector256.Create((b - _betas[j]) * hb);

        ref var c = ref _coefficients[(i * (_betas.Length - 1) + j) * 16];
        // Rows are powers of u; each row a cubic in v.
        Row(ref c, 0, v, out var r0, out var d0);
        Row(ref c, 4, v, out var r1, out var d1);
        Row(ref c, 8, v, out var r2, out var d2);
        Row(ref c, 12, v, out var r3, out var d3);
        var two = Vector256.Create(2.0);
        var three = Vector256.Create(3.0);
        reading.Value = ((r3 * u + r2) * u + r1) * u + r0;
        reading.PerSpeed = ((three * r3 * u + two * r2) * u + r1) * Vector256.Create(hs);
        reading.PerBeta = (((d3 * u + d2) * u + d1) * u + d0) * Vector256.Create(hb);
        reading.Value += reading.PerSpeed * Vector256.Create(speed - s) + reading.PerBeta * Vector256.Create(beta - b);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Row(
        ref Vector256<double> cell,
        int row,
        Vector256<double> v,
        out Vector256<double> value,
        out Vector256<double> slope
    )
    {
        var a0 = Unsafe.Add(ref cell, row);
        var a1 = Unsafe.Add(ref cell, row + 1);
        var a2 = Unsafe.Add(ref cell, row + 2);
        var a3 = Unsafe.Add(ref cell, row + 3);
        value = ((a3 * v + a2) * v + a1) * v + a0;
        slope = (Vector256.Create(3.0) * a3 * v + Vector256.Create(2.0) * a2) * v + a1;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static int Cell(double[] grid, double x)
    {
        var i = (int)((x - grid[0]) / (grid[^1] - grid[0]) * (grid.Length - 1));
        i = Math.Clamp(i, 0, grid.Length - 2);
        while (i > 0 && x < grid[i])
            i--;
        while (i < grid.Length - 2 && x >= grid[i + 1])
            i++;
        return i;
    }

    private void FillCell(
        int i,
        int j,
        Vector256<double>[,] f,
        Vector256<double>[,] fs,
        Vector256<double>[,] fb,
        Vector256<double>[,] fsb
    )
    {
        var hs = Vector256.Create(_speeds[i + 1] - _speeds[i]);
        var hb = Vector256.Create(_betas[j + 1] - _betas[j]);
        Span<Vector256<double>> alongU = stackalloc Vector256<double>[4];
        Span<Vector256<double>> valueAt = stackalloc Vector256<double>[8];
        // Cubics in u of the value and of its slope in v, at both ends of the cell in v.
        for (var e = 0; e < 2; e++)
        {
            Hermite(f[i, j + e], f[i + 1, j + e], hs * fs[i, j + e], hs * fs[i + 1, j + e], alongU);
            for (var k = 0; k < 4; k++)
                valueAt[4 * e + k] = alongU[k];
        }

        Span<Vector256<double>> slopeAt = stackalloc Vector256<double>[8];
        for (var e = 0; e < 2; e++)
        {
            Hermite(
                hb * fb[i, j + e],
                hb * fb[i + 1, j + e],
                hs * hb * fsb[i, j + e],
                hs * hb * fsb[i + 1, j + e],
                alongU
            );
            for (var k = 0; k < 4; k++)
                slopeAt[4 * e + k] = alongU[k];
        }

        var cell = (i * (_betas.Length - 1) + j) * 16;
        Span<Vector256<double>> alongV = stackalloc Vector256<double>[4];
        for (var k = 0; k < 4; k++)
        {
            Hermite(valueAt[k], valueAt[4 + k], slopeAt[k], slopeAt[4 + k], alongV);
            for (var l = 0; l < 4; l++)
                _coefficients[cell + 4 * k + l] = alongV[l];
        }
    }

    private static void Hermite(
        Vector256<double> p0,
        Vector256<double> p1,
        Vector256<double> m0,
        Vector256<double> m1,
        Span<Vector256<double>> c
    )
    {
        var two = Vector256.Create(2.0);
        var three = Vector256.Create(3.0);
        c[0] = p0;
        c[1] = m0;
        c[2] = three * (p1 - p0) - two * m0 - m1;
        c[3] = two * (p0 - p1) + m0 + m1;
    }

    /// <summary>Slopes at the knots of cubic splines through all grid lines of one direction (not-a-knot is not needed here).</summary>
    private static Vector256<double>[,] Slopes(Vector256<double>[,] f, double[] x, bool alongFirst)
    {
        int n = x.Length,
            lines = alongFirst ? f.GetLength(1) : f.GetLength(0);
        var slopes = new Vector256<double>[f.GetLength(0), f.GetLength(1)];
        var diagonal = new double[n];
        var rhs = new Vector256<double>[n];
        for (var line = 0; line < lines; line++)
        {
            Vector256<double> At(int k) => alongFirst ? f[k, line] : f[line, k];
            // Parabolic ends: the slope of the parabola through the first (last) three points.
            diagonal[0] = diagonal[n - 1] = 1.0;
            rhs[0] = EndSlope(At(0), At(1), At(2), x[1] - x[0], x[2] - x[1]);
            rhs[n - 1] = EndSlope(At(n - 1), At(n - 2), At(n - 3), x[n - 2] - x[n - 1], x[n - 3] - x[n - 2]);
            for (var k = 1; k < n - 1; k++)
            {
                double h0 = x[k] - x[k - 1],
                    h1 = x[k + 1] - x[k];
                // h1 m(k-1) + 2 (h0 + h1) m(k) + h0 m(k+1) = 3 (h1 d0 + h0 d1): continuity of the second derivative.
                var d0 = (At(k) - At(k - 1)) / Vector256.Create(h0);
                var d1 = (At(k + 1) - At(k)) / Vector256.Create(h1);
                rhs[k] = Vector256.Create(3.0 * h1) * d0 + Vector256.Create(3.0 * h0) * d1;
                diagonal[k] = 2.0 * (h0 + h1);
                if (k == 1)
                    rhs[k] -= Vector256.Create(h1) * rhs[0];
                else
                {
                    // Eliminate m(k-1) with the row above: its diagonal is diagonal[k-1], its upper entry x[k-1]-x[k-2].
                    var factor = h1 / diagonal[k - 1];
                    diagonal[k] -= factor * (x[k - 1] - x[k - 2]);
                    rhs[k] -= Vector256.Create(factor) * rhs[k - 1];
                }
            }

            var next = rhs[n - 1];
            Put(n - 1, next);
            for (var k = n - 2; k >= 1; k--)
            {
                var h0 = x[k] - x[k - 1];
                next = (rhs[k] - Vector256.Create(h0) * next) / Vector256.Create(diagonal[k]);
                Put(k, next);
            }

            Put(0, rhs[0]);

            void Put(int k, Vector256<double> slope)
            {
                if (alongFirst)
                    slopes[k, line] = slope;
                else
                    slopes[line, k] = slope;
            }
        }

        return slopes;
    }

    private static Vector256<double> EndSlope(
        Vector256<double> f0,
        Vector256<double> f1,
        Vector256<double> f2,
        double h0,
        double h1
    )
    {
        var d0 = (f1 - f0) / Vector256.Create(h0);
        var d1 = (f2 - f1) / Vector256.Create(h1);
        return d0 - (d1 - d0) * Vector256.Create(h0 / (h0 + h1));
    }
}
