using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Tests.PicturesTests;

/// <summary>
/// A drive result without a solver: a disc or a ring with twelve contacts, three wirings, and the potential of a line source
/// and a line sink just outside the rim, plus a small part that grows with the square of the current.
/// </summary>
internal static class SyntheticDrive
{
    private const double Radius = 4e-6, Conductance = 2e-3, ContactWidth = 0.7e-6;
    private const int Steps = 11;

    /// <summary>Makes the result.</summary>
    /// <param name="title">Title of the device.</param>
    /// <param name="inner">Radius of the hole in metres; 0 for a disc.</param>
    /// <param name="rings">Rings of triangles from the centre to the rim.</param>
    /// <param name="mapSteps">Positions in the drive at which each wiring has a map.</param>
    /// <param name="linear">What the law says of itself.</param>
    public static DriveResult Make(string title = "Disc with twelve arms", double inner = 0, int rings = 16, int[]? mapSteps = null, bool linear = false)
    {
        SheetDevice device = Device(title, inner, linear);
        TriangleMesh mesh = Mesh(device.Domain, inner, rings);
        IReadOnlyList<double> currents = device.Drive!.Currents;
        List<CurveRow> rows = [], reversed = [];
        List<FieldMap> maps = [];
        List<WiringSummary> summaries = [];
        for (int w = 0; w < device.Wirings.Count; w++)
        {
            Wiring wiring = device.Wirings[w];
            for (int k = 0; k < Steps; k++)
            {
                rows.Add(Row(wiring, currents[k], w, k == Steps - 1));
                reversed.Add(Row(wiring, -currents[k], w, k == Steps - 1));
            }

            maps.AddRange((mapSteps ?? [2, 4, 6, 8, 10]).Select(k => Map(device, mesh, wiring, currents[k], k)));
            summaries.Add(new(
                wiring.Name, 30 * w, 183.4, 92.1234567, w == 0 ? 0.0123 : 14.56, new(-0.0234 * (w + 1), 2.3e-5, 1e-9, 0.99985, 10),
                w == 1 ? 5e-4 : null, 5e-4));
        }

        return new()
        {
            Device = device,
            Rows = rows,
            ReversedRows = reversed,
            Summaries = summaries,
            Maps = maps,
            Mesh = mesh,
            Levels = Levels(device),
            Cautions = ["Two-terminal voltage reaches 91.7 mV; that is below the touch-safe limit (60 V DC, IEC 61010-1, dry conditions)."],
            Warnings = ["Wiring '30 deg' left its law at 500 µA near (3.9 µm, 0.35 µm)."],
            Figures = new(12_345, 6_000, 456_789, 66, 140, 130, 3.2e-14),
            Stages = [new("read", 0.012), new("mesh", 0.34), new("factor", 0.81), new("solve", 1.62)],
        };
    }

    private static CurveRow Row(Wiring wiring, double current, int w, bool last)
    {
        double odd = 92.1 * current, even = 3e-5 * odd * odd;
        double acrossOdd = 14.5 * w * current, acrossEven = -0.0234 * (w + 1) * odd * odd * (1 + (0.8 * odd));
        double error = 1e-6 * Math.Abs(odd);
        List<Reading> readings =
        [
            new("along", odd + even, error, odd, even, 1e-9, 0, 0),
            new("across", acrossOdd + acrossEven, error / 3, acrossOdd, acrossEven, 2e-10, 0, 0),
            new("source", 2 * odd, 2 * error, 2 * odd, 0, 1e-9, 0, 0),
        ];
        bool outside = w == 1 && last;
        return new(
            wiring.Name, current, readings, current == 0 ? 0 : 4, outside ? RowStatus.OutsideLaw : RowStatus.Ok,
            outside ? new(3.9e-6, 0.35e-6, 4.2e6, 3.1e6, 12e-9) : null, 210, 3.3e7);
    }

    private static List<RefinementLevel> Levels(SheetDevice device) =>
    [
        .. Enumerable.Range(0, 4).Select(level => new RefinementLevel(level, 600 << (2 * level), 1300 << (2 * level),
        [
            .. device.Wirings.SelectMany((w, i) => new LevelEstimate[]
            {
                new(w.Name, "along", "value", 0.046, 4e-5 * (i + 1) * Math.Pow(0.09, level), 4.6e-6),
                new(w.Name, "across", "even", -5e-5, 3e-7 * (i + 1) * Math.Pow(0.12, level), 5e-8),
            }),
        ])),
    ];

