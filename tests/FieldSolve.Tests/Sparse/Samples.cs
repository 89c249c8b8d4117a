using FieldSolve.Sparse;
using MathNet.Numerics.LinearAlgebra;

namespace FieldSolve.Tests.SparseTests;

/// <summary>A matrix with its pattern and, for mesh-like ones, places of the unknowns.</summary>
public sealed record Sample(SymmetricPattern Pattern, double[] Values, double[] X, double[] Y)
{
    public int Size => Pattern.Size;

    public Matrix<double> Dense()
    {
        Matrix<double> dense = Matrix<double>.Build.Dense(Size, Size);
        for (int i = 0; i < Size; i++)
        {
            for (int k = Pattern.Start[i]; k < Pattern.Start[i + 1]; k++)
            {
                dense[i, Pattern.Column[k]] = Values[k];
            }
        }
        return dense;
    }

    /// <summary>The symmetric part.</summary>
    public Sample Symmetrised()
    {
        double[] values = new double[Values.Length];
        for (int i = 0; i < Size; i++)
        {
            for (int k = Pattern.Start[i]; k < Pattern.Start[i + 1]; k++)
            {
                values[k] = 0.5 * (Values[k] + Values[Samples.Place(Pattern, Pattern.Column[k], i)]);
            }
        }
        return this with { Values = values };
    }

    public SparseLu Factored(bool places = true, bool symmetric = false)
    {
        var lu = new SparseLu(SparseAnalysis.Analyse(Pattern, places ? X : [], places ? Y : []), symmetric);
        lu.Factor(Values);
        return lu;
    }

    /// <summary>‖b − A x‖∞ / (‖A‖∞ ‖x‖∞ + ‖b‖∞), or the same with Aᵀ.</summary>
    public double BackwardError(ReadOnlySpan<double> b, ReadOnlySpan<double> x, bool transposed = false)
    {
        double[] r = new double[Size], sums = new double[Size];
        for (int i = 0; i < Size; i++)
        {
            for (int k = Pattern.Start[i]; k < Pattern.Start[i + 1]; k++)
            {
                int j = Pattern.Column[k];
                r[transposed ? j : i] += Values[k] * x[transposed ? i : j];
                sums[transposed ? j : i] += Math.Abs(Values[k]);
            }
        }
        double residual = 0, largestX = 0, largestB = 0;
        for (int i = 0; i < Size; i++)
        {
            residual = Math.Max(residual, Math.Abs(b[i] - r[i]));
            largestX = Math.Max(largestX, Math.Abs(x[i]));
            largestB = Math.Max(largestB, Math.Abs(b[i]));
            Assert.True(double.IsFinite(x[i]));
        }
        return residual / (sums.Max() * largestX + largestB);
    }
}

public static class Samples
{
    /// <summary>Builds the pattern from unordered pairs; the diagonal is added, doubles are allowed.</summary>
    public static SymmetricPattern Pattern(int n, IEnumerable<(int I, int J)> pairs)
    {
        SortedSet<int>[] rows = [.. Enumerable.Range(0, n).Select(i => new SortedSet<int> { i })];
        foreach ((int i, int j) in pairs)
        {
            rows[i].Add(j);
            rows[j].Add(i);
        }
        int[] start = new int[n + 1];
        for (int i = 0; i < n; i++)
        {
            start[i + 1] = start[i] + rows[i].Count;
        }
        return new SymmetricPattern(start, [.. rows.SelectMany(r => r)]);
    }

    /// <summary>
    /// Random values on a pattern. The symmetric part is diagonally dominant with a margin, hence positive definite; the
    /// antisymmetric part is as large as the symmetric one, so rows alone are not dominant.
    /// </summary>
    public static double[] Values(SymmetricPattern pattern, Random random, double margin = 0.05)
    {
        double[] values = new double[pattern.Count], sums = new double[pattern.Size];
        for (int i = 0; i < pattern.Size; i++)
        {
            for (int k = pattern.Start[i]; k < pattern.Start[i + 1]; k++)
            {
                int j = pattern.Column[k];
                if (j <= i)
                {
                    continue;
                }
                double even = random.NextDouble() < 0.1 ? 0 : 2 * random.NextDouble() - 1, odd = 2 * random.NextDouble() - 1;
                values[k] = even + odd;
                values[Place(pattern, j, i)] = even - odd;
                sums[i] += Math.Abs(even);
                sums[j] += Math.Abs(even);
            }
        }
        for (int i = 0; i < pattern.Size; i++)
        {
            values[Place(pattern, i, i)] = sums[i] * (1 + margin) + 0.01;
        }
        return values;
    }

