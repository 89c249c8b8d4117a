using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Readings;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace FieldSolve.Runs;

/// <summary>
/// What textbook formulas make of the data: V is expanded in the current, each pair is taken for two tips on a uniform strip as wide as the sheet is across the line from
/// source to drain (field E = rho K with K = I/width along that line and none across it, second order E2 = -rho N(E1)), and four contacts for points on the rim.
/// </summary>
internal static class FormulaEstimate
{
    private const double Rank = 1e-6;

    private static readonly string[] SecondKeys = ["d11", "d12", "d16", "d21", "d22", "d26"];

    /// <summary>V = R1 I + R2 I² of one pair, on a strip of some width.</summary>
    private sealed record Expansion(MeasuredCircuit Circuit, Pair Pair, double R1, double S1, double? R2, double S2, Point2 Along, Point2 Left, double Width, double Length, double Aside);

    public static IReadOnlyList<FormulaValue> Of(SheetDevice device, MeasuredVoltages measured, IReadOnlyList<FittedParameter> fitted)
    {
        Expansion[] all = [.. Expand(device, measured)];
        var list = new List<FormulaValue>();
        Strip(device, [.. all.Where(e => e.Pair.Name != ReadingPlan.Source && (e.Length != 0 || e.Aside != 0))], fitted, list);
        FourPoints(device, all, fitted, list);
        return list;
    }

    private static IEnumerable<Expansion> Expand(SheetDevice device, MeasuredVoltages measured)
    {
        double offset = device.Drive?.Offset ?? 0;
        foreach (IGrouping<(int Circuit, int Pair), MeasuredVoltage> group in measured.Data.GroupBy(d => (d.Circuit, d.Pair)))
        {
            MeasuredVoltage[] data = [.. group.Where(d => d.Current != 0 && d.Harmonic is null or 0 or 1 or 2)];
            MeasuredCircuit circuit = measured.Circuits[group.Key.Circuit];
            Pair pair = circuit.Pairs[group.Key.Pair];
            bool second = data.Any(d => d.Harmonic is 0 or 2) || (data.Any(d => d.Harmonic is null && d.Current > 0) && data.Any(d => d.Harmonic is null && d.Current < 0))
                || data.Where(d => d.Harmonic is null).Select(d => d.Current).Distinct().Count() > 2;
            bool third = data.Where(d => d.Harmonic is null).Select(d => d.Current).Distinct().Count() > 4;
            int orders = third ? 3 : second ? 2 : 1;
            if (data.Length < orders || !data.Any(d => d.Harmonic is null or 1))
            {
                continue;
            }

            var a = new DenseMatrix(data.Length, orders);
            var b = new DenseVector(data.Length);
            double most = data.Max(d => Math.Abs(d.Current));
            for (int i = 0; i < data.Length; i++)
            {
                // Of I, I² and I³ with I = o + sqrt(2) x sin: the part that is read.
                double x = data[i].Current / most, o = offset / most;
                double[] row = data[i].Harmonic switch
                {
                    null => [x, x * x, x * x * x],
                    1 => [x, 2 * o * x, (3 * o * o * x) + (1.5 * x * x * x)],
                    2 => [0, -x * x / Math.Sqrt(2), -3 * o * x * x / Math.Sqrt(2)],
                    _ => [o, (o * o) + (x * x), (o * o * o) + (3 * o * x * x)],
                };
                for (int k = 0; k < orders; k++)
                {
                    a[i, k] = row[k] / data[i].Sigma;
                }

                b[i] = data[i].Value / data[i].Sigma;
            }

            if (Solve(a, b) is not { } found)
            {
                continue;
            }

            (Point2 n, Point2 t, double width) = Across(device, circuit.Wiring);
            Point2 from = Place(device, pair.Plus), to = Place(device, pair.Minus);
            yield return new(
                circuit, pair, found.X[0] / most, found.Error[0] / most, orders > 1 ? found.X[1] / (most * most) : null, orders > 1 ? found.Error[1] / (most * most) : 0,
                n, t, width, Point2.Dot(to - from, n), Point2.Dot(from - to, t));
        }
    }

