using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>How a curve looks; one line of a figure's key.</summary>
/// <param name="Name">Text in the key.</param>
/// <param name="Colour">Colour of line and marker.</param>
/// <param name="Width">Width of the line; 0 for none.</param>
/// <param name="Dash">Lengths of dash and gap; null for solid.</param>
/// <param name="Shape">Marker.</param>
internal sealed record KeyEntry(string Name, Color Colour, float Width, float[]? Dash, MarkerShape Shape)
{
    /// <summary>Height of one line of a key.</summary>
    public const float LineHeight = 21;

    private const float SampleWidth = 34, MarkerSize = 7;

    /// <summary>The k-th curve of a figure: its own colour, dashes and marker.</summary>
    public static KeyEntry Curve(int k, string name, bool marked = true) =>
        new(name, Look.Line(k), 1.6f, Look.Dash(k), marked ? Look.Shape(k) : MarkerShape.None);

    /// <summary>Width of the widest line of a key.</summary>
    public static int WidthOf(IEnumerable<KeyEntry> entries)
    {
        using SKFont font = new(EmbeddedFont.Typeface, Look.TickSize);
        return (int)Math.Ceiling(SampleWidth + 8 + entries.Select(e => font.MeasureText(e.Name)).DefaultIfEmpty(0).Max());
    }

    /// <summary>Draws the marker at a pixel.</summary>
    public void DrawMarker(SKCanvas canvas, Pixel at)
    {
        MarkerStyle style = new(Shape, MarkerSize, Colour);
        using Paint paint = Paint.NewDisposablePaint();
        Drawing.DrawMarker(canvas, paint, at, style);
    }

    /// <summary>Draws one line of a key; (x, y) is its upper left corner.</summary>
    public void Draw(SKCanvas canvas, float x, float y)
    {
        float middle = y + (LineHeight / 2);
        if (Width > 0)
        {
            Strokes.Draw(canvas, [[new(x, middle), new(x + SampleWidth, middle)]], Colour, Width, Dash);
        }

        if (Shape != MarkerShape.None)
        {
            DrawMarker(canvas, new(x + (SampleWidth / 2), middle));
        }

        using SKFont font = new(EmbeddedFont.Typeface, Look.TickSize) { Edging = SKFontEdging.Antialias };
        using SKPaint ink = new() { IsAntialias = true, Color = Look.Ink.ToSKColor() };
        canvas.DrawText(Name, x + SampleWidth + 8, middle + (0.36f * Look.TickSize), SKTextAlign.Left, font, ink);
    }
}
