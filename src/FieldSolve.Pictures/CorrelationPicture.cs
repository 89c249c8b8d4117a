using System.Globalization;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The correlations of the fitted numbers as a square of fields; darker is stronger, and the sign stands in the field.</summary>
internal static class CorrelationPicture
{
    private const int MostNumbers = 24, MostWithText = 16, Field = 38, Top = 40, Right = 20;
    private const double PerLetter = 8;

    private static readonly Color Plus = Color.FromHex("#0072B2"), Minus = Color.FromHex("#D55E00");

    /// <summary>Draws the picture; null with fewer than two determined numbers.</summary>
    public static Figure? Draw(FitResult result)
    {
        int[] shown = [.. Enumerable.Range(0, result.Parameters.Count).Where(j => result.Parameters[j].Value is not null).Take(MostNumbers)];
        int n = shown.Length;
        if (n < 2)
        {
            return null;
        }

        Plot plot = Look.NewPlot("Correlations (%)", "", "");
        ScottPlot.TickGenerators.NumericManual across = new(), down = new();
        for (int i = 0; i < n; i++)
        {
            string name = Look.Short(result.Parameters[shown[i]].Parameter.Label, 18);
            across.AddMajor(i + 0.5, name);
            down.AddMajor(n - i - 0.5, name);
            for (int j = 0; j < n; j++)
            {
                double r = i == j ? 1 : result.Correlation[shown[i], shown[j]];
                double y = n - 1 - i;
                var box = plot.Add.Rectangle(j, j + 1, y, y + 1);
                box.FillColor = i == j ? Color.FromHex("#DDDDDD") : Shade(r);
                box.LineColor = Colors.White;
                box.LineWidth = 1;
                if (i != j && n <= MostWithText)
                {
                    string text = ((int)Math.Round(100 * r)).ToString(CultureInfo.InvariantCulture).Replace('-', '−');
                    var label = plot.Add.Text(text, j + 0.5, y + 0.5);
                    label.LabelFontColor = Math.Abs(r) > 0.55 ? Colors.White : Look.Ink;
                    label.LabelFontSize = 12;
                    label.LabelFontName = EmbeddedFont.Family;
                    label.LabelAlignment = Alignment.MiddleCenter;
                }
            }
        }

        plot.Axes.Bottom.TickGenerator = across;
        plot.Axes.Left.TickGenerator = down;
        plot.Axes.Bottom.TickLabelStyle.Rotation = -50;
        plot.Axes.Bottom.TickLabelStyle.Alignment = Alignment.UpperRight;
        plot.Axes.Bottom.MajorTickStyle.Length = plot.Axes.Left.MajorTickStyle.Length = 0;
        plot.HideGrid();
        plot.Axes.SetLimits(0, n, 0, n);
        int letters = shown.Max(j => Look.Short(result.Parameters[j].Parameter.Label, 18).Length);
        int left = (int)(24 + (PerLetter * letters)), bottom = (int)(24 + (0.77 * PerLetter * letters));
        plot.Layout.Fixed(new PixelPadding(left, Right, bottom, Top));
        int field = Math.Max(Field, 120 / n);
        return Figure.Of(plot, left + Right + (n * field), Top + bottom + (n * field))
            .WithKeyBelow([new("same way", Plus, 8, null, MarkerShape.None), new("opposite ways", Minus, 8, null, MarkerShape.None)], 24);
    }

    private static Color Shade(double r)
    {
        Color full = r >= 0 ? Plus : Minus;
        double t = Math.Clamp(Math.Abs(r), 0, 1);
        byte Mix(byte c) => (byte)Math.Round(255 + (t * (c - 255)));
        return new Color(Mix(full.R), Mix(full.G), Mix(full.B));
    }
}
