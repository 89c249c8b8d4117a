using System.Reflection;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>
/// Serves DejaVu Sans from the assembly for every font the plots ask for, so that pictures show text, and the same text, on machines
/// without any fonts.
/// </summary>
internal sealed class EmbeddedFont : IFontResolver
{
    /// <summary>Name of the embedded family.</summary>
    public const string Family = "DejaVu Sans";

    private static readonly Lock Gate = new();
    private static bool registered;
    private static readonly Lazy<SKTypeface> Loaded = new(Load);

    /// <summary>The embedded font.</summary>
    public static SKTypeface Typeface => Loaded.Value;

    /// <summary>Makes the embedded font the one the plots use; safe to call again and from several threads.</summary>
    public static void Use()
    {
        lock (Gate)
        {
            if (!registered)
            {
                ScottPlot.Fonts.FontResolvers.Insert(0, new EmbeddedFont());
                ScottPlot.Fonts.Default = Family;
                registered = true;
            }
        }
    }

    /// <inheritdoc/>
    public SKTypeface? CreateTypeface(string fontName, FontWeight weight, FontSlant slant, FontSpacing spacing) => Typeface;

    /// <inheritdoc/>
    public SKTypeface? CreateTypeface(string fontName, bool bold, bool italic) => Typeface;

    private static SKTypeface Load()
    {
        using Stream stream = Assembly.GetExecutingAssembly().GetManifestResourceStream("DejaVuSans.ttf")
            ?? throw new InvalidOperationException("The embedded font DejaVuSans.ttf is missing from the assembly.");
        using SKData data = SKData.Create(stream);
        return SKTypeface.FromData(data);
    }
}
