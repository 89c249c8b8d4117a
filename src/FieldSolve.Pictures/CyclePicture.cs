using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Lockin;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Potential and field of a wiring at three phases of the cycle, each row on one colour scale.</summary>
internal static class CyclePicture
{
    private const double MapMargin = 0.06, MapSize = 230, LeastField = 0.01;
    private static readonly double[] Phases = [30, 90, 270];

    /// <summary>Draws a wiring; null when it has no frames.</summary>
    public static Figure? Draw(LockinResult result, string wiring)
    {
        CycleFrame[] frames = [.. result.Frames.Where(f => f.Wiring == wiring)];
        if (frames.Length == 0)
        {
            return null;
        }

        CycleFrame[] shown = [.. Phases.Select(p => frames.MinBy(f => Math.Abs(f.Phase - p))!)];
        FineMesh mesh = FineMesh.Of(shown[0].Map);
        Wiring wired = result.Device.Wirings.First(w => w.Name == wiring);
        List<(Plot, PixelRect)> panels = [];
        float top = 0, width = 0;
        foreach (Row row in new[] { Potential(mesh, shown), Field(mesh, shown) })
        {
            float left = 0, height = 0;
            for (int k = 0; k < shown.Length; k++)
            {
                bool last = k == shown.Length - 1;
                string title = string.Create(
                    CultureInfo.InvariantCulture, $"{row.Name}, {Math.Round(shown[k].Phase):F0}°, {SiScale.Text(shown[k].Map.Current, "A", 3)}");
                SheetFrame frame = SheetFrame.Around(result.Device, title, last, (MapMargin, MapMargin), MapSize);
                frame.AddPadMetal(result.Device);
                MapImage image = new(mesh, row.Values[k], frame.Scale.Factor, row.Colours, row.Low, row.High);
                frame.Plot.PlottableList.Add(image);
                frame.AddDevice(result.Device, wired);
                if (last)
                {
                    DrawnMap.AddBar(frame.Plot, image, row.Label, row.Ticks);
                }

                panels.Add((frame.Plot, new PixelRect(left, left + frame.Width, top + frame.Height, top)));
                left += frame.Width;
                height = frame.Height;
            }

            width = Math.Max(width, left);
            top += height;
        }

        return new(panels, (int)width, (int)top);
    }

    private static Row Potential(FineMesh mesh, CycleFrame[] shown)
    {
        double[][] volts = [.. shown.Select(f => mesh.Quadratic(f.Map.Potential))];
        SiScale scale = SiScale.For(volts.Max(v => v.Max(Math.Abs)), "V");
        double[][] values = [.. volts.Select(v => v.Select(x => scale.Factor * x).ToArray())];
        double low = values.Min(v => v.Min()), high = values.Max(v => v.Max());
        return new("Potential", values, low, high > low ? high : low + 1, MapColours.Shore, $"potential ({scale.Unit})", null);
    }

    private static Row Field(FineMesh mesh, CycleFrame[] shown)
    {
        double[][] field = [.. shown.Select(f => Size(mesh, f.Map))];
        (double low, double high) = DrawnMap.Percentiles(mesh, field.MaxBy(v => v.Max())!);
        SiScale scale = SiScale.For(high, "V/m");
        double floor = high > 0 ? Math.Max(low, LeastField * high) : 1;
        double bottom = Math.Log10(floor * scale.Factor), top = high > floor ? Math.Log10(high * scale.Factor) : bottom + 1;
        double[][] values = [.. field.Select(v => v.Select(e => Math.Log10(Math.Max(e, 0.5 * floor) * scale.Factor)).ToArray())];
        return new("Field", values, bottom, top, MapColours.Ember, $"|E| ({scale.Unit})", Levels.LogTicks(bottom, top));
    }

    private static double[] Size(FineMesh mesh, FieldMap map) =>
        [.. mesh.Straight(map.Ex).Zip(mesh.Straight(map.Ey), (x, y) => Math.Sqrt((x * x) + (y * y)))];

    private sealed record Row(string Name, double[][] Values, double Low, double High, IColormap Colours, string Label, ITickGenerator? Ticks);
}
