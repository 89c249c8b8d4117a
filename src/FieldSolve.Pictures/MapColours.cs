using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>
/// The colours of the report's live maps (Page/colours.js) for pictures: paths in OKLab (B. Ottosson, "A perceptual color space for image processing", 2020) along which
/// lightness grows in even steps, so the order survives in grey and to the colour-blind.
/// </summary>
internal sealed class MapColours : IColormap
{
    private const int Steps = 256;

    private readonly Color[] table;

    private MapColours(string name, Func<double, (double Lightness, double Chroma, double Hue)> path)
    {
        Name = name;
        table = [.. Enumerable.Range(0, Steps).Select(k => Of(path(k / (Steps - 1.0))))];
    }

    /// <summary>Deep sea to sand: potentials.</summary>
    public static MapColours Shore { get; } = new("shore", t => Along(t, 0.27, 0.93, [(0, 0.09, 268), (0.3, 0.105, 232), (0.55, 0.09, 185), (0.8, 0.10, 125), (1, 0.115, 96)]));

    /// <summary>Night to ember to straw: magnitudes of the field.</summary>
    public static MapColours Ember { get; } = new("ember", t => Along(t, 0.2, 0.94, [(0, 0.06, 300), (0.3, 0.15, 338), (0.55, 0.175, 385), (0.8, 0.15, 420), (1, 0.09, 452)]));

    /// <summary>Blue through pale to orange, equally dark at both ends: residuals.</summary>
    public static MapColours Diverging { get; } = new("diverging", t =>
    {
        double size = Math.Abs((2 * t) - 1);
        return (0.96 - (0.54 * size), 0.145 * Math.Min(1, 1.25 * size), t < 0.5 ? 252 : 52);
    });

    /// <inheritdoc/>
    public string Name { get; }

    /// <inheritdoc/>
    public Color GetColor(double position) => table[Math.Clamp((int)Math.Round(position * (Steps - 1)), 0, Steps - 1)];

    private static (double Lightness, double Chroma, double Hue) Along(double t, double dark, double light, (double At, double Chroma, double Hue)[] stops)
    {
        int k = 0;
        while (k + 2 < stops.Length && t > stops[k + 1].At)
        {
            k++;
        }

        double w = (t - stops[k].At) / (stops[k + 1].At - stops[k].At);
        return (dark + ((light - dark) * t), stops[k].Chroma + ((stops[k + 1].Chroma - stops[k].Chroma) * w), stops[k].Hue + ((stops[k + 1].Hue - stops[k].Hue) * w));
    }

    // sRGB; chroma gives way where the screen cannot show it.
    private static Color Of((double Lightness, double Chroma, double Hue) colour)
    {
        (double sin, double cos) = Math.SinCos(colour.Hue * Math.PI / 180);
        for (double chroma = colour.Chroma; ; chroma *= 0.97)
        {
            double a = chroma * cos, b = chroma * sin;
            double l = Math.Pow(colour.Lightness + (0.3963377774 * a) + (0.2158037573 * b), 3);
            double m = Math.Pow(colour.Lightness - (0.1055613458 * a) - (0.0638541728 * b), 3);
            double s = Math.Pow(colour.Lightness - (0.0894841775 * a) - (1.2914855480 * b), 3);
            double[] rgb =
            [
                (4.0767416621 * l) - (3.3077115913 * m) + (0.2309699292 * s),
                (-1.2684380046 * l) + (2.6097574011 * m) - (0.3413193965 * s),
                (-0.0041960863 * l) - (0.7034186147 * m) + (1.7076147010 * s),
            ];
            if (chroma < 1e-3 || rgb.All(v => v is >= -1e-4 and <= 1.0001))
            {
                byte[] shown = [.. rgb.Select(v => Math.Clamp(v, 0, 1)).Select(x => (byte)Math.Round(255 * (x <= 0.0031308 ? 12.92 * x : (1.055 * Math.Pow(x, 1 / 2.4)) - 0.055)))];
                return new Color(shown[0], shown[1], shown[2]);
            }
        }
    }
}
