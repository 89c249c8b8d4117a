using System.Globalization;
using System.Text;
using System.Text.RegularExpressions;
using FieldSolve.Files;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>One or several panels and a key, with their size on paper; saved as PNG and as SVG.</summary>
/// <param name="Panels">Plots with their places inside the figure, in units of 1/96 inch.</param>
/// <param name="Width">Width in the same units.</param>
/// <param name="Height">Height in the same units.</param>
internal sealed partial record Figure(IReadOnlyList<(Plot Plot, PixelRect Place)> Panels, int Width, int Height) : IDisposable
{
    private const int KeyGap = 12, KeyTop = 44;

    private IReadOnlyList<KeyEntry> Key { get; init; } = [];

    private (float X, float Y) KeyPlace { get; init; }

    /// <summary>PNG pixels per unit: about 220 dots per inch when a picture fills the width of an A4 page.</summary>
    public const float PngScale = 1.75f;

    /// <summary>A figure of one plot.</summary>
    public static Figure Of(Plot plot, int width, int height) => new([(plot, new PixelRect(0, width, height, 0))], width, height);

    /// <summary>Plots of equal size in rows.</summary>
    public static Figure Rows(IReadOnlyList<Plot> plots, int columns, int width, int height)
    {
        int rows = (plots.Count + columns - 1) / columns;
        return new(
            [.. plots.Select((p, k) => (p, new PixelRect(
                k % columns * width, ((k % columns) + 1) * width, ((k / columns) + 1) * height, k / columns * height)))],
            Math.Min(columns, plots.Count) * width, rows * height);
    }

    /// <summary>The same figure, widened by a key at its right.</summary>
    public Figure WithKeyRight(IReadOnlyList<KeyEntry> key) => this with
    {
        Key = key,
        KeyPlace = (Width, KeyTop),
        Width = Width + KeyEntry.WidthOf(key) + KeyGap,
        Height = Math.Max(Height, (int)(KeyTop + (key.Count * KeyEntry.LineHeight) + KeyGap)),
    };

    /// <summary>The same figure, lengthened by a key below it.</summary>
    public Figure WithKeyBelow(IReadOnlyList<KeyEntry> key, float left) => this with
    {
        Key = key,
        KeyPlace = (left, Height),
        Height = Height + (int)(key.Count * KeyEntry.LineHeight) + KeyGap,
    };

    /// <summary>The same figure with a key at a place that is free.</summary>
    public Figure WithKeyAt(IReadOnlyList<KeyEntry> key, float x, float y) => this with { Key = key, KeyPlace = (x, y) };

    /// <summary>Width of the PNG in pixels.</summary>
    public int PngWidth => (int)MathF.Round(Width * PngScale);

    /// <summary>Height of the PNG in pixels.</summary>
    public int PngHeight => (int)MathF.Round(Height * PngScale);

    /// <summary>The picture as PNG bytes.</summary>
    public byte[] Png()
    {
        using SKSurface surface = SKSurface.Create(new SKImageInfo(PngWidth, PngHeight, SKColorType.Rgba8888, SKAlphaType.Opaque));
        surface.Canvas.Clear(SKColors.White);
        surface.Canvas.Scale(PngScale);
        Draw(surface.Canvas);
        using SKPixmap? pixels = surface.PeekPixels();
        using SKData? data = pixels?.Encode(new SKPngEncoderOptions(SKPngEncoderFilterFlags.Sub, 5));
        return data?.ToArray() ?? throw new InvalidOperationException("The picture could not be encoded as PNG.");
    }

    /// <summary>The picture as SVG text; one unit is one CSS pixel.</summary>
    public string Svg()
    {
        using MemoryStream memory = new();
        using (SKCanvas canvas = SKSvgCanvas.Create(new SKRect(0, 0, Width, Height), memory))
        {
            canvas.DrawRect(0, 0, Width, Height, new SKPaint { Color = SKColors.White });
            Draw(canvas);
        }

        return Tidy(Encoding.UTF8.GetString(memory.ToArray()).ReplaceLineEndings("\n"));
    }

    /// <summary>Writes NAME.png and NAME.svg.</summary>
    public void Save(string pngPath, string svgPath)
    {
        WholeFile.Write(pngPath, stream => stream.Write(Png()));
        WholeFile.WriteText(svgPath, Svg());
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        foreach ((Plot plot, _) in Panels)
        {
            plot.Dispose();
        }
    }

    private void Draw(SKCanvas canvas)
    {
        foreach ((Plot plot, PixelRect place) in Panels)
        {
            plot.RenderManager.ClearCanvasBeforeEachRender = false;
            plot.Render(canvas, place);
        }

        for (int k = 0; k < Key.Count; k++)
        {
            Key[k].Draw(canvas, KeyPlace.X, KeyPlace.Y + (k * KeyEntry.LineHeight));
        }
    }

    private string Tidy(string svg)
    {
        // Names of clips and images come from a counter of the whole process: number them anew, so that the bytes depend on the picture alone.
        Dictionary<string, string> names = [];
        foreach (Match match in Identifier().Matches(svg))
        {
            names.TryAdd(match.Groups[1].Value, string.Create(CultureInfo.InvariantCulture, $"d{names.Count}"));
        }

        string text = Identifier().Replace(svg, m => $"id=\"{names[m.Groups[1].Value]}\"");
        text = Reference().Replace(text, m => names.TryGetValue(m.Groups[2].Value, out string? name) ? $"{m.Groups[1].Value}#{name}{m.Groups[3].Value}" : m.Value);

        // A view box lets a page scale the picture, and a viewer without the font takes one of similar width instead of a serif one.
        string size = string.Create(CultureInfo.InvariantCulture, $"width=\"{Width}\" height=\"{Height}\"");
        int first = text.IndexOf(size, StringComparison.Ordinal);
        text = text.Insert(first, string.Create(CultureInfo.InvariantCulture, $"viewBox=\"0 0 {Width} {Height}\" "));
        text = text.Replace("font-family=\"DejaVu Sans\"", "font-family=\"DejaVu Sans, Verdana, Geneva, sans-serif\"", StringComparison.Ordinal);
        return TrailingComma().Replace(text, "$1\"");
    }

    [GeneratedRegex("id=\"([a-z]+_[0-9a-f]+)\"")]
    private static partial Regex Identifier();

    [GeneratedRegex("(url\\(|href=\")#([a-z]+_[0-9a-f]+)(\\)|\")")]
    private static partial Regex Reference();

    [GeneratedRegex("( [xy]=\"[-+0-9.e, ]*), \"")]
    private static partial Regex TrailingComma();
}