    private static void Strip(SheetDevice device, Expansion[] all, IReadOnlyList<FittedParameter> fitted, List<FormulaValue> list)
    {
        bool Free(string key) => fitted.Any(f => f.Parameter.Target.Name.Length == 0 && f.Parameter.Kind.Key == key);
        if (!Free("a") && !Free("b"))
        {
            return;
        }

        // Resistivity as a sum of matrices: along known crystal axes, or the whole symmetric part; with the Hall part when that is free.
        bool turned = Free("axis"), hall = Free("hall");
        var basis = new List<double[]>();
        if (turned)
        {
            basis.AddRange([[1, 0, 0, 0], [0, 0, 0, 1], [0, 1, 1, 0]]);
        }
        else
        {
            (double s, double c) = Math.SinCos(device.Axis);
            basis.AddRange([[c * c, c * s, c * s, s * s], [s * s, -c * s, -c * s, c * c]]);
        }

        if (hall)
        {
            basis.Add([0, -1, 1, 0]);
        }

        if (all.Length < basis.Count)
        {
            return;
        }

        var a = new DenseMatrix(all.Length, basis.Count);
        var b = new DenseVector(all.Length);
        for (int i = 0; i < all.Length; i++)
        {
            for (int k = 0; k < basis.Count; k++)
            {
                a[i, k] = Read(all[i], Times(basis[k], all[i].Along)) / all[i].Width / all[i].S1;
            }

            b[i] = all[i].R1 / all[i].S1;
        }

        if (Solve(a, b) is not { } found)
        {
            return;
        }

        double[] rho = [.. Enumerable.Range(0, 4).Select(e => basis.Select((m, k) => m[e] * found.X[k]).Sum())];
        double determinant = (rho[0] * rho[3]) - (rho[1] * rho[2]);
        if (!(determinant > 0))
        {
            return;
        }

        // sigma = 1/rho; its symmetric part turned to the crystal axes. Of the two namings of the axes the one nearer to the fit is meant.
        double xx = rho[3] / determinant, yy = rho[0] / determinant, xy = -(rho[1] + rho[2]) / (2 * determinant), anti = (rho[2] - rho[1]) / (2 * determinant);
        double axis = device.Axis;
        if (turned)
        {
            axis = 0.5 * Math.Atan2(2 * xy, xx - yy);
            double near = fitted.First(f => f.Parameter.Kind.Key == "axis").Ended;
            axis += Math.PI / 2 * Math.Round((near - axis) / (Math.PI / 2));
        }

        (double sin, double cos) = Math.SinCos(axis);
        double along = (xx * cos * cos) + (yy * sin * sin) + (2 * xy * sin * cos), beside = (xx * sin * sin) + (yy * cos * cos) - (2 * xy * sin * cos);
        Add("a", along);
        Add("b", beside);
        Add("hall", anti);
        Add("axis", axis);
        Second(all, fitted, rho, axis, (key, value) => Add(key, value));

        void Add(string key, double value)
        {
            if (fitted.FirstOrDefault(f => f.Parameter.Target.Name.Length == 0 && f.Parameter.Kind.Key == key) is { } f)
            {
                double unit = f.Parameter.UnitSize;
                list.Add(new(
                    "uniform strip", key, f.Parameter.Unit, value / unit, f.Value / unit, f is { Value: { } v, StandardError: { } e } && e > 0 ? (value - v) / e : null));
            }
        }
    }

    private static void Second(Expansion[] all, IReadOnlyList<FittedParameter> fitted, double[] rho, double axis, Action<string, double> add)
    {
        string[] keys = [.. SecondKeys.Where(k => fitted.Any(f => f.Parameter.Target.Name.Length == 0 && f.Parameter.Kind.Key == k))];
        Expansion[] even = [.. all.Where(e => e.R2 is not null)];
        if (keys.Length == 0 || even.Length < keys.Length)
        {
            return;
        }

        (double sin, double cos) = Math.SinCos(axis);
        var a = new DenseMatrix(even.Length, keys.Length);
        var b = new DenseVector(even.Length);
        for (int i = 0; i < even.Length; i++)
        {
            Expansion e = even[i];
            Point2 first = Times(rho, e.Along);
            double ea = (cos * first.X) + (sin * first.Y), eb = (cos * first.Y) - (sin * first.X);
            for (int k = 0; k < keys.Length; k++)
            {
                double part = keys[k][2] switch { '1' => ea * ea, '2' => eb * eb, _ => 2 * ea * eb };
                (double na, double nb) = keys[k][1] == '1' ? (part, 0.0) : (0.0, part);
                Point2 second = Times(rho, new Point2((cos * na) - (sin * nb), (sin * na) + (cos * nb)));
                a[i, k] = -Read(e, second) / (e.Width * e.Width) / e.S2;
            }

            b[i] = e.R2!.Value / e.S2;
        }

        if (Solve(a, b) is { } found)
        {
            for (int k = 0; k < keys.Length; k++)
            {
                add(keys[k], found.X[k]);
            }
        }
    }

