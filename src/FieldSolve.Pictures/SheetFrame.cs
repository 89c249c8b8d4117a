using FieldSolve.Device;
using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>A plot of the plane of the sheet with equal scales in x and y, and the parts of the device that go on top of it.</summary>
internal sealed class SheetFrame
{
    private const float Left = 74, Bottom = 58, Top = 40, PlainRight = 22, BarRight = 116, TickDistance = 52;

    private SheetFrame(Plot plot, SiScale scale, double size, int width, int height)
    {
        (Plot, Scale, Size, Width, Height) = (plot, scale, size, width, height);
    }

    /// <summary>The plot; coordinates are metres times the scale.</summary>
    public Plot Plot { get; }

    /// <summary>Prefix of the metre on the axes.</summary>
    public SiScale Scale { get; }

    /// <summary>Diagonal of the shown sheet, metres.</summary>
    public double Size { get; }

    /// <summary>Width of the figure.</summary>
    public int Width { get; }

    /// <summary>Height of the figure.</summary>
    public int Height { get; }

    /// <summary>Makes the frame around the device.</summary>
    /// <param name="device">The device; its drawn rim and pads are in view.</param>
    /// <param name="title">Title.</param>
    /// <param name="colourBar">True to leave room for one at the right.</param>
    /// <param name="margin">Room beside, and above and below the sheet, as shares of its larger side.</param>
    /// <param name="target">Wanted size of the larger side of the frame.</param>
    public static SheetFrame Around(SheetDevice device, string title, bool colourBar, (double X, double Y) margin, double target)
    {
        (Point2 low, Point2 high) = Bounds(device);
        double w = high.X - low.X, h = high.Y - low.Y, side = Math.Max(w, h);
        SiScale scale = SiScale.For(Math.Max(w, h) / 2, "m");
        double spanX = w + (2 * margin.X * side), spanY = h + (2 * margin.Y * side), pixel = Math.Max(spanX, spanY) / target;
        double dataWidth = Math.Max(0.5 * target, spanX / pixel), dataHeight = Math.Max(0.32 * target, spanY / pixel);
        (spanX, spanY) = (dataWidth * pixel, dataHeight * pixel);

        Plot plot = Look.NewPlot(title, $"x ({scale.Unit})", $"y ({scale.Unit})");
        float right = colourBar ? BarRight : PlainRight;
        plot.Layout.Fixed(new PixelPadding(Left, right, Bottom, Top));
        double cx = (low.X + high.X) / 2, cy = (low.Y + high.Y) / 2, f = scale.Factor;
        plot.Axes.SetLimits(f * (cx - (spanX / 2)), f * (cx + (spanX / 2)), f * (cy - (spanY / 2)), f * (cy + (spanY / 2)));
        plot.HideGrid();
        double step = Levels.Step(f * target * pixel, (int)(target / TickDistance));
        plot.Axes.Bottom.TickGenerator = Levels.EvenTicks(f * (cx - (spanX / 2)), f * (cx + (spanX / 2)), step);
        plot.Axes.Left.TickGenerator = Levels.EvenTicks(f * (cy - (spanY / 2)), f * (cy + (spanY / 2)), step);
        return new(
            plot, scale, new Point2(w, h).Length,
            (int)Math.Ceiling(dataWidth + Left + right), (int)Math.Ceiling(dataHeight + Top + Bottom));
    }

    /// <summary>Points along a chain of stretches, metres.</summary>
    public static Point2[] Points(IEnumerable<Curve> curves)
    {
        List<Point2> points = [];
        foreach (Curve c in curves)
        {
            int pieces = c.IsArc ? Math.Max(2, (int)Math.Ceiling(Math.Abs(c.Sweep) / 0.05)) : 1;
            for (int k = points.Count == 0 ? 0 : 1; k <= pieces; k++)
            {
                points.Add(c.At((double)k / pieces));
            }
        }

        return [.. points];
    }

