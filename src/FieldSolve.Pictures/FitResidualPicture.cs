using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Residuals in standard deviations: in the order of the data, and as a histogram with the normal curve.</summary>
internal static class FitResidualPicture
{
    private const double Far = 4, Shown = 8;
    private const int CurvePoints = 120;

    /// <summary>Draws the picture.</summary>
    public static Figure? Draw(FitResult result)
    {
        double[] z = [.. result.Data.Select(d => d.Residual)];
        return z.Length < 2 ? null : Figure.Rows(z.Length < 10 ? [Order(z)] : [Order(z), Histogram(z)], 2, 480, 310);
    }

    private static Plot Order(double[] z)
    {
        Plot plot = Look.NewPlot("Residuals in the order of the data", "datum", "(measured − model) / σ");
        double top = Math.Min(Shown, Math.Max(3, 1.1 * z.Max(Math.Abs)));
        foreach (int level in new[] { -2, 0, 2 })
        {
            plot.PlottableList.Add(new CurveLine([[new(0, level), new(z.Length + 1, level)]]) { Style = new("", Look.Ink, level == 0 ? 1.2f : 1, level == 0 ? null : [6, 4], MarkerShape.None) });
        }

        plot.PlottableList.Add(new CurveLine([[.. z.Select((v, k) => new Coordinates(k + 1, Math.Clamp(v, -top, top)))]]) { Style = new("", Look.Line(0), 0, null, MarkerShape.FilledCircle) });
        for (int k = 0; k < z.Length; k++)
        {
            if (Math.Abs(z[k]) > Far)
            {
                plot.Add.Marker(k + 1, Math.Clamp(z[k], -top, top), MarkerShape.OpenCircle, 14, Look.Ink);
            }
        }

        plot.Axes.SetLimits(0, z.Length + 1, -1.08 * top, 1.08 * top);
        Look.FixMargins(plot);
        return plot;
    }

    private static Plot Histogram(double[] z)
    {
        double reach = Math.Min(Shown, Math.Max(3.5, z.Max(Math.Abs)));
        int bins = Math.Clamp((int)Math.Ceiling(Math.Sqrt(z.Length)), 9, 41) | 1;
        double width = 2 * reach / bins;
        int[] counts = new int[bins];
        foreach (double v in z)
        {
            counts[Math.Clamp((int)((v + reach) / width), 0, bins - 1)]++;
        }

        Plot plot = Look.NewPlot("How often", "(measured − model) / σ", "data");
        for (int k = 0; k < bins; k++)
        {
            plot.Add.Bar(new ScottPlot.Bar { Position = -reach + ((k + 0.5) * width), Value = counts[k], Size = 0.96 * width, FillColor = Look.Line(5), LineWidth = 0 });
        }

        Coordinates[] curve = [.. Enumerable.Range(0, CurvePoints + 1).Select(k =>
        {
            double x = -reach + (2 * reach * k / CurvePoints);
            return new Coordinates(x, z.Length * width * Math.Exp(-x * x / 2) / Math.Sqrt(2 * Math.PI));
        })];
        plot.PlottableList.Add(new CurveLine([curve]) { Style = new("", Look.Line(1), 1.8f, null, MarkerShape.None) });
        plot.Axes.SetLimits(-reach, reach, 0, 1.1 * Math.Max(counts.Max(), curve.Max(c => c.Y)));
        Look.FixMargins(plot);
        return plot;
    }
}