    private static SheetDevice Device(string title, double inner, bool linear)
    {
        double half = ContactWidth / Radius / 2;
        List<Point2> vertices = [];
        List<DomainEdge> edges = [];
        List<Contact> contacts = [];
        for (int k = 0; k < 24; k++)
        {
            double from = (k / 2 * Math.PI / 6) + (k % 2 == 0 ? -half : half);
            vertices.Add(new(Radius * Math.Cos(from), Radius * Math.Sin(from)));
        }

        for (int k = 0; k < 24; k++)
        {
            double from = (k / 2 * Math.PI / 6) + (k % 2 == 0 ? -half : half);
            double sweep = k % 2 == 0 ? 2 * half : (Math.PI / 6) - (2 * half);
            Curve arc = Curve.Arc(default, Radius, from, sweep, vertices[k], vertices[(k + 1) % 24]);
            edges.Add(new(k, (k + 1) % 24, arc, true, k % 2 == 0 ? k / 2 : -1));
            if (k % 2 == 0)
            {
                contacts.Add(new($"c{(k / 2) + 1}", ContactKind.Edge, 0, 0, [arc], ContactWidth) { Middle = arc.At(0.5) });
            }
        }

        List<IReadOnlyList<Curve>> drawn = [[Curve.Arc(default, 1.03 * Radius, 0, 2 * Math.PI)]];
        if (inner > 0)
        {
            vertices.Add(new(inner, 0));
            vertices.Add(new(-inner, 0));
            edges.Add(new(24, 25, Curve.Arc(default, inner, 0, -Math.PI, vertices[24], vertices[25]), true, -1));
            edges.Add(new(25, 24, Curve.Arc(default, inner, Math.PI, -Math.PI, vertices[25], vertices[24]), true, -1));
            drawn.Add([Curve.Arc(default, 0.94 * inner, 0, -2 * Math.PI)]);
        }

        Tip tip = new("p1", new(2e-6, -1.2e-6));
        vertices.Add(tip.At);
        Terminal C(int number) => new(false, ((number + 11) % 12));
        Wiring W(string name, int shift) => new(
            name, (6 + shift) % 12, shift,
            new("along", C(6 + shift), C(2 + shift)), new("across", C(4 + shift), C(10 + shift)),
            shift == 0 ? [new("extra, quoted", C(5), new(true, 0))] : []);
        return new()
        {
            Title = title,
            Path = "disc-12.toml",
            Sha256 = new string('a', 64),
            Domain = new(vertices, edges, [], [vertices.Count - 1]),
            Shape = inner > 0 ? "ring" : "disc",
            Drawn = drawn,
            Law = new PlainLaw(linear),
            Axis = Math.PI / 6,
            Contacts = contacts,
            Tips = [tip],
            Wirings = [W("0 deg", 0), W("30 deg", 1), W("60 deg", 2)],
            Drive = new(0, 5e-4, Steps, true, [], 0),
            Thickness = 12e-9,
            DeadEdge = 0.03 * Radius,
        };
    }

    private static TriangleMesh Mesh(Domain domain, double inner, int rings)
    {
        List<double> x = [], y = [];
        List<int> corners = [];
        int[] first = new int[rings + 1];
        int Count(int ring) => inner > 0 ? 8 * rings : Math.Max(1, 6 * ring);
        for (int ring = 0; ring <= rings; ring++)
        {
            first[ring] = x.Count;
            double r = inner + ((Radius - inner) * ring / rings);
            for (int k = 0; k < Count(ring); k++)
            {
                x.Add(r * Math.Cos(2 * Math.PI * k / Count(ring)));
                y.Add(r * Math.Sin(2 * Math.PI * k / Count(ring)));
            }
        }

        // Zip neighbouring rings together: always advance on the ring that lags behind in angle.
        for (int ring = 0; ring < rings; ring++)
        {
            int n = Count(ring), m = Count(ring + 1), i = 0, j = 0;
            while (i < n || j < m)
            {
                int a = first[ring] + (i % n), b = first[ring + 1] + (j % m);
                if (j < m && (n == 1 || i >= n || (j + 0.5) * n <= (i + 0.5) * m))
                {
                    corners.AddRange([a, b, first[ring + 1] + ((j + 1) % m)]);
                    j++;
                }
                else
                {
                    if (n > 1)
                    {
                        corners.AddRange([a, b, first[ring] + ((i + 1) % n)]);
                    }

                    i++;
                }
            }
        }

        return new()
        {
            Domain = domain,
            X = [.. x],
            Y = [.. y],
            Corners = [.. corners],
            Neighbours = Enumerable.Repeat(-1, corners.Count).ToArray(),
            Region = Enumerable.Repeat(-1, corners.Count / 3).ToArray(),
            Edges = [],
        };
    }

