using FieldSolve.Device;
using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The device as wired: one panel per wiring, at most six.</summary>
internal static class DevicePicture
{
    /// <summary>Most wirings shown.</summary>
    public const int MostPanels = 6;

    private const double MarginY = 0.12;

    private static readonly int[] Diagonals = [45, 135, 315, 225];

    /// <summary>Draws the picture.</summary>
    public static Figure Draw(SheetDevice device)
    {
        Wiring[] wirings = [.. device.Wirings.Take(MostPanels)];
        double target = wirings.Length == 1 ? 520 : 380;

        // All panels share one frame, so the sheet has the same size and place in each.
        (double X, double Y) margin = (wirings.Max(w => Margin(device, w, target)), MarginY);
        SheetFrame[] panels = [.. wirings.Select(w => Panel(device, w, margin, target))];
        Figure figure = Figure.Rows([.. panels.Select(p => p.Plot)], wirings.Length == 1 ? 1 : 2, panels[0].Width, panels[0].Height);
        if (wirings.Length < 3 || wirings.Length % 2 == 0)
        {
            return figure;
        }

        // The last row has a free place: explain the marks there.
        List<KeyEntry> key =
        [
            new("source, I+", Look.Source, 8, null, MarkerShape.None), new("drain, I−", Look.Drain, 8, null, MarkerShape.None),
            new("along pair, ∥+ and ∥−", Look.Along, 8, null, MarkerShape.None), new("across pair, ⊥+ and ⊥−", Look.Across, 8, null, MarkerShape.None),
            new("other metal", Look.Metal, 5, null, MarkerShape.None),
        ];
        if (device.DeadEdge > 0)
        {
            key.Add(new("rim as drawn", Look.Metal, 1, [6, 4], MarkerShape.None));
        }

        return figure.WithKeyAt(key, panels[0].Width + 90, figure.Height - (panels[0].Height / 2f) - (key.Count * KeyEntry.LineHeight / 2));
    }

    // Room for the longest name of a contact at the left or right side, as a share of the sheet.
    private static double Margin(SheetDevice device, Wiring wiring, double target)
    {
        double[] x = [.. device.Contacts.SelectMany(c => SheetFrame.Points(c.Shape)).Select(p => p.X).DefaultIfEmpty(0)];
        (double left, double right) = (x.Min(), x.Max());
        double middle = (left + right) / 2;
        IEnumerable<string> names = device.Contacts.Select((c, k) => (Contact: c, Name: c.Name + Role(wiring, new(false, k))))
            .Where(c => !SheetFrame.IsLoop(c.Contact) && Math.Abs(c.Contact.Middle.X - middle) > 0.3 * (right - left)).Select(c => c.Name);
        double share = Math.Min(0.3, (14 + names.Select(TextWidth).DefaultIfEmpty(0).Max()) / target);
        return Math.Max(0.12, share / (1 - (2 * share)));
    }

    private static double TextWidth(string text) => KeyEntry.WidthOf([new(text, Look.Ink, 0, null, MarkerShape.None)]) - KeyEntry.WidthOf([]);

    private static SheetFrame Panel(SheetDevice device, Wiring wiring, (double X, double Y) margin, double target)
    {
        SheetFrame frame = SheetFrame.Around(device, Look.Short(wiring.Name), false, margin, target);
        Plot plot = frame.Plot;
        double f = frame.Scale.Factor;
        IReadOnlyList<Point2[]> rim = SheetFrame.RimLoops(device.Domain);
        plot.PlottableList.Add(new SheetFill(rim, f));
        frame.AddPadMetal(device);
        foreach (IReadOnlyList<Curve> loop in device.DeadEdge > 0 ? device.Drawn : [])
        {
            frame.AddLines([SheetFrame.Points(loop)], Look.Metal, 1, dashed: true);
        }

        frame.AddLines(rim, Look.Ink, 1.2f);
        List<Point2[]> lines = [.. rim];
        List<NameTag> tags = [];
        for (int k = 0; k < device.Contacts.Count; k++)
        {
            Color[] colours = ColoursOf(wiring, new(false, k));
            frame.AddContact(device.Contacts[k], colours[0], colours[0] == Look.Metal ? 5 : 7);
            if (colours.Length > 1)
            {
                frame.AddLines([SheetFrame.Points(device.Contacts[k].Shape)], colours[1], device.Contacts[k].Kind == ContactKind.Pad ? 2.2f : 7, dashed: true);
            }

            lines.Add(SheetFrame.Points(device.Contacts[k].Shape));
            tags.Add(TagOf(device.Contacts[k], Role(wiring, new(false, k)), colours[0]));
        }

        for (int k = 0; k < device.Tips.Count; k++)
        {
            Tip tip = device.Tips[k];
            Color colour = ColoursOf(wiring, new(true, k))[0];
            plot.Add.Marker(f * tip.At.X, f * tip.At.Y, MarkerShape.FilledCircle, 7, colour);
            tags.Add(new(tip.Name + Role(wiring, new(true, k)), TextColour(colour), [(tip.At, default)], [], false));
        }

        Contact source = device.Contacts[wiring.Source], drain = device.Contacts[wiring.Drain];
        if (!SheetFrame.IsLoop(source) && !SheetFrame.IsLoop(drain))
        {
            (Point2 from, Point2 to) = AddArrow(frame, source.Middle, drain.Middle);
            lines.Add([from, to]);
            tags.Add(new("I", Look.Source, [(0.5 * (from + to), (to - from).Left)], [], false));
        }

        plot.PlottableList.Add(new Compass(device.Axis));
        plot.PlottableList.Add(new NameTags(tags, lines, rim, f));
        return frame;
    }

