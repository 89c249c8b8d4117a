using System.Globalization;
using FieldSolve.Readings;
using FieldSolve.Turning;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The curves of a turn over the angle: along and across, odd and even.</summary>
internal static class AnglePicture
{
    private const int MostCurrents = 5;

    /// <summary>More points than this are a line.</summary>
    public const int MostMarked = 36;

    private const int FormulaPoints = 181;
    private const double VisibleError = 0.004;

    /// <summary>Draws the picture; null when there is nothing to show.</summary>
    public static Figure? Draw(TurnResult result)
    {
        IReadOnlyList<TurnQuantity> quantities = TurnQuantity.Of(result);
        if (quantities.Count == 0)
        {
            return null;
        }

        double[] currents = Currents(result);
        Plot[] panels = [.. quantities.Select(q => Panel(result, q, currents))];
        bool marked = quantities[0].Points(result, currents[0]).Count <= MostMarked;
        List<KeyEntry> key = [.. currents.Select((i, k) => KeyEntry.Curve(k, SiScale.Text(i, "A"), marked))];
        if (HasFormula(result))
        {
            key.Add(Formula);
        }

        return Figure.Rows(panels, 2, 440, 310).WithKeyRight(key);
    }

    /// <summary>The linear response at other ratios; null without any.</summary>
    public static Figure? Ratios(TurnResult result)
    {
        if (result.Ratios.Count == 0)
        {
            return null;
        }

        KeyEntry[] key = [.. result.Ratios.Select((r, k) => KeyEntry.Curve(k, "ratio " + SiScale.Number(r.Ratio, 4), r.Points.Count <= MostMarked))];
        Plot[] panels = [.. new[] { ("along", (Func<RatioPoint, (double Value, double Error)?>)(p => p.Along)), ("across", p => p.Across) }
            .Where(q => result.Ratios[0].Points.Any(p => q.Item2(p) is not null))
            .Select(q =>
            {
                double largest = result.Ratios.SelectMany(r => r.Points).Max(p => Math.Abs(q.Item2(p)?.Value ?? 0));
                SiScale scale = SiScale.For(largest, "Ω");
                Plot plot = Frame(result, $"V_{q.Item1} / I at small drive", $"V_{q.Item1} / I ({scale.Unit})");
                for (int k = 0; k < result.Ratios.Count; k++)
                {
                    Coordinates[] line = [.. result.Ratios[k].Points.Where(p => q.Item2(p) is not null)
                        .Select(p => new Coordinates(TurnQuantity.Angle(result, p), scale.Factor * q.Item2(p)!.Value.Value)).OrderBy(c => c.X)];
                    plot.PlottableList.Add(new CurveLine([Closed(line)]) { Style = key[k] });
                }

                Finish(plot, result);
                return plot;
            })];
        return panels.Length == 0 ? null : Figure.Rows(panels, 1, 600, 320).WithKeyRight(key);
    }

    /// <summary>The strip formulas' line in every picture.</summary>
    public static KeyEntry Formula { get; } = new("strip formulas, fitted", Look.Metal, 1.2f, [2, 3], MarkerShape.None);

    private static KeyEntry CrystalAxis { get; } = new("", Look.Metal, 1, [1, 3], MarkerShape.None);

    /// <summary>True when the formulas can be drawn.</summary>
    public static bool HasFormula(TurnResult result) => result.Fit?.StripCurve is not null;

    private static double[] Currents(TurnResult result)
    {
        double[] all = [.. result.Drive.Device.Drive!.Currents.Where(c => c != 0).Distinct().OrderByDescending(Math.Abs)];
        return all.Length <= MostCurrents ? all : [.. Enumerable.Range(0, MostCurrents).Select(k => all[k * (all.Length - 1) / (MostCurrents - 1)])];
    }

    private static Plot Panel(TurnResult result, TurnQuantity quantity, double[] currents)
    {
        SiScale scale = SiScale.For(currents.SelectMany(i => quantity.Points(result, i)).Select(p => Math.Abs(p.Value)).DefaultIfEmpty(0).Max(), "V");
        Plot plot = Frame(result, quantity.Name(result), $"{quantity.Name(result)} ({scale.Unit})");
        if (quantity.Formula(result, currents[0], 0) is not null)
        {
            plot.PlottableList.Add(new CurveLine([[.. Enumerable.Range(0, FormulaPoints).Select(k => 360.0 * k / (FormulaPoints - 1))
                .Select(a => new Coordinates(a, scale.Factor * quantity.Formula(result, currents[0], a)!.Value))]])
            { Style = Formula });
        }

        for (int k = 0; k < currents.Length; k++)
        {
            IReadOnlyList<(double Angle, double Value, double Error, CurveRow Row)> points = quantity.Points(result, currents[k]);
            if (points.Count == 0)
            {
                continue;
            }

            KeyEntry style = KeyEntry.Curve(k, "", points.Count <= MostMarked);
            plot.PlottableList.Add(new CurveLine([Closed([.. points.Select(p => new Coordinates(p.Angle, scale.Factor * p.Value))])]) { Style = style });
            double range = points.Max(p => p.Value) - points.Min(p => p.Value);
            if (points.Max(p => p.Error) > VisibleError * range)
            {
                plot.Add.ErrorBar([.. points.Select(p => p.Angle)], [.. points.Select(p => scale.Factor * p.Value)], [.. points.Select(p => scale.Factor * p.Error)])
                    .Color = Look.Line(k);
            }

            foreach ((double angle, double value, _, CurveRow row) in points.Where(p => p.Row.Status != RowStatus.Ok))
            {
                plot.Add.Marker(angle, scale.Factor * value, MarkerShape.OpenCircle, 14, Look.Ink);
            }
        }

        Finish(plot, result);
        return plot;
    }

    // The first direction stands again at the end of the circle.
    private static Coordinates[] Closed(Coordinates[] line) => line.Length > 1 ? [.. line, new(line[0].X + 360, line[0].Y)] : line;

    private static Plot Frame(TurnResult result, string title, string yLabel) => Look.NewPlot(title, TurnQuantity.AngleName(result), yLabel);

    private static void Finish(Plot plot, TurnResult result)
    {
        plot.Axes.AutoScale();
        AxisLimits limits = plot.Axes.GetLimits();
        double low = Math.Min(0, limits.Bottom), high = Math.Max(0, limits.Top), room = 0.1 * (high > low ? high - low : 1);
        plot.Axes.SetLimits(-4, 364, low - room, high + room);
        ScottPlot.TickGenerators.NumericManual ticks = new();
        for (int degrees = 0; degrees <= 360; degrees += 45)
        {
            ticks.AddMajor(degrees, degrees.ToString(CultureInfo.InvariantCulture));
        }

        plot.Axes.Bottom.TickGenerator = ticks;
        if (TurnQuantity.AxisA(result) is { } a)
        {
            for (int quarter = 0; quarter < 8; quarter++)
            {
                double at = (a % 90) + (90 * quarter);
                if (at <= 360)
                {
                    bool isA = Math.Abs(Math.IEEERemainder(at - a, 180)) < 1;
                    plot.PlottableList.Add(new CurveLine([[new(at, low - room), new(at, high + room)]]) { Style = CrystalAxis });
                    ScottPlot.Plottables.Text text = plot.Add.Text(isA ? "a" : "b", at + 3, high + (0.95 * room));
                    text.LabelFontName = EmbeddedFont.Family;
                    text.LabelFontSize = Look.TickSize;
                    text.LabelFontColor = Look.Ink;
                    text.LabelAlignment = Alignment.UpperLeft;
                }
            }
        }

        Look.FixMargins(plot);
    }
}
