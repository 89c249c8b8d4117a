using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>The crystal axes a and b as two small arrows in the lower left corner of the frame.</summary>
/// <param name="axis">Angle from lab x to crystal a, radians.</param>
internal sealed class Compass(double axis) : FrameDrawing
{
    private const float Arm = 19, Inset = 35;

    /// <summary>The square it needs within a frame.</summary>
    public static SKRect Place(PixelRect frame) => new(frame.Left, frame.Bottom - (2 * Inset), frame.Left + (2 * Inset), frame.Bottom);

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        Pixel centre = new(rp.DataRect.Left + Inset, rp.DataRect.Bottom - Inset);
        DrawArm(rp, centre, axis, "a");
        DrawArm(rp, centre, axis + (Math.PI / 2), "b");
    }

    private static void DrawArm(RenderPack rp, Pixel centre, double angle, string name)
    {
        float dx = (float)Math.Cos(angle), dy = -(float)Math.Sin(angle);
        SKPoint tip = new(centre.X + (Arm * dx), centre.Y + (Arm * dy)), root = new(tip.X - (7 * dx), tip.Y - (7 * dy));
        using SKPaint paint = new() { IsAntialias = true, Color = Look.Ink.ToSKColor(), StrokeWidth = 1.5f, IsStroke = true };
        rp.Canvas.DrawLine(centre.X, centre.Y, root.X, root.Y, paint);
        using SKPath head = new();
        head.AddPoly([tip, new(root.X - (3 * dy), root.Y + (3 * dx)), new(root.X + (3 * dy), root.Y - (3 * dx))]);
        paint.IsStroke = false;
        rp.Canvas.DrawPath(head, paint);
        LabelStyle label = new() { Text = name, FontName = EmbeddedFont.Family, FontSize = 13, ForeColor = Look.Ink, Alignment = Alignment.MiddleCenter };
        label.Render(rp.Canvas, new(tip.X + (9 * dx), tip.Y + (9 * dy)), rp.Paint);
    }
}