    private static Color TextColour(Color colour) => colour == Look.Metal ? Look.Ink : colour;

    // What a terminal does in a wiring; one contact may serve both pairs.
    private static List<(string Sign, Color Colour)> Duties(Wiring wiring, Terminal t)
    {
        List<(string, Color)> duties = [];
        void Add(Terminal? other, string sign, Color colour)
        {
            if (t == other)
            {
                duties.Add((sign, colour));
            }
        }

        Add(new Terminal(false, wiring.Source), "I+", Look.Source);
        Add(new Terminal(false, wiring.Drain), "I−", Look.Drain);
        Add(wiring.Along?.Plus, "∥+", Look.Along);
        Add(wiring.Along?.Minus, "∥−", Look.Along);
        Add(wiring.Across?.Plus, "⊥+", Look.Across);
        Add(wiring.Across?.Minus, "⊥−", Look.Across);
        return duties;
    }

    private static string Role(Wiring wiring, Terminal t) =>
        Duties(wiring, t) is { Count: > 0 } duties ? $" ({string.Join(", ", duties.Select(d => d.Sign))})" : "";

    private static Color[] ColoursOf(Wiring wiring, Terminal t) =>
        Duties(wiring, t) is { Count: > 0 } duties ? [.. duties.Select(d => d.Colour).Distinct()] : [Look.Metal];

    /// <summary>The name of a contact with what it does, beside it.</summary>
    internal static NameTag TagOf(Contact contact, string role, Color colour)
    {
        string text = contact.Name + role;
        Point2[] points = SheetFrame.Points(contact.Shape);
        if (contact.Kind == ContactKind.Pad)
        {
            // Beside the middle of an edge, away from the pad.
            IEnumerable<(Point2, Point2)> sides = Enumerable.Range(1, points.Length - 1)
                .Select(k => 0.5 * (points[k - 1] + points[k])).Select(m => (m, Unit(m - contact.Middle)));
            return new(text, TextColour(colour), [.. sides], points, true);
        }

        if (SheetFrame.IsLoop(contact))
        {
            // Along the diagonals, where the axes are far; inside when the loop is the rim of a hole.
            Point2 centre = new((points.Min(p => p.X) + points.Max(p => p.X)) / 2, (points.Min(p => p.Y) + points.Max(p => p.Y)) / 2);
            IEnumerable<(Point2, Point2)> corners = Diagonals.Select(d => new Point2(1, 0).Turned(d * Math.PI / 180))
                .Select(d => (points.MaxBy(p => Point2.Dot(p - centre, d)), d));
            double area = Enumerable.Range(1, points.Length - 1).Sum(k => Point2.Cross(points[k - 1] - centre, points[k] - centre));
            return new(text, TextColour(colour), [.. corners], area < 0 ? points : [], true);
        }

        // The sheet lies to the left of the direction of travel, so the name goes to the right.
        Curve middle = contact.Shape[contact.Shape.Count / 2];
        return new(text, TextColour(colour), [(contact.Middle, -middle.Tangent(middle.Nearest(contact.Middle)).Left)], [], true);
    }

    private static Point2 Unit(Point2 p) => p.Length > 0 ? 1 / p.Length * p : new(1, 0);

    private static (Point2 From, Point2 To) AddArrow(SheetFrame frame, Point2 source, Point2 drain)
    {
        double f = frame.Scale.Factor;
        Point2 from = source + (0.15 * (drain - source)), to = source + (0.85 * (drain - source));
        ScottPlot.Plottables.Arrow arrow = frame.Plot.Add.Arrow(f * from.X, f * from.Y, f * to.X, f * to.Y);
        arrow.ArrowLineWidth = 0;
        arrow.ArrowWidth = 3;
        arrow.ArrowheadWidth = 12;
        arrow.ArrowheadLength = 16;
        arrow.ArrowheadAxisLength = 16;
        arrow.ArrowFillColor = Look.Source;
        return (from, to);
    }
}