    private static FieldMap Map(SheetDevice device, TriangleMesh mesh, Wiring wiring, double current, int index)
    {
        List<double> x = [.. mesh.X], y = [.. mesh.Y];
        Dictionary<(int, int), int> middles = [];
        int Middle(int a, int b)
        {
            (int, int) key = (Math.Min(a, b), Math.Max(a, b));
            if (!middles.TryGetValue(key, out int node))
            {
                node = middles[key] = x.Count;
                double mx = (x[a] + x[b]) / 2, my = (y[a] + y[b]) / 2, ra = Math.Sqrt((x[a] * x[a]) + (y[a] * y[a]));
                double rb = Math.Sqrt((x[b] * x[b]) + (y[b] * y[b])), r = Math.Sqrt((mx * mx) + (my * my));
                double scale = Math.Abs(ra - rb) < 1e-9 * Radius ? ra / r : 1;
                x.Add(mx * scale);
                y.Add(my * scale);
            }

            return node;
        }

        int[] nodes = new int[2 * mesh.Corners.Length];
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
            new[] { a, b, c, Middle(a, b), Middle(b, c), Middle(c, a) }.CopyTo(nodes, 6 * t);
        }

        Point2 source = 1.04 * device.Contacts[wiring.Source].Middle, drain = 1.04 * device.Contacts[wiring.Drain].Middle;
        double scaleV = current / (Math.PI * Conductance), zero = Math.Log(0.04 / 2.04);
        double Phi(Point2 p) => scaleV * (Math.Log(Point2.Distance(p, drain) / Point2.Distance(p, source)) - zero);
        (double[] v, double[] ex, double[] ey) = (new double[x.Count], new double[x.Count], new double[x.Count]);
        for (int i = 0; i < x.Count; i++)
        {
            Point2 p = new(x[i], y[i]), s = p - source, d = p - drain;
            v[i] = Phi(p);
            ex[i] = scaleV * ((s.X / Point2.Dot(s, s)) - (d.X / Point2.Dot(d, d)));
            ey[i] = scaleV * ((s.Y / Point2.Dot(s, s)) - (d.Y / Point2.Dot(d, d)));
        }

        return new()
        {
            X = [.. x],
            Y = [.. y],
            Nodes = nodes,
            Potential = v,
            Ex = ex,
            Ey = ey,
            Kx = [.. ex.Select(e => Conductance * e)],
            Ky = [.. ey.Select(e => Conductance * e)],
            ContactPotential = [.. device.Contacts.Select(c => Phi(c.Middle))],
            Wiring = wiring.Name,
            Current = current,
            CurrentIndex = index,
        };
    }

    private sealed class PlainLaw(bool linear) : ISheetLaw
    {
        public string Kind => "ohmic";

        public bool IsLinear => linear;

        public bool HasPotential => linear;

        public Tensor2 AtZeroField => new(Conductance, 0, 0, Conductance);

        public FieldGuard? Guard => null;

        public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) => EvaluatePure(ea, eb, ka, kb);

        public void Evaluate(
            ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
            Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb)
        {
            EvaluatePure(ea, eb, ka, kb);
            daa.Fill(Conductance);
            dab.Clear();
            dba.Clear();
            dbb.Fill(Conductance);
        }

        public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
        {
            for (int i = 0; i < ea.Length; i++)
            {
                ka[i] = Conductance * ea[i];
                kb[i] = Conductance * eb[i];
            }
        }
    }
}
