using FieldSolve.Device;
using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The device as wired: one panel per wiring, at most six.</summary>
internal static class DevicePicture
{
    /// <summary>Most wirings shown.</summary>
    public const int MostPanels = 6;

    /// <summary>Draws the picture.</summary>
    public static Figure Draw(SheetDevice device)
    {
        Wiring[] wirings = [.. device.Wirings.Take(MostPanels)];
        SheetFrame[] panels = [.. wirings.Select(w => Panel(device, w, wirings.Length == 1 ? 520 : 380))];
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

    // Room for the longest name beside the sheet, as a share of the sheet.
    private static double Margin(SheetDevice device, Wiring wiring, double target)
    {
        IEnumerable<string> names = device.Contacts.Where(c => c.Kind == ContactKind.Edge).Select((c, k) => c.Name + Role(wiring, new(false, k)));
        double share = Math.Min(0.3, (12 + names.Select(TextWidth).DefaultIfEmpty(0).Max()) / target);
        return Math.Max(0.1, share / (1 - (2 * share)));
    }

    private static double TextWidth(string text) => KeyEntry.WidthOf([new(text, Look.Ink, 0, null, MarkerShape.None)]) - KeyEntry.WidthOf([]);

    private static SheetFrame Panel(SheetDevice device, Wiring wiring, double target)
    {
        SheetFrame frame = SheetFrame.Around(device, Look.Short(wiring.Name), false, Margin(device, wiring, target), target);
        Plot plot = frame.Plot;
        double f = frame.Scale.Factor;
        foreach (IReadOnlyList<Curve> loop in device.DeadEdge > 0 ? device.Drawn : [])
        {
            frame.AddLines([SheetFrame.Points(loop)], Look.Metal, 1, dashed: true);
        }

        IReadOnlyList<Point2[]> rim = SheetFrame.RimLoops(device.Domain);
        plot.PlottableList.Add(new SheetFill(rim, f));
        frame.AddLines(rim, Look.Ink, 1.2f);
        for (int k = 0; k < device.Contacts.Count; k++)
        {
            Color colour = ColourOf(wiring, new(false, k));
            frame.AddContact(device.Contacts[k], colour, colour == Look.Metal ? 5 : 7);
            AddName(frame, device.Contacts[k], Role(wiring, new(false, k)), colour);
        }

        for (int k = 0; k < device.Tips.Count; k++)
        {
            Tip tip = device.Tips[k];
            Color colour = ColourOf(wiring, new(true, k));
            plot.Add.Marker(f * tip.At.X, f * tip.At.Y, MarkerShape.FilledCircle, 7, colour);
            AddText(frame, tip.Name + Role(wiring, new(true, k)), tip.At, new(0.7, 0.7), colour, 6);
        }

        AddArrow(frame, device.Contacts[wiring.Source].Middle, device.Contacts[wiring.Drain].Middle);
        plot.PlottableList.Add(new Compass(device.Axis));
        return frame;
    }

    private static Color ColourOf(Wiring wiring, Terminal terminal) => Role(wiring, terminal) switch
    {
        " (I+)" => Look.Source,
        " (I−)" => Look.Drain,
        " (∥+)" or " (∥−)" => Look.Along,
        " (⊥+)" or " (⊥−)" => Look.Across,
        _ => Look.Metal,
    };

    private static string Role(Wiring wiring, Terminal t) =>
        t == new Terminal(false, wiring.Source) ? " (I+)"
        : t == new Terminal(false, wiring.Drain) ? " (I−)"
        : t == wiring.Along?.Plus ? " (∥+)"
        : t == wiring.Along?.Minus ? " (∥−)"
        : t == wiring.Across?.Plus ? " (⊥+)"
        : t == wiring.Across?.Minus ? " (⊥−)"
        : "";

    private static void AddName(SheetFrame frame, Contact contact, string role, Color colour)
    {
        if (contact.Kind == ContactKind.Pad)
        {
            AddText(frame, contact.Name + role, contact.Middle, default, colour, 0);
            return;
        }

        // The sheet lies to the left of the direction of travel, so the name goes to the right.
        Curve middle = contact.Shape[contact.Shape.Count / 2];
        AddText(frame, contact.Name + role, contact.Middle, -middle.Tangent(middle.Nearest(contact.Middle)).Left, colour, 9);
    }

    private static void AddText(SheetFrame frame, string text, Point2 at, Point2 outward, Color colour, float distance)
    {
        ScottPlot.Plottables.Text label = frame.Plot.Add.Text(text, frame.Scale.Factor * at.X, frame.Scale.Factor * at.Y);
        label.LabelFontSize = 13;
        label.LabelFontName = EmbeddedFont.Family;
        label.LabelFontColor = colour == Look.Metal ? Look.Ink : colour;
        label.OffsetX = (float)(distance * outward.X);
        label.OffsetY = (float)(-distance * outward.Y);
        int side = outward.X > 0.38 ? 1 : outward.X < -0.38 ? -1 : 0, up = outward.Y > 0.38 ? 1 : outward.Y < -0.38 ? -1 : 0;
        label.LabelAlignment = (side, up) switch
        {
            (1, 1) => Alignment.LowerLeft,
            (1, 0) => Alignment.MiddleLeft,
            (1, -1) => Alignment.UpperLeft,
            (0, 1) => Alignment.LowerCenter,
            (0, -1) => Alignment.UpperCenter,
            (-1, 1) => Alignment.LowerRight,
            (-1, 0) => Alignment.MiddleRight,
            (-1, -1) => Alignment.UpperRight,
            _ => Alignment.MiddleCenter,
        };
        if (distance == 0)
        {
            label.LabelBackgroundColor = Colors.White.WithAlpha(0.8);
            label.LabelPadding = 2;
        }
    }

    private static void AddArrow(SheetFrame frame, Point2 source, Point2 drain)
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
        ScottPlot.Plottables.Text label = frame.Plot.Add.Text("I", f * (from.X + to.X) / 2, f * (from.Y + to.Y) / 2);
        label.LabelFontName = EmbeddedFont.Family;
        label.LabelFontSize = 15;
        label.LabelFontColor = Look.Source;
        Point2 left = (drain - source).Left, unit = 1 / left.Length * left;
        label.LabelAlignment = Alignment.MiddleCenter;
        label.OffsetX = (float)(13 * unit.X);
        label.OffsetY = (float)(-13 * unit.Y);
    }
}
