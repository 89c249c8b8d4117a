using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Colours, sizes and frames shared by all pictures.</summary>
internal static class Look
{
    /// <summary>Size of the text on axes.</summary>
    public const float TickSize = 13, LabelSize = 14, TitleSize = 15;

    /// <summary>Lowers the labels of vertical axes: the library centres the line box, which the embedded font fills unevenly.</summary>
    public const float TickDrop = 2.5f;

    /// <summary>Ink for text and frames.</summary>
    public static readonly Color Ink = Color.FromHex("#222222");

    /// <summary>Colour of source, drain, other metal, along and across pair (M. Okabe and K. Ito, Color Universal Design, 2008).</summary>
    public static readonly Color Source = Color.FromHex("#D55E00"), Drain = Color.FromHex("#0072B2"), Metal = Color.FromHex("#6B6B6B"),
        Along = Color.FromHex("#00795A"), Across = Color.FromHex("#A0517E");

    /// <summary>Fill of the sheet.</summary>
    public static readonly Color Sheet = Color.FromHex("#E9EEF2");

    /// <summary>Fill of pads: darker than the sheet and unlike the white of a hole.</summary>
    public static readonly Color PadMetal = Color.FromHex("#B4BBC2");

    // Okabe-Ito, without the yellow that vanishes on white paper.
    private static readonly string[] Lines = ["#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#222222"];

    private static readonly float[]?[] Dashes = [null, [8, 4], [2, 3], [10, 3, 2, 3], [15, 5]];

    private static readonly MarkerShape[] Shapes =
        [MarkerShape.FilledCircle, MarkerShape.FilledSquare, MarkerShape.FilledTriangleUp, MarkerShape.FilledDiamond, MarkerShape.FilledTriangleDown];

    /// <summary>Colour of the k-th curve.</summary>
    public static Color Line(int k) => Color.FromHex(Lines[k % Lines.Length]);

    /// <summary>Dashes of the k-th curve; null for a solid line.</summary>
    public static float[]? Dash(int k) => Dashes[k % Dashes.Length];

    /// <summary>Marker of the k-th curve.</summary>
    public static MarkerShape Shape(int k) => Shapes[k % Shapes.Length];

    /// <summary>An empty plot in the common look.</summary>
    public static Plot NewPlot(string title, string xLabel, string yLabel)
    {
        EmbeddedFont.Use();
        Plot plot = new();
        plot.FigureBackground.Color = Colors.White;
        plot.DataBackground.Color = Colors.White;
        plot.Font.Set(EmbeddedFont.Family);
        plot.Title(title, TitleSize);
        plot.Axes.Title.Label.Bold = false;
        plot.Axes.Title.Label.ForeColor = Ink;
        plot.XLabel(xLabel, LabelSize);
        plot.YLabel(yLabel, LabelSize);
        plot.Grid.MajorLineColor = Color.FromHex("#DDDDDD");
        foreach (IAxis axis in plot.Axes.GetAxes())
        {
            axis.Label.Bold = false;
            axis.Label.ForeColor = Ink;
            axis.TickLabelStyle.FontSize = TickSize;
            axis.TickLabelStyle.ForeColor = Ink;
            axis.FrameLineStyle.Color = Color.FromHex("#666666");
            axis.FrameLineStyle.Width = 1;
            axis.MajorTickStyle.Color = axis.MinorTickStyle.Color = Color.FromHex("#666666");
        }

        plot.Axes.Left.TickLabelStyle.OffsetY = TickDrop;
        plot.Axes.Bottom.TickGenerator = Ticks();
        plot.Axes.Left.TickGenerator = Ticks();
        plot.Legend.IsVisible = false;
        return plot;
    }

    /// <summary>Fixed margins for a plot that is not a map, so that panels above each other line up.</summary>
    public static void FixMargins(Plot plot) => plot.Layout.Fixed(new PixelPadding(84, 24, 56, 40));

    /// <summary>A name from the device file, cut to a length that fits a title.</summary>
    public static string Short(string name, int most = 36) => name.Length <= most ? name : string.Concat(name.AsSpan(0, most - 1), "…");

    private static ScottPlot.TickGenerators.NumericAutomatic Ticks() => new() { LabelFormatter = v => SiScale.Number(v, 6) };
}
