namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// A disc with two ideal arc contacts on its rim, everything in units of the sheet resistance (of the isotropic equivalent). The rim goes to a
/// straight line by a Möbius map and from there to a rectangle: R. F. Wick, J. Appl. Phys. 25 (1954) 741. Arcs are [p1, p2] and [p3, p4] in
/// counter-clockwise order, degrees.
/// </summary>
internal sealed class DiscArcs(double p1, double p2, double p3, double p4, LogChord? chord = null)
{
    private readonly LogChord chord = chord ?? RimChords.Isotropic;

    /// <summary>Opposite arcs of one half angle, at <paramref name="at"/> and at + 180 degrees.</summary>
    public static DiscArcs Opposite(double half, double at = 0, LogChord? chord = null) =>
        new(at - half, at + half, at + 180 - half, at + 180 + half, chord);

    /// <summary>Two-terminal resistance.</summary>
    public double Resistance => EllipticIntegrals.Ratio(RimChords.CrossRatio(chord, p1, p4, p2, p3));

    /// <summary>Potential of the arc [p3, p4] over that of [p1, p2] reached at a rim point, as a share of the whole drop: 0 at the latter, 1 at the former.</summary>
    public double Share(double at)
    {
        double turn = Turn(p1, at);
        return turn >= Turn(p1, p2) && turn <= Turn(p1, p3)
            ? Share(at, p1, p2, p3, p4)
            : Share(at, p2, p1, p4, p3);
    }

    /// <summary>V(a) - V(b) for one ampere that enters at [p3, p4] and leaves at [p1, p2].</summary>
    public double Reading(double a, double b) => Resistance * (Share(a) - Share(b));

    // With near contact [far1, near1] and distant contact [near2, far2]: x = cross-ratio takes near1, near2, far2 to 0, 1, infinity; far1 goes to -c. The
    // potential is the integral of dx / sqrt(x (1 - x) (x + c)); x = sin² t makes it Legendre's.
    private double Share(double at, double far1, double near1, double near2, double far2)
    {
        double x = RimChords.CrossRatio(chord, at, near2, near1, far2);
        double c = RimChords.CrossRatio(chord, far1, near2, near1, far2);
        double angle = Math.Atan2(Math.Sqrt(Math.Max(0, 1 - x)), Math.Sqrt(x)), m = 1 / (1 + c);
        return 1 - (EllipticIntegrals.Incomplete(angle, m) / EllipticIntegrals.Complement(c / (1 + c)));
    }

    private static double Turn(double from, double to)
    {
        double turn = (to - from) % 360;
        return turn < 0 ? turn + 360 : turn;
    }
}