    private static void FourPoints(SheetDevice device, Expansion[] all, IReadOnlyList<FittedParameter> fitted, List<FormulaValue> list)
    {
        double? Value(string key) => fitted.FirstOrDefault(f => f.Parameter.Target.Name.Length == 0 && f.Parameter.Kind.Key == key) is { } f
            ? f.Value : Laws.LawSensitivity.Parameters(device.Law).Any(p => p.Key == key) ? Laws.LawSensitivity.Value(device.Law, key) : null;
        Expansion[] contacts = [.. all.Where(e => !e.Pair.Plus.IsTip && !e.Pair.Minus.IsTip && e.Pair.Name != ReadingPlan.Source)];
        var seen = new HashSet<string>();
        foreach (Expansion e in contacts)
        {
            int[] four = [.. new[] { e.Circuit.Wiring.Source, e.Circuit.Wiring.Drain, e.Pair.Plus.Index, e.Pair.Minus.Index }.Distinct().Order()];
            if (four.Length < 4 || !seen.Add(string.Join(' ', four)))
            {
                continue;
            }

            // In the order of the rim, seen from the middle.
            var middle = new Point2(four.Average(c => device.Contacts[c].Middle.X), four.Average(c => device.Contacts[c].Middle.Y));
            int[] rim = [.. four.OrderBy(c => Math.Atan2(device.Contacts[c].Middle.Y - middle.Y, device.Contacts[c].Middle.X - middle.X))];
            double[] first = Of(rim[0], rim[1], rim[2], rim[3]), second = Of(rim[1], rim[2], rim[3], rim[0]);
            if (first.Length > 0 && second.Length > 0 && first.Average() > 0 && second.Average() > 0)
            {
                double rs = VanDerPauw.SheetResistance(first.Average(), second.Average());
                double? fit = Value("a") is { } a && Value("b") is { } b ? 1 / Math.Sqrt(a * b) : null;
                string names = string.Join(" ", rim.Select(c => device.Contacts[c].Name));
                list.Add(new("van der Pauw", $"sheet resistance ({names})", "ohm", rs, fit, null));
            }
        }

        double[] Of(int a, int b, int c, int d) =>
        [
            .. contacts.Where(e => Same(e.Circuit.Wiring.Source, e.Circuit.Wiring.Drain, a, b) && Same(e.Pair.Plus.Index, e.Pair.Minus.Index, c, d)).Select(e => Math.Abs(e.R1)),
            .. contacts.Where(e => Same(e.Circuit.Wiring.Source, e.Circuit.Wiring.Drain, c, d) && Same(e.Pair.Plus.Index, e.Pair.Minus.Index, a, b)).Select(e => Math.Abs(e.R1)),
        ];

        static bool Same(int p, int q, int a, int b) => (p == a && q == b) || (p == b && q == a);
    }

    /// <summary>Unit vectors along the line from source to drain and to its left, and the extent of the sheet across it.</summary>
    public static (Point2 Along, Point2 Left, double Width) Across(SheetDevice device, Wiring wiring)
    {
        Point2 line = device.Contacts[wiring.Drain].Middle - device.Contacts[wiring.Source].Middle;
        var n = new Point2(line.X / line.Length, line.Y / line.Length);
        var t = new Point2(-n.Y, n.X);
        double low = double.PositiveInfinity, high = double.NegativeInfinity;
        foreach (DomainEdge e in device.Domain.Edges.Where(e => e.IsRim))
        {
            for (int k = 0; k <= 16; k++)
            {
                double across = Point2.Dot(e.Curve.At(k / 16.0), t);
                (low, high) = (Math.Min(low, across), Math.Max(high, across));
            }
        }

        return (n, t, high - low);
    }

    private static double Read(Expansion e, Point2 field) => (e.Length * Point2.Dot(field, e.Along)) - (e.Aside * Point2.Dot(field, e.Left));

    private static Point2 Times(double[] m, Point2 v) => new((m[0] * v.X) + (m[1] * v.Y), (m[2] * v.X) + (m[3] * v.Y));

    private static Point2 Place(SheetDevice device, Terminal t) => t.IsTip ? device.Tips[t.Index].At : device.Contacts[t.Index].Middle;

    // Least squares with standard errors; null when the columns do not stand apart.
    private static (double[] X, double[] Error)? Solve(DenseMatrix a, DenseVector b)
    {
        int m = a.ColumnCount;
        double[] norm = [.. Enumerable.Range(0, m).Select(k => a.Column(k).L2Norm())];
        if (norm.Any(x => !(x > 0)) || a.RowCount < m)
        {
            return null;
        }

        var svd = DenseMatrix.Create(a.RowCount, m, (i, k) => a[i, k] / norm[k]).Svd();
        if (svd.S[m - 1] < Rank * svd.S[0])
        {
            return null;
        }

        Vector<double> x = svd.Solve(b);
        double[] error = new double[m];
        for (int k = 0; k < m; k++)
        {
            double sum = 0;
            for (int s = 0; s < m; s++)
            {
                double v = svd.VT[s, k] / svd.S[s];
                sum += v * v;
            }

            error[k] = Math.Sqrt(sum) / norm[k];
        }

        return ([.. x.Select((v, k) => v / norm[k])], error);
    }
}
