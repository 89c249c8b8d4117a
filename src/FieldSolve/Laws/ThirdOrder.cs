using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// Third-order sheet conductances in A m²/V³: K_a gets c11 E_a³ + c12 E_a E_b², K_b gets c22 E_b³ + c21 E_b E_a².
/// </summary>
/// <param name="C11">E_a³ in K_a.</param>
/// <param name="C12">E_a E_b² in K_a.</param>
/// <param name="C21">E_b E_a² in K_b.</param>
/// <param name="C22">E_b³ in K_b.</param>
public readonly record struct ThirdOrder(double C11, double C12, double C21, double C22)
{
    internal bool HasPotential => C12 == C21;

    internal double[] Magnitudes => [Math.Abs(C11), Math.Abs(C12), Math.Abs(C21), Math.Abs(C22)];

    internal string Terms => LawSummary.Terms("A m^2/V^3", ("c11", C11), ("c12", C12), ("c21", C21), ("c22", C22));

    internal double? Parameter(string key) => key switch
    {
        "c11" => C11,
        "c12" => C12,
        "c21" => C21,
        "c22" => C22,
        _ => null,
    };

    internal void RequireFinite()
    {
        Expect.Finite(C11, "A m^2/V^3", "c11");
        Expect.Finite(C12, "A m^2/V^3", "c12");
        Expect.Finite(C21, "A m^2/V^3", "c21");
        Expect.Finite(C22, "A m^2/V^3", "c22");
    }

    internal static ThirdOrder From(LawValues v) => new(v["c11"], v["c12"], v["c21"], v["c22"]);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    internal void AddValue(Vector<double> ea, Vector<double> eb, ref Vector<double> ka, ref Vector<double> kb)
    {
        Vector<double> aa = ea * ea, bb = eb * eb;
        ka += ((C11 * aa) + (C12 * bb)) * ea;
        kb += ((C21 * aa) + (C22 * bb)) * eb;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    internal void AddSlope(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
    {
        Vector<double> aa = ea * ea, bb = eb * eb, ab = ea * eb;
        at.Ka += ((C11 * aa) + (C12 * bb)) * ea;
        at.Kb += ((C21 * aa) + (C22 * bb)) * eb;
        at.Aa += (3 * C11 * aa) + (C12 * bb);
        at.Ab += 2 * C12 * ab;
        at.Ba += 2 * C21 * ab;
        at.Bb += (C21 * aa) + (3 * C22 * bb);
    }
}
