using System.Globalization;
using FieldSolve.Readings;
using FieldSolve.Turning;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The curves of a turn in polar form at the largest current: the distance from the middle is the size, solid where positive, dashed where negative.</summary>
internal static class PolarPicture
{
    private const int Side = 400, Rings = 4, FormulaPoints = 361;
    private static readonly float[] Negative = [5, 4];

    /// <summary>Draws the picture; null when there is nothing to show.</summary>
    public static Figure? Draw(TurnResult result)
    {
        IReadOnlyList<TurnQuantity> quantities = TurnQuantity.Of(result);
        if (quantities.Count == 0)
        {
            return null;
        }

        bool marked = quantities[0].Points(result, TurnQuantity.Largest(result)).Count <= AnglePicture.MostMarked;
        List<KeyEntry> key =
        [
            new("positive", Look.Line(0), 1.8f, null, marked ? MarkerShape.FilledCircle : MarkerShape.None),
            new("negative", Look.Line(1), 1.8f, Negative, marked ? MarkerShape.OpenCircle : MarkerShape.None),
        ];
        if (AnglePicture.HasFormula(result))
        {
            key.Add(AnglePicture.Formula);
        }

        return Figure.Rows([.. quantities.Select(q => Panel(result, q))], 2, Side, Side + 20).WithKeyRight(key);
    }

    private static Plot Panel(TurnResult result, TurnQuantity quantity)
    {
        double current = TurnQuantity.Largest(result);
        IReadOnlyList<(double Angle, double Value, double Error, CurveRow Row)> points = quantity.Points(result, current);
        double largest = points.Max(p => Math.Abs(p.Value));
        SiScale scale = SiScale.For(largest, "V");
        double step = Levels.Step(scale.Factor * largest, Rings), outer = step * Math.Max(1, Math.Ceiling(scale.Factor * largest / step));
        Plot plot = Look.NewPlot($"{quantity.Name(result)} ({scale.Unit}), I = {SiScale.Text(current, "A")}", "", "");
        plot.HideGrid();
        foreach (IAxis axis in plot.Axes.GetAxes())
        {
            axis.IsVisible = false;
        }

        plot.Layout.Fixed(new PixelPadding(10, 10, 10, 40));
        AddGrid(plot, result, step, outer);
        if (quantity.Formula(result, current, 0) is not null)
        {
            plot.PlottableList.Add(new CurveLine([[.. Enumerable.Range(0, FormulaPoints).Select(k => 360.0 * k / (FormulaPoints - 1))
                .Select(a => At(a, scale.Factor * Math.Abs(quantity.Formula(result, current, a)!.Value)))
                .Select(c => Clipped(c, 1.08 * outer))]])
            { Style = AnglePicture.Formula });
        }

        bool marked = points.Count <= AnglePicture.MostMarked;
        KeyEntry positive = new("", Look.Line(0), 1.8f, null, marked ? MarkerShape.FilledCircle : MarkerShape.None);
        KeyEntry negative = new("", Look.Line(1), 1.8f, Negative, marked ? MarkerShape.OpenCircle : MarkerShape.None);
        foreach (bool above in new[] { true, false })
        {
            KeyEntry style = above ? positive : negative;
            plot.PlottableList.Add(new CurveLine(Runs(points, above, scale.Factor)) { Style = style with { Shape = MarkerShape.None } });
            plot.PlottableList.Add(new CurveLine([[.. points.Where(p => p.Value >= 0 == above).Select(p => At(p.Angle, scale.Factor * Math.Abs(p.Value)))]])
            {
                Style = style with { Width = 0 },
            });
        }

        foreach ((double angle, double value, _, CurveRow row) in points.Where(p => p.Row.Status != RowStatus.Ok))
        {
            Coordinates c = At(angle, scale.Factor * Math.Abs(value));
            plot.Add.Marker(c.X, c.Y, MarkerShape.OpenCircle, 15, Look.Ink);
        }

        plot.Axes.SetLimits(-1.24 * outer, 1.24 * outer, -1.24 * outer, 1.24 * outer);
        return plot;
    }

