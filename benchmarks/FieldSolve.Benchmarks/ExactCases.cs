using System.Globalization;

namespace FieldSolve.Benchmarks;

/// <summary>A device with one reading whose exact value is known.</summary>
/// <param name="Name">For the table.</param>
/// <param name="Toml">The device file without [mesh].</param>
/// <param name="Pair">Reading.</param>
/// <param name="IsEven">Its even part.</param>
/// <param name="Exact">V.</param>
internal sealed record ExactCase(string Name, string Toml, string Pair, bool IsEven, double Exact);

/// <summary>
/// Problems with exact values. Sources: arcs on a disc, R. F. Wick, J. Appl. Phys. 25, 741 (1954) (K/K'); anisotropic disc, the same after W. L. V. Price's
/// stretch, J. Phys. D 5, 1127 (1972); Hall plates, H. J. Lippmann, F. Kuhrt, Z. Naturforsch. 13a, 462 and 474 (1958); square with its axis askew, symmetry about a
/// diagonal after L. J. van der Pauw's stretch, Philips Res. Rep. 16, 187 (1961); ring with velocity saturation, the
/// law of D. M. Caughey, R. E. Thomas, Proc. IEEE 55, 2192 (1967), integrated; second-order disc, reciprocity integral by quadrature. All values recomputed.
/// </summary>
internal static class ExactCases
{
    private const string Isotropic = "kind = \"ohmic\"\na = \"1 S\"\nb = \"1 S\"";

    public static IReadOnlyList<ExactCase> All { get; } =
    [
        Disc("arcs of half angle 1 deg", Isotropic, 1, 3.4597075683824),
        Disc("arcs of half angle 5 deg", Isotropic, 5, 2.4347192519844),
        Disc("arcs of half angle 10 deg", Isotropic, 10, 1.992228946074),
        Disc("arcs of half angle 20 deg", Isotropic, 20, 1.5459938513055),
        Disc("arcs of half angle 45 deg", Isotropic, 45, 1.0),
        Arcs("arcs -10..10 and 110..130 deg", Isotropic, 0, 10, 120, 10, "source", 1.8990099896817),
        Arcs("arcs -2..2 and 160..164 deg", Isotropic, 0, 2, 162, 2, "source", 3.0104965138733),
        Disc("ratio 4, 10 deg arcs, along a", Anisotropic(0), 10, 3.27581220317),
        Disc("ratio 4, 10 deg arcs, 30 deg from a", Anisotropic(30), 10, 2.734611142937),
        Arcs("the same, across", Anisotropic(30), 180, 10, 0, 10, "across", 0.811705779908),
        Disc("ratio 4, 10 deg arcs, 60 deg from a", Anisotropic(60), 10, 1.84764520906),
        Bar("square, Hall angle 0.5 rad", 1, 0.5, "source", 1.13949392732),
        Bar("square, Hall angle 1.2 rad", 1, 1.2, "source", 2.75970360133),
        Bar("square, Hall angle 1.2 rad, across", 1, 1.2, "across", -0.840098054 * Math.Tan(1.2)),
        Bar("bar 2 : 1, Hall angle 1 rad", 2, 1, "source", 2.8934739059),
        Square("square, ratio 4, axis 45 deg off", 4),
        Square("square, ratio 30, axis 45 deg off", 30),
        Ring(),
        SecondOrder("second order, 10 deg arcs, even across", 10, 0.723307936),
        SecondOrder("second order, 20 deg arcs, even across", 20, 0.605270707),
        SecondOrder("second order, 45 deg arcs, even across", 45, 0.374316563),
    ];

    // a is the axis of high resistivity; the current runs along +x.
    private static string Anisotropic(double direction) =>
        string.Create(CultureInfo.InvariantCulture, $"kind = \"ohmic\"\naxis = \"{-direction:R} deg\"\na = \"0.5 S\"\nb = \"2 S\"");

    private static ExactCase Disc(string name, string law, double half, double exact) => Arcs(name, law, 180, half, 0, half, "source", exact);

    private static ExactCase Arcs(string name, string law, double at1, double half1, double at2, double half2, string pair, double exact) =>
        new(name, Sheet("disc = { diameter = \"2 m\" }", law) + Arc("s", at1, half1) + Arc("d", at2, half2)
            + Tip("l", 0, 1) + Tip("r", 0, -1) + Wiring(pair == "across") + Drive(1, false), pair, false, exact);

