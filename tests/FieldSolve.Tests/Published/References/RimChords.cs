namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>Logarithm of the distance between two rim points of a disc, up to terms that cancel in cross-ratios. Angles in degrees.</summary>
internal delegate double LogChord(double a, double b);

/// <summary>Distances that a disc's rim points have after the maps that make the sheet an isotropic disc.</summary>
internal static class RimChords
{
    /// <summary>An isotropic disc: the chord itself.</summary>
    public static double Isotropic(double a, double b) => Math.Log(2 * Math.Abs(Math.Sin(Radians(a - b) / 2)));

    /// <summary>
    /// A disc whose sheet resistivity along the direction at 0 degrees is <paramref name="ratio"/> times that across: the disc stretches
    /// to an ellipse, whose rim potential for a point source separates in elliptic coordinates (J. D. Wasscher, Philips Res. Rep. 16 (1961)
    /// 301 for the stretch; the series is an elementary separation of variables).
    /// </summary>
    public static LogChord Anisotropic(double ratio)
    {
        double root = Math.Sqrt(ratio), q = (root - 1) / (root + 1);
        return (a, b) =>
        {
            double sum = Isotropic(a, b), power = q;
            for (int n = 1; Math.Abs(power) > 1e-18; n++, power *= q)
            {
                (double sa, double ca) = Math.SinCos(n * Radians(a));
                (double sb, double cb) = Math.SinCos(n * Radians(b));
                sum -= 2.0 / n * ((power * ca * cb / (1 - power)) - (power * sa * sb / (1 + power)));
            }

            return sum;
        };
    }

    /// <summary>|ac||bd| / (|ad||bc|).</summary>
    public static double CrossRatio(LogChord chord, double a, double b, double c, double d) =>
        Math.Exp(chord(a, c) + chord(b, d) - chord(a, d) - chord(b, c));

    public static double Radians(double degrees) => degrees * Math.PI / 180;
}
