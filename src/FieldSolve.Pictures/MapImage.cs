using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>
/// A colour map over small triangles. The triangles are painted pixel by pixel into an image at twice the resolution of the
/// page and placed into the plot, so there are no seams between triangles and an SVG stays small.
/// </summary>
internal sealed class MapImage(FineMesh mesh, double[] values, double scale, IColormap colours, double low, double high)
    : FrameDrawing, IHasColorAxis, IDisposable
{
    private const int Oversampling = 2, Shades = 1024, Compression = 4;

    private SKImage? image;
    private (PixelRect Place, AxisLimits Limits) made;

    /// <inheritdoc/>
    public IColormap Colormap { get; set; } = colours;

    /// <inheritdoc/>
    public ScottPlot.Range GetRange() => new(low, high);

    /// <inheritdoc/>
    public override AxisLimits GetAxisLimits() => new(scale * mesh.X.Min(), scale * mesh.X.Max(), scale * mesh.Y.Min(), scale * mesh.Y.Max());

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        PixelRect place = rp.DataRect;
        AxisLimits limits = new(Axes.XAxis.Min, Axes.XAxis.Max, Axes.YAxis.Min, Axes.YAxis.Max);
        if (image is null || made != (place, limits))
        {
            image?.Dispose();
            image = Paint(place);
            made = (place, limits);
        }

        rp.Canvas.DrawImage(image, new SKRect(place.Left, place.Top, place.Right, place.Bottom), new SKSamplingOptions(SKFilterMode.Linear));
    }

    /// <inheritdoc/>
    public void Dispose() => image?.Dispose();

    private SKImage Paint(PixelRect place)
    {
        int width = (int)Math.Ceiling(place.Width * Oversampling), height = (int)Math.Ceiling(place.Height * Oversampling);
        uint[] shades = [.. Enumerable.Range(0, Shades).Select(k => Rgba(Colormap.GetColor((k + 0.5) / Shades)))];
        uint[] pixels = new uint[width * height];
        double sx = width / place.Width, sy = height / place.Height, factor = Shades / (high > low ? high - low : 1);
        int nodes = mesh.X.Length;
        double[] px = new double[nodes], py = new double[nodes], shade = new double[nodes];
        for (int i = 0; i < nodes; i++)
        {
            Pixel p = Axes.GetPixel(new(scale * mesh.X[i], scale * mesh.Y[i]));
            px[i] = (p.X - place.Left) * sx;
            py[i] = (p.Y - place.Top) * sy;
            shade[i] = (values[i] - low) * factor;
        }

        for (int t = 0; t < mesh.Count; t++)
        {
            (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
            double ux = px[b] - px[a], uy = py[b] - py[a], vx = px[c] - px[a], vy = py[c] - py[a], twice = (ux * vy) - (uy * vx);
            if (twice == 0)
            {
                continue;
            }

            int x0 = Math.Max(0, (int)Math.Ceiling(Math.Min(px[a], Math.Min(px[b], px[c])) - 0.5));
            int x1 = Math.Min(width - 1, (int)Math.Floor(Math.Max(px[a], Math.Max(px[b], px[c])) - 0.5));
            int y0 = Math.Max(0, (int)Math.Ceiling(Math.Min(py[a], Math.Min(py[b], py[c])) - 0.5));
            int y1 = Math.Min(height - 1, (int)Math.Floor(Math.Max(py[a], Math.Max(py[b], py[c])) - 0.5));
            double db = shade[b] - shade[a], dc = shade[c] - shade[a];
            (ux, uy, vx, vy) = (ux / twice, uy / twice, vx / twice, vy / twice);
            for (int y = y0; y <= y1; y++)
            {
                double qy = y + 0.5 - py[a];
                for (int x = x0; x <= x1; x++)
                {
                    double qx = x + 0.5 - px[a], wb = (qx * vy) - (qy * vx), wc = (ux * qy) - (uy * qx);
                    if (wb >= -1e-6 && wc >= -1e-6 && wb + wc <= 1 + 1e-6)
                    {
                        pixels[(y * width) + x] = shades[Math.Clamp((int)(shade[a] + (wb * db) + (wc * dc)), 0, Shades - 1)];
                    }
                }
            }
        }

        SKImageInfo info = new(width, height, SKColorType.Rgba8888, SKAlphaType.Premul);
        ReadOnlySpan<byte> bytes = System.Runtime.InteropServices.MemoryMarshal.AsBytes(pixels.AsSpan());
        using SKImage raw = SKImage.FromPixelCopy(info, bytes);
        using SKPixmap? pixmap = raw.PeekPixels();
        SKData? data = pixmap?.Encode(new SKPngEncoderOptions(SKPngEncoderFilterFlags.Sub, Compression));

        // An image that knows its PNG is put into an SVG as it is, instead of being compressed again.
        return data is null ? throw new InvalidOperationException("The map could not be encoded as PNG.") : SKImage.FromEncodedData(data);
    }

    private static uint Rgba(Color c) => BitConverter.IsLittleEndian
        ? c.R | ((uint)c.G << 8) | ((uint)c.B << 16) | 0xFF000000u
        : ((uint)c.R << 24) | ((uint)c.G << 16) | ((uint)c.B << 8) | 0xFFu;
}
