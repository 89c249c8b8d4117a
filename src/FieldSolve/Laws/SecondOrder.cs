using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// Second-order sheet conductances in A m/V², contracted indices (1 = aa, 2 = bb, 6 = ab):
/// K_a gets d11 E_a² + d12 E_b² + 2 d16 E_a E_b, K_b gets d21 E_a² + d22 E_b² + 2 d26 E_a E_b.
/// </summary>
/// <param name="D11">E_a² in K_a.</param>
/// <param name="D12">E_b² in K_a.</param>
/// <param name="D16">2 E_a E_b in K_a.</param>
/// <param name="D21">E_a² in K_b.</param>
/// <param name="D22">E_b² in K_b.</param>
/// <param name="D26">2 E_a E_b in K_b.</param>
public readonly record struct SecondOrder(double D11, double D12, double D16, double D21, double D22, double D26)
{
    internal bool HasPotential => D12 == D26 && D16 == D21;

    internal double[] Magnitudes =>
        [Math.Abs(D11), Math.Abs(D12), Math.Abs(D16), Math.Abs(D21), Math.Abs(D22), Math.Abs(D26)];

    internal string Terms => LawSummary.Terms(
        "A m/V^2", ("d11", D11), ("d12", D12), ("d16", D16), ("d21", D21), ("d22", D22), ("d26", D26));

    internal double? Parameter(string key) => key switch
    {
        "d11" => D11,
        "d12" => D12,
        "d16" => D16,
        "d21" => D21,
        "d22" => D22,
        "d26" => D26,
        _ => null,
    };

    internal void RequireFinite()
    {
        Expect.Finite(D11, "A m/V^2", "d11");
        Expect.Finite(D12, "A m/V^2", "d12");
        Expect.Finite(D16, "A m/V^2", "d16");
        Expect.Finite(D21, "A m/V^2", "d21");
        Expect.Finite(D22, "A m/V^2", "d22");
        Expect.Finite(D26, "A m/V^2", "d26");
    }

    internal static SecondOrder From(LawValues v) => new(v["d11"], v["d12"], v["d16"], v["d21"], v["d22"], v["d26"]);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    internal void Value(Vector<double> ea, Vector<double> eb, out Vector<double> ka, out Vector<double> kb)
    {
        ka = (((D11 * ea) + (2 * D16 * eb)) * ea) + (D12 * eb * eb);
        kb = (((D21 * ea) + (2 * D26 * eb)) * ea) + (D22 * eb * eb);
    }

    // A form of degree two is half the product of its slope and E (Euler), so the value comes with the slope.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    internal void Slope(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
    {
        at.Aa = (2 * D11 * ea) + (2 * D16 * eb);
        at.Ab = (2 * D16 * ea) + (2 * D12 * eb);
        at.Ba = (2 * D21 * ea) + (2 * D26 * eb);
        at.Bb = (2 * D26 * ea) + (2 * D22 * eb);
        at.Ka = 0.5 * ((at.Aa * ea) + (at.Ab * eb));
        at.Kb = 0.5 * ((at.Ba * ea) + (at.Bb * eb));
    }
}