    // Straight in value over angle between two points, so that a change of sign passes through the middle.
    private static List<Coordinates[]> Runs(IReadOnlyList<(double Angle, double Value, double Error, CurveRow Row)> points, bool above, double factor)
    {
        const int Pieces = 12;
        List<Coordinates[]> runs = [];
        List<Coordinates> run = [];
        void End()
        {
            if (run.Count > 1)
            {
                runs.Add([.. run]);
            }

            run.Clear();
        }

        for (int k = 0; k < points.Count; k++)
        {
            (double Angle, double Value) from = (points[k].Angle, points[k].Value), to = (points[(k + 1) % points.Count].Angle, points[(k + 1) % points.Count].Value);
            double turn = Degrees.Wrapped(to.Angle - from.Angle);
            for (int i = 0; i < Pieces; i++)
            {
                double value = from.Value + ((double)i / Pieces * (to.Value - from.Value));
                if (value >= 0 == above)
                {
                    run.Add(At(from.Angle + (turn * i / Pieces), factor * Math.Abs(value)));
                }
                else
                {
                    End();
                }
            }
        }

        if (points.Count > 1 && points[0].Value >= 0 == above && run.Count > 0)
        {
            run.Add(At(points[0].Angle, factor * Math.Abs(points[0].Value)));
        }

        End();
        return runs;
    }

    private static void AddGrid(Plot plot, TurnResult result, double step, double outer)
    {
        KeyEntry grid = new("", Color.FromHex("#CCCCCC"), 1, null, MarkerShape.None);
        for (int k = 1; k * step <= outer * 1.001; k++)
        {
            plot.PlottableList.Add(new CurveLine([[.. Enumerable.Range(0, 181).Select(i => At(2 * i, k * step))]]) { Style = grid });
            AddText(plot, SiScale.Number(k * step, 3), At(75, k * step), Look.TickSize - 2, Look.Metal, Alignment.MiddleCenter);
        }

        for (int degrees = 0; degrees < 360; degrees += 30)
        {
            plot.PlottableList.Add(new CurveLine([[new(0, 0), At(degrees, outer)]]) { Style = grid });
            AddText(plot, degrees.ToString(CultureInfo.InvariantCulture) + "°", At(degrees, 1.12 * outer), Look.TickSize - 1, Look.Ink, Alignment.MiddleCenter);
        }

        if (TurnQuantity.AxisA(result) is { } a)
        {
            KeyEntry axis = new("", Look.Ink, 1, [2, 3], MarkerShape.None);
            plot.PlottableList.Add(new CurveLine([[At(a, outer), At(a + 180, outer)], [At(a + 90, outer), At(a + 270, outer)]]) { Style = axis });
            AddText(plot, "a", At(a + 3.5, 0.93 * outer), Look.LabelSize, Look.Ink, Alignment.MiddleCenter);
            AddText(plot, "b", At(a + 93.5, 0.93 * outer), Look.LabelSize, Look.Ink, Alignment.MiddleCenter);
        }
    }

    private static void AddText(Plot plot, string words, Coordinates at, float size, Color colour, Alignment alignment)
    {
        ScottPlot.Plottables.Text text = plot.Add.Text(words, at);
        text.LabelFontName = EmbeddedFont.Family;
        text.LabelFontSize = size;
        text.LabelFontColor = colour;
        text.LabelAlignment = alignment;
    }

    private static Coordinates At(double degrees, double radius)
    {
        (double s, double c) = Math.SinCos(degrees * Math.PI / 180);
        return new(radius * c, radius * s);
    }

    private static Coordinates Clipped(Coordinates c, double most)
    {
        double r = Math.Sqrt((c.X * c.X) + (c.Y * c.Y));
        return r <= most ? c : new(c.X * most / r, c.Y * most / r);
    }
}
