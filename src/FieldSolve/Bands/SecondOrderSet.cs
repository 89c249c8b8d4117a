using FieldSolve.Laws;

namespace FieldSolve.Bands;

/// <summary>Second-order elements with the errors of their quadrature.</summary>
/// <param name="Value">A m/V².</param>
/// <param name="Error">A m/V², ≥ 0 each.</param>
public readonly record struct SecondOrderSet(SecondOrder Value, SecondOrder Error)
{
    /// <summary>Names and numbers in the order d11, d12, d16, d21, d22, d26.</summary>
    public IReadOnlyList<(string Name, Estimate Number)> Elements =>
    [
        ("d11", new(Value.D11, Error.D11)), ("d12", new(Value.D12, Error.D12)), ("d16", new(Value.D16, Error.D16)),
        ("d21", new(Value.D21, Error.D21)), ("d22", new(Value.D22, Error.D22)), ("d26", new(Value.D26, Error.D26)),
    ];

    /// <summary>The sum of two sets; errors add.</summary>
    public static SecondOrderSet operator +(SecondOrderSet a, SecondOrderSet b) => new(Sum(a.Value, b.Value), Sum(a.Error, b.Error));

    /// <summary>The same tensor in a frame whose axes are turned counter-clockwise by an angle.</summary>
    /// <param name="angle">rad.</param>
    public SecondOrderSet InFrame(double angle)
    {
        (double s, double c) = Math.SinCos(angle);
        return new(Turned(Value, c, s, s), Turned(Error, Math.Abs(c), Math.Abs(s), -Math.Abs(s)));
    }

    private static SecondOrder Sum(SecondOrder a, SecondOrder b) =>
        new(a.D11 + b.D11, a.D12 + b.D12, a.D16 + b.D16, a.D21 + b.D21, a.D22 + b.D22, a.D26 + b.D26);

    // T'_ijk = e_i·p e_j·q e_k·r T_pqr with the new axes e_1 = (c, s), e_2 = (-minus, c); for errors all entries are positive.
    private static SecondOrder Turned(SecondOrder d, double c, double s, double minus)
    {
        double[,] e = { { c, s }, { -minus, c } };
        double Of(int p, int q, int r) => (p, q + r) switch
        {
            (0, 0) => d.D11,
            (0, 2) => d.D12,
            (0, _) => d.D16,
            (_, 0) => d.D21,
            (_, 2) => d.D22,
            _ => d.D26,
        };
        double New(int i, int j, int k)
        {
            double sum = 0;
            for (int n = 0; n < 8; n++)
            {
                (int p, int q, int r) = (n >> 2, (n >> 1) & 1, n & 1);
                sum += e[i, p] * e[j, q] * e[k, r] * Of(p, q, r);
            }

            return sum;
        }

        return new(New(0, 0, 0), New(0, 1, 1), New(0, 0, 1), New(1, 0, 0), New(1, 1, 1), New(1, 0, 1));
    }
}