    private static ExactCase Bar(string name, double length, double angle, string pair, double exact)
    {
        // rho_xx = 1 ohm: s = cos²(angle), s_h = sin cos.
        (double s, double c) = Math.SinCos(angle);
        string law = string.Create(CultureInfo.InvariantCulture, $"kind = \"ohmic\"\na = \"{c * c:R} S\"\nb = \"{c * c:R} S\"\nhall = \"{s * c:R} S\"");
        string sheet = string.Create(CultureInfo.InvariantCulture, $"bar = {{ length = \"{length:R} m\", width = \"1 m\" }}");
        return new(name, Sheet(sheet, law) + End("s", "left") + End("d", "right") + Tip("l", 0, 0.5) + Tip("r", 0, -0.5)
            + Wiring(pair == "across") + Drive(1, false), pair, false, exact);
    }

    // A rhombus where it is isotropic: one square, whatever the ratio.
    private static ExactCase Square(string name, double ratio)
    {
        string law = string.Create(CultureInfo.InvariantCulture, $"kind = \"ohmic\"\naxis = \"45 deg\"\na = \"{Math.Sqrt(ratio):R} S\"\nb = \"{1 / Math.Sqrt(ratio):R} S\"");
        return new(name, Sheet("bar = { length = \"1 m\", width = \"1 m\" }", law) + End("s", "left") + End("d", "right") + Wiring(false) + Drive(1, false), "source", false, 1);
    }

    private static ExactCase Ring()
    {
        const double Alpha = 0.9;
        string law = "kind = \"saturating\"\na = \"1 S\"\nb = \"1 S\"\nfield_a = \"1 V/m\"\nfield_b = \"1 V/m\"\nsharpness = 2";
        double exact = Alpha * (Math.Acosh(3 / Alpha) - Math.Acosh(1 / Alpha));
        return new("ring, saturating law at 0.9 of the limit", Sheet("ring = { inner = \"1 m\", outer = \"3 m\" }", law)
            + "[[contact]]\nname = \"s\"\nedge = { rim = \"inner\" }\n[[contact]]\nname = \"d\"\nedge = { rim = \"outer\" }\n"
            + Wiring(false) + Drive(2 * Math.PI * Alpha, false), "source", false, exact);
    }

    /// <summary>The second-order disc with 10 degree arcs at a drive that makes the even part large enough beside the along voltage to be asked for finely.</summary>
    public static ExactCase StrongerSecondOrder => SecondOrder("second order, 10 deg arcs, even across", 10, 0.723307936, 3e-4);

    // V2 = Rs³ I²/R c21 d21 with the crystal along the current.
    private static ExactCase SecondOrder(string name, double half, double coefficient, double current = 1e-6)
    {
        string law = "kind = \"quadratic\"\na = \"1 S\"\nb = \"1 S\"\nd21 = \"1 A m/V^2\"";
        return new(name, Sheet("disc = { diameter = \"2 m\" }", law) + Arc("s", 180, half) + Arc("d", 0, half) + Tip("l", 0, 1) + Tip("r", 0, -1)
            + Tip("p", -0.9, 0) + Tip("q", 0.9, 0)
            + "[[wiring]]\nname = \"w\"\nsource = \"s\"\ndrain = \"d\"\nalong = [\"p\", \"q\"]\nacross = [\"l\", \"r\"]\n" + Drive(current, true),
            "across", true, coefficient * current * current);
    }

    private static string Sheet(string sheet, string law) => $"[sheet]\n{sheet}\n[law]\n{law}\n";

    private static string Arc(string name, double at, double half) => string.Create(
        CultureInfo.InvariantCulture, $"[[contact]]\nname = \"{name}\"\nedge = {{ at = \"{at:R} deg\", width = \"{half * Math.PI / 90:R} m\" }}\n");

    private static string End(string name, string end) => $"[[contact]]\nname = \"{name}\"\nedge = {{ end = \"{end}\" }}\n";

    private static string Tip(string name, double x, double y) =>
        string.Create(CultureInfo.InvariantCulture, $"[[point]]\nname = \"{name}\"\nat = [\"{x:R} m\", \"{y:R} m\"]\n");

    private static string Wiring(bool across) =>
        "[[wiring]]\nname = \"w\"\nsource = \"s\"\ndrain = \"d\"\n" + (across ? "across = [\"l\", \"r\"]\n" : "");

    private static string Drive(double current, bool both) => string.Create(
        CultureInfo.InvariantCulture,
        $"[drive]\ncurrent = {{ from = \"{current:R} A\", to = \"{current:R} A\", steps = 1 }}\nboth_signs = {(both ? "true" : "false")}\n");
}
