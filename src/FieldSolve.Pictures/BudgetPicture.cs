using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The largest contributions to what one wiring reads, as bars: one panel each for across odd, across even and along odd.</summary>
internal static class BudgetPicture
{
    private const int MostBars = 10;
    private const float Left = 190, Right = 28, Top = 40, Bottom = 54, BarHeight = 22;

    /// <summary>Draws the picture; null when no cause does anything.</summary>
    public static Figure? Draw(ToleranceResult result, string wiring)
    {
        var panels = new List<(Plot Plot, int Height)>();
        bool second = false;
        foreach ((string pair, ReadingPart part) in new[] { ("across", ReadingPart.Odd), ("across", ReadingPart.Even), ("along", ReadingPart.Odd), ("source", ReadingPart.Odd) })
        {
            BudgetEntry[] entries =
            [
                .. result.Budget.Where(e => e.Quantity.Wiring == wiring && e.Quantity.Pair == pair && e.Quantity.Part == part && e.Contribution != 0).Take(MostBars),
            ];
            if (entries.Length > 0 && panels.Count < 3)
            {
                second |= entries.Any(e => e.Order == 2);
                panels.Add(Panel(entries, result.Statistics.First(s => s.Quantity == entries[0].Quantity)));
            }
        }

        if (panels.Count == 0)
        {
            return null;
        }

        const int width = 640;
        int y = 0;
        var placed = new List<(Plot, PixelRect)>();
        foreach ((Plot plot, int height) in panels)
        {
            placed.Add((plot, new PixelRect(0, width, y + height, y)));
            y += height;
        }

        KeyEntry[] key =
        [
            new("first order: derivative times sigma", Look.Line(0), 8, null, MarkerShape.None),
            new("second order, where the first vanishes", Look.Line(4), 8, null, MarkerShape.None),
        ];
        return new Figure(placed, width, y).WithKeyBelow([.. key.Take(second ? 2 : 1)], Left);
    }

    private static (Plot Plot, int Height) Panel(BudgetEntry[] entries, SampleStatistics all)
    {
        SiScale scale = SiScale.For(entries.Max(e => Math.Abs(e.Contribution)), "V");
        string title = $"V_{all.Quantity.Pair}, {(all.Quantity.Part == ReadingPart.Odd ? "odd" : "even")} part: {SiScale.Text(all.Design, "V")}, all causes {SiScale.Text(all.FirstOrder, "V", 3)}";
        Plot plot = Look.NewPlot(title, $"contribution for one standard deviation ({scale.Unit})", "");
        ScottPlot.TickGenerators.NumericManual names = new();
        for (int k = 0; k < entries.Length; k++)
        {
            BudgetEntry e = entries[k];
            double y = entries.Length - 1 - k;
            ScottPlot.Bar bar = new()
            {
                Position = y,
                Value = scale.Factor * e.Contribution,
                Size = 0.7,
                Orientation = Orientation.Horizontal,
                FillColor = e.Order == 2 ? Look.Line(4) : Look.Line(0),
                LineWidth = 0,
            };
            plot.Add.Bar(bar);
            names.AddMajor(y, Look.Short($"{e.Cause.Label}, {SizeOf(e.Cause)}", 28));
        }

        plot.Axes.Left.TickGenerator = names;
        plot.Axes.Left.MajorTickStyle.Length = 0;
        plot.Grid.YAxisStyle.IsVisible = false;
        double low = Math.Min(0, entries.Min(e => e.Contribution)) * scale.Factor, high = Math.Max(0, entries.Max(e => e.Contribution)) * scale.Factor;
        double room = 0.05 * (high - low);
        plot.Axes.SetLimits(low < 0 ? low - room : 0, high > 0 ? high + room : 0, -0.6, entries.Length - 0.4);
        var zero = plot.Add.VerticalLine(0, 1, Look.Ink);
        zero.LinePattern = LinePattern.Solid;
        plot.Layout.Fixed(new PixelPadding(Left, Right, Bottom, Top));
        return (plot, (int)(Top + Bottom + (entries.Length * BarHeight)));
    }

    /// <summary>Standard deviation of a cause for labels.</summary>
    public static string SizeOf(Device.SheetCause cause) =>
        cause.Unit is "deg" ? $"{SiScale.Number(Math.Round(cause.Sigma / cause.UnitSize, 9), 3)}°"
        : cause.Unit is "1" ? SiScale.Number(cause.Sigma, 3)
        : cause.Unit.Contains(' ', StringComparison.Ordinal) ? $"{SiScale.Number(cause.Sigma, 3)} {cause.Unit.Replace("^2", "²", StringComparison.Ordinal).Replace("^3", "³", StringComparison.Ordinal).Replace("ohm", "Ω", StringComparison.Ordinal)}"
        : SiScale.Text(cause.Sigma, cause.Unit, 3);
}
