using FieldSolve.Meshing;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>
/// The edges of a mesh. They are strung into long polylines and rounded to a tenth of a pixel, which keeps the SVG of some ten
/// thousand edges small; a larger mesh becomes an image in it.
/// </summary>
/// <param name="mesh">The triangles.</param>
/// <param name="scale">Multiplies metres to give plot units.</param>
internal sealed class MeshLines(TriangleMesh mesh, double scale) : FrameDrawing
{
    private const int MostVectorEdges = 45_000, Quality = 80;

    private SKImage? image;

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        SKPoint[] pixels = [.. Enumerable.Range(0, mesh.VertexCount).Select(i => Axes.GetPixel(new(scale * mesh.X[i], scale * mesh.Y[i])))
            .Select(p => new SKPoint(MathF.Round(p.X, 1), MathF.Round(p.Y, 1)))];
        using SKPath path = Path(pixels, out int edges);
        using SKPaint paint = new()
        {
            IsAntialias = true,
            IsStroke = true,
            Color = Color.FromHex("#3C5A78").ToSKColor(),
            StrokeWidth = edges > 20_000 ? 0.3f : edges > 3000 ? 0.45f : 0.7f,
        };
        if (edges <= MostVectorEdges)
        {
            rp.Canvas.DrawPath(path, paint);
            return;
        }

        PixelRect place = rp.DataRect;
        image ??= Painted(path, paint, place);
        rp.Canvas.DrawImage(image, new SKRect(place.Left, place.Top, place.Right, place.Bottom), new SKSamplingOptions(SKFilterMode.Linear));
    }

    private static SKImage Painted(SKPath path, SKPaint paint, PixelRect place)
    {
        const int Oversampling = 2;
        SKImageInfo info = new((int)Math.Ceiling(place.Width * Oversampling), (int)Math.Ceiling(place.Height * Oversampling));
        using SKSurface surface = SKSurface.Create(info);
        surface.Canvas.Clear(SKColors.White);
        surface.Canvas.Scale(Oversampling);
        surface.Canvas.Translate(-place.Left, -place.Top);
        surface.Canvas.DrawPath(path, paint);
        using SKImage drawn = surface.Snapshot();
        using SKData data = drawn.Encode(SKEncodedImageFormat.Jpeg, Quality);
        return SKImage.FromEncodedData(data);
    }

    // Each step leaves a vertex along an edge not drawn yet; when there is none, a new string begins.
    private SKPath Path(SKPoint[] pixels, out int edges)
    {
        List<int>[] ends = new List<int>[mesh.VertexCount];
        HashSet<(int, int)> seen = [];
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int c = 0; c < 3; c++)
            {
                int a = mesh.Corners[(3 * t) + c], b = mesh.Corners[(3 * t) + ((c + 1) % 3)];
                if (seen.Add((Math.Min(a, b), Math.Max(a, b))))
                {
                    (ends[a] ??= []).Add(b);
                    (ends[b] ??= []).Add(a);
                }
            }
        }

        edges = seen.Count;
        SKPath path = new();
        for (int start = 0; start < pixels.Length; start++)
        {
            int at = start;
            bool moved = false;
            while (ends[at] is { Count: > 0 } list)
            {
                int next = list[^1];
                list.RemoveAt(list.Count - 1);
                if (!seen.Remove((Math.Min(at, next), Math.Max(at, next))))
                {
                    continue;
                }

                if (!moved)
                {
                    path.MoveTo(pixels[at]);
                    moved = true;
                }

                path.LineTo(pixels[next]);
                at = next;
            }

            if (moved && ends[start] is { Count: > 0 })
            {
                start--;
            }
        }

        return path;
    }
}