    /// <summary>The rim of the live sheet as closed loops, metres; the metal of ideal pads is outside.</summary>
    public static IReadOnlyList<Point2[]> RimLoops(Domain domain)
    {
        Dictionary<int, List<int>> from = [];
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            if (domain.Edges[e].IsRim)
            {
                if (!from.TryGetValue(domain.Edges[e].From, out List<int>? list))
                {
                    from[domain.Edges[e].From] = list = [];
                }

                list.Add(e);
            }
        }

        HashSet<int> used = [];
        List<Point2[]> loops = [];
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            List<Curve> chain = [];
            int at = domain.Edges[e].IsRim && !used.Contains(e) ? e : -1;
            while (at >= 0)
            {
                used.Add(at);
                chain.Add(domain.Edges[at].Curve);
                at = from.TryGetValue(domain.Edges[at].To, out List<int>? next) ? next.FirstOrDefault(n => !used.Contains(n), -1) : -1;
            }

            if (chain.Count > 0)
            {
                loops.Add(Points(chain));
            }
        }

        return loops;
    }

    /// <summary>Adds polylines given in metres.</summary>
    public void AddLines(IReadOnlyList<Point2[]> lines, Color colour, float width, bool dashed = false) =>
        Plot.PlottableList.Add(new PolylineSet(lines, Scale.Factor) { Colour = colour, Width = width, Dashed = dashed });

    /// <summary>The rim and the contacts over a map: source and drain in their colours, other metal black.</summary>
    public void AddDevice(SheetDevice device, Wiring? wiring)
    {
        AddLines(RimLoops(device.Domain), Look.Ink, 1.2f);
        for (int k = 0; k < device.Contacts.Count; k++)
        {
            Color colour = k == wiring?.Source ? Look.Source : k == wiring?.Drain ? Look.Drain : Look.Ink;
            AddContact(device.Contacts[k], colour, k == wiring?.Source || k == wiring?.Drain ? 7 : 4);
        }
    }

    /// <summary>The metal of pads, to be drawn under a map: it shows where the map leaves the metal out.</summary>
    public void AddPadMetal(SheetDevice device)
    {
        foreach (Contact pad in device.Contacts.Where(c => c.Kind == ContactKind.Pad))
        {
            Plot.PlottableList.Add(new SheetFill([Points(pad.Shape)], Scale.Factor) { Colour = Look.PadMetal });
        }
    }

    /// <summary>True for an edge contact that covers a whole loop of the rim.</summary>
    public static bool IsLoop(Contact contact) => contact.Kind == ContactKind.Edge && contact.Shape.Count > 0
        && Point2.Distance(contact.Shape[0].Start, contact.Shape[^1].End) <= 1e-9 * contact.Width;

    /// <summary>One contact: a thick stretch of rim, or the outline of a pad.</summary>
    public void AddContact(Contact contact, Color colour, float width)
    {
        Point2[] points = Points(contact.Shape);
        Plot.PlottableList.Add(new PolylineSet([points], Scale.Factor)
        {
            Colour = colour,
            Width = contact.Kind == ContactKind.Pad ? 2.2f : width,
            Halo = Colors.White,
        });
    }

    private static (Point2 Low, Point2 High) Bounds(SheetDevice device)
    {
        double x0 = double.PositiveInfinity, y0 = x0, x1 = -x0, y1 = -x0;
        IEnumerable<Point2> all = device.Drawn.Concat(device.Contacts.Select(c => c.Shape)).SelectMany(Points)
            .Concat(RimLoops(device.Domain).SelectMany(l => l));
        foreach (Point2 p in all)
        {
            (x0, x1, y0, y1) = (Math.Min(x0, p.X), Math.Max(x1, p.X), Math.Min(y0, p.Y), Math.Max(y1, p.Y));
        }

        return (new(x0, y0), new(x1, y1));
    }
}
