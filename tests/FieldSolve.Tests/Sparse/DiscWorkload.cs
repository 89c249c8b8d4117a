using System.Diagnostics;
using FieldSolve.Sparse;

namespace FieldSolve.Tests.SparseTests;

/// <summary>Seconds and sizes of one analysis, factorisation and solve.</summary>
public sealed record DiscTimings(int Size, double Analyse, double FirstFactor, double Refactor, double Solve, long FactorNonZeros, double BackwardError);

/// <summary>
/// The load that the solver is measured with: quadratic triangles on the unit disc (rings of 6, 12, 18, … corners), an anisotropic
/// tensor with an antisymmetric part that varies over the disc, and an arc of the rim tied to ground. Numbered at random.
/// </summary>
public static class DiscWorkload
{
    public static Sample Build(int unknowns)
    {
        int rings = Math.Max(1, (int)Math.Round(Math.Sqrt(unknowns / 12.0)));
        var x = new List<double> { 0 };
        var y = new List<double> { 0 };
        for (int r = 1; r <= rings; r++)
        {
            for (int k = 0; k < 6 * r; k++)
            {
                (double sin, double cos) = Math.SinCos(Math.PI * k / (3 * r));
                x.Add(cos * r / rings);
                y.Add(sin * r / rings);
            }
        }
        var middles = new Dictionary<(int, int), int>();
        var triangles = new List<int[]>();
        for (int r = 1; r <= rings; r++)
        {
            for (int k = 0; k < 6 * r; k++)
            {
                int sector = k / r, step = k % r;
                Add(Corner(r, k), Corner(r, k + 1), Corner(r - 1, sector * (r - 1) + step));
                if (step < r - 1)
                {
                    Add(Corner(r - 1, sector * (r - 1) + step), Corner(r, k + 1), Corner(r - 1, sector * (r - 1) + step + 1));
                }
            }
        }

        int n = x.Count;
        int[] number = [.. Enumerable.Range(0, n)];
        new Random(3).Shuffle(number);
        var pairs = new List<(int, int)>(15 * triangles.Count);
        foreach (int[] t in triangles)
        {
            for (int a = 1; a < 6; a++)
            {
                for (int b = 0; b < a; b++)
                {
                    pairs.Add((number[t[a]], number[t[b]]));
                }
            }
        }
        SymmetricPattern pattern = Samples.Pattern(n, pairs);
        double[] values = new double[pattern.Count], px = new double[n], py = new double[n];
        foreach (int[] t in triangles)
        {
            AddTriangle(t);
        }
        for (int i = 0; i < n; i++)
        {
            (px[number[i]], py[number[i]]) = (x[i], y[i]);
            if (x[i] > 0.94 && x[i] * x[i] + y[i] * y[i] > 1 - 1e-9)
            {
                values[Samples.Place(pattern, number[i], number[i])] += 100;
            }
        }
        return new Sample(pattern, values, px, py);

        static int Corner(int r, int k) => r == 0 ? 0 : 1 + 3 * r * (r - 1) + k % (6 * r);

        void Add(int a, int b, int c) => triangles.Add([a, b, c, Middle(a, b), Middle(b, c), Middle(c, a)]);

        int Middle(int a, int b)
        {
            (int, int) key = (Math.Min(a, b), Math.Max(a, b));
            if (!middles.TryGetValue(key, out int m))
            {
                middles[key] = m = x.Count;
                x.Add((x[a] + x[b]) / 2);
                y.Add((y[a] + y[b]) / 2);
            }
            return m;
        }

        // ∫ ∇φ_i · K ∇φ_j by the rule of the three edge middles, exact for these gradients.
        void AddTriangle(int[] t)
        {
            double twice = (x[t[1]] - x[t[0]]) * (y[t[2]] - y[t[0]]) - (x[t[2]] - x[t[0]]) * (y[t[1]] - y[t[0]]);
            double cx = (x[t[0]] + x[t[1]] + x[t[2]]) / 3, cy = (y[t[0]] + y[t[1]] + y[t[2]]) / 3;
            double odd = 0.6 * (1 + 0.3 * Math.Sin(3 * cx) * Math.Cos(2 * cy));
            Span<double> gx = stackalloc double[3], gy = stackalloc double[3], dx = stackalloc double[6], dy = stackalloc double[6];
            for (int a = 0; a < 3; a++)
            {
                int b = t[(a + 1) % 3], c = t[(a + 2) % 3];
                gx[a] = (y[b] - y[c]) / twice;
                gy[a] = (x[c] - x[b]) / twice;
            }
            for (int q = 0; q < 3; q++)
            {
                for (int a = 0; a < 3; a++)
                {
                    double la = a == (q + 2) % 3 ? 0 : 0.5, lb = (a + 1) % 3 == (q + 2) % 3 ? 0 : 0.5;
                    dx[a] = (4 * la - 1) * gx[a];
                    dy[a] = (4 * la - 1) * gy[a];
                    dx[3 + a] = 4 * (la * gx[(a + 1) % 3] + lb * gx[a]);
                    dy[3 + a] = 4 * (la * gy[(a + 1) % 3] + lb * gy[a]);
                }
                for (int i = 0; i < 6; i++)
                {
                    for (int j = 0; j < 6; j++)
                    {
                        double flow = dx[i] * (3.25 * dx[j] + (1.3 + odd) * dy[j]) + dy[i] * ((1.3 - odd) * dx[j] + 1.75 * dy[j]);
                        values[Samples.Place(pattern, number[t[i]], number[t[j]])] += twice / 6 * flow;
                    }
                }
            }
        }
    }

    /// <summary>One run on a prepared matrix; wall-clock times.</summary>
    public static DiscTimings Measure(Sample sample)
    {
        double[] b = Samples.Vector(sample.Size, 1), x = new double[sample.Size];
        var clock = Stopwatch.StartNew();
        SparseAnalysis analysis = SparseAnalysis.Analyse(sample.Pattern, sample.X, sample.Y);
        double analyse = Lap();
        var lu = new SparseLu(analysis);
        lu.Factor(sample.Values);
        double first = Lap();
        lu.Factor(sample.Values);
        double again = Lap();
        lu.Solve(b, x);
        double solve = Lap();
        return new DiscTimings(sample.Size, analyse, first, again, solve, analysis.FactorNonZeros, sample.BackwardError(b, x));

        double Lap()
        {
            double seconds = clock.Elapsed.TotalSeconds;
            clock.Restart();
            return seconds;
        }
    }
}

public class DiscWorkloadTests
{
    [Fact]
    public void Disc_is_solved_to_rounding_with_little_fill()
    {
        DiscTimings found = DiscWorkload.Measure(DiscWorkload.Build(20_000));
        Assert.InRange(found.Size, 19_000, 21_000);
        Assert.InRange(found.BackwardError, 0, 1e-14);
        Assert.InRange(found.FactorNonZeros, 0, (long)(8.0 * found.Size * Math.Log2(found.Size)));
    }
}