    public static Sample Random(int n, double pairsPerRow, int seed, int denseRows = 0)
    {
        var random = new Random(seed);
        var pairs = new List<(int, int)>();
        for (int k = 0; k < n * pairsPerRow; k++)
        {
            pairs.Add((random.Next(n), random.Next(n)));
        }
        for (int d = 0; d < denseRows; d++)
        {
            int row = random.Next(n);
            pairs.AddRange(Enumerable.Range(0, n).Where(_ => random.NextDouble() < 0.8).Select(j => (row, j)));
        }
        SymmetricPattern pattern = Pattern(n, pairs);
        return new Sample(pattern, Values(pattern, random), Vector(n, seed + 1), Vector(n, seed + 2));
    }

    public static double[] Vector(int n, int seed)
    {
        var random = new Random(seed);
        double[] v = new double[n];
        for (int i = 0; i < n; i++)
        {
            v[i] = 2 * random.NextDouble() - 1;
        }
        return v;
    }

    /// <summary>
    /// Quadratic triangles on a grid of cells x cells squares, each cut in two; all nodes of a triangle are coupled by a singular
    /// element matrix with an antisymmetric part, plus a <paramref name="support"/> at the first node. Rows are shuffled. With a
    /// <paramref name="grading"/> below 1 the cells shrink by that factor from one to the next.
    /// </summary>
    public static Sample Mesh(int cells, double grading = 1, double support = 1e-3, bool hub = false)
    {
        int side = 2 * cells + 1, nodes = side * side, n = nodes + (hub ? 1 : 0);
        int[] number = [.. Enumerable.Range(0, n)];
        var random = new Random(11);
        random.Shuffle(number);
        double[] line = new double[side], x = new double[n], y = new double[n];
        double at = 0, size = 1;
        for (int i = 0; i < cells; i++, size *= grading)
        {
            line[2 * i] = at;
            line[2 * i + 1] = at + size / 2;
            at += size;
        }
        line[side - 1] = at;
        int Node(int i, int j) => number[j * side + i];
        var triangles = new List<int[]>();
        for (int j = 0; j < side; j++)
        {
            for (int i = 0; i < side; i++)
            {
                x[Node(i, j)] = line[i] - at;
                y[Node(i, j)] = line[j] - at;
            }
        }
        for (int j = 0; j < side - 1; j += 2)
        {
            for (int i = 0; i < side - 1; i += 2)
            {
                triangles.Add([Node(i, j), Node(i + 2, j), Node(i + 2, j + 2), Node(i + 1, j), Node(i + 2, j + 1), Node(i + 1, j + 1)]);
                triangles.Add([Node(i, j), Node(i + 2, j + 2), Node(i, j + 2), Node(i + 1, j + 1), Node(i + 1, j + 2), Node(i, j + 1)]);
            }
        }
        var pairs = new List<(int, int)>();
        foreach (int[] t in triangles)
        {
            for (int a = 0; a < 6; a++)
            {
                for (int b = 0; b < a; b++)
                {
                    pairs.Add((t[a], t[b]));
                }
            }
        }
        if (hub)
        {
            pairs.AddRange(Enumerable.Range(0, side).Select(i => (Node(i, 0), number[nodes])));
        }
        SymmetricPattern pattern = Pattern(n, pairs);
        double[] values = new double[pattern.Count];
        double lastOdd = 0;
        foreach (int[] t in triangles)
        {
            for (int a = 0; a < 6; a++)
            {
                for (int b = 0; b < a; b++)
                {
                    double even = -0.5 - random.NextDouble();
                    values[Place(pattern, t[a], t[b])] += even;
                    values[Place(pattern, t[b], t[a])] += even;
                    values[Place(pattern, t[a], t[a])] -= even;
                    values[Place(pattern, t[b], t[b])] -= even;
                }
                int next = a % 3 == 2 ? a - 2 : a + 1;   // around the corners and around the middles: rows still sum to 0
                double odd = a % 3 == 0 ? 0.6 * (2 * random.NextDouble() - 1) : lastOdd;
                values[Place(pattern, t[a], t[next])] += odd;
                values[Place(pattern, t[next], t[a])] -= odd;
                lastOdd = odd;
            }
        }
        for (int i = 0; hub && i < side; i++)
        {
            int h = number[nodes], v = Node(i, 0);
            values[Place(pattern, v, h)] -= 1;
            values[Place(pattern, h, v)] -= 1;
            values[Place(pattern, v, v)] += 1;
            values[Place(pattern, h, h)] += 1;
        }
        values[Place(pattern, number[0], number[0])] += support;
        return new Sample(pattern, values, x, y);
    }

    public static int Place(SymmetricPattern pattern, int i, int j)
    {
        int place = Array.BinarySearch(pattern.Column, pattern.Start[i], pattern.Start[i + 1] - pattern.Start[i], j);
        return place >= 0 ? place : throw new ArgumentException($"({i}, {j}) is not in the pattern.");
    }
}
