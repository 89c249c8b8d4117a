namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>Point contacts on the rim of a disc and at the corners of a rectangle, in units of the sheet resistance.</summary>
internal static class PointContacts
{
    /// <summary>
    /// (V_a - V_b) / I on a disc for a current that enters at <paramref name="source"/>: the logarithmic potentials of L. J. van der Pauw,
    /// Philips Res. Rep. 13 (1958) 1; with an anisotropic chord, of the ellipse that the stretch gives.
    /// </summary>
    public static double Disc(double source, double drain, double a, double b, LogChord? chord = null)
    {
        LogChord c = chord ?? RimChords.Isotropic;
        return (c(b, source) - c(a, source) - c(b, drain) + c(a, drain)) / Math.PI;
    }

    /// <summary>
    /// Rectangle of sides l1 and l2, current between the two ends of one l1 edge, voltage across the other l1 edge: H. C. Montgomery,
    /// J. Appl. Phys. 42 (1971) 2971; B. F. Logan, S. O. Rice, R. F. Wick, J. Appl. Phys. 42 (1971) 2975.
    /// </summary>
    public static double Rectangle(double l1, double l2)
    {
        double sum = 0;
        for (int n = 1; n < 400; n += 2)
        {
            double term = 1 / (n * Math.Sinh(n * Math.PI * l2 / l1));
            sum += term;
            if (term < 1e-17 * sum)
            {
                break;
            }
        }

        return 8 / Math.PI * sum;
    }

    /// <summary>
    /// Share by which one arc of length <paramref name="length"/> (in diameters) instead of a point contact lowers the sheet resistance that the theorem
    /// gives, the other three being points 90 degrees apart. To leading order -length² / (16 ln 2): van der Pauw (1958), from memory; the
    /// closed form follows from the same conformal map.
    /// </summary>
    public static double OneArcError(double length)
    {
        double t = Math.Tan(length / 2);
        return (Math.Log(1 + Math.Sqrt(1 - (t * t))) / Math.Log(2)) - 1;
    }

    /// <summary>The same for one point contact at a depth (in diameters) inside the rim; to leading order -depth² / (2 ln 2).</summary>
    public static double BuriedPointError(double depth)
    {
        double eta = depth / (1 - depth);
        return -Math.Log(1 + (eta * eta)) / (2 * Math.Log(2));
    }
}
