using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Turning;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Potential maps of up to three directions side by side on one colour scale.</summary>
internal static class TurnMapsPicture
{
    private const double Margin = 0.06, Target = 300;

    /// <summary>Draws the picture; null without maps.</summary>
    public static Figure? Draw(TurnResult result)
    {
        if (result.Maps.Count == 0)
        {
            return null;
        }

        SheetDevice device = result.Drive.Device;
        FineMesh mesh = FineMesh.Of(result.Maps[0].Map);
        double[][] volts = [.. result.Maps.Select(m => mesh.Quadratic(m.Map.Potential))];
        SiScale scale = SiScale.For(volts.Max(v => v.Max(Math.Abs)), "V");
        double low = scale.Factor * volts.Min(v => v.Min()), high = scale.Factor * volts.Max(v => v.Max()), step = Levels.Step(high - low, 22);
        List<(Plot, PixelRect)> panels = [];
        int left = 0, height = 0;
        for (int k = 0; k < result.Maps.Count; k++)
        {
            bool last = k == result.Maps.Count - 1;
            SheetFrame frame = SheetFrame.Around(device, Title(result, result.Maps[k]), last, (Margin, Margin), Target);
            frame.AddPadMetal(device);
            double[] values = [.. volts[k].Select(v => v * scale.Factor)];
            MapImage image = new(mesh, values, frame.Scale.Factor, MapColours.Shore, low, high);
            frame.Plot.PlottableList.Add(image);
            List<Point2[]> lines = [];
            foreach (double level in Levels.Between(low, high, step))
            {
                lines.AddRange(LevelLines.Of(mesh, values, level).Select(l => LevelLines.Thinned(l, 0.003 * frame.Size)));
            }

            frame.Plot.PlottableList.Add(new PolylineSet(lines, frame.Scale.Factor) { Colour = Colors.White, Width = 1, Halo = Colors.Black.WithAlpha(0.25) });
            frame.AddDevice(device, device.Wirings.First(w => w.Name == result.Maps[k].Map.Wiring));
            if (last)
            {
                DrawnMap.AddBar(frame.Plot, image, $"potential ({scale.Unit}); lines every {SiScale.Number(step)} {scale.Unit}", null);
            }

            panels.Add((frame.Plot, new PixelRect(left, left + frame.Width, frame.Height, 0)));
            left += frame.Width;
            height = Math.Max(height, frame.Height);
        }

        return new(panels, left, height);
    }

    private static string Title(TurnResult result, TurnMap map)
    {
        static string Angle(double degrees) => SiScale.Number(Math.Round(degrees, 2), 5) + "°";
        return result.Mode == TurnMode.Axis
            ? $"Crystal a at {Angle(map.AxisDegrees)}, current at {Angle(map.DirectionDegrees)}"
            : $"Current at {Angle(map.DirectionDegrees)}";
    }
}
