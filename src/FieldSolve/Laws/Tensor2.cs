namespace FieldSolve.Laws;

/// <summary>A 2 x 2 tensor; rows are the components of K, columns those of E.</summary>
/// <param name="Aa">dKa/dEa, siemens per square.</param>
/// <param name="Ab">dKa/dEb, siemens per square.</param>
/// <param name="Ba">dKb/dEa, siemens per square.</param>
/// <param name="Bb">dKb/dEb, siemens per square.</param>
public readonly record struct Tensor2(double Aa, double Ab, double Ba, double Bb)
{
    /// <summary>The smaller eigenvalue of the symmetric part; the sheet is passive while it is positive.</summary>
    public double SmallestSymmetricEigenvalue
    {
        get
        {
            double mean = (Aa + Bb) / 2, half = (Aa - Bb) / 2, off = (Ab + Ba) / 2;
            return mean - Math.Sqrt((half * half) + (off * off));
        }
    }

    /// <summary>The ohmic tensor's element behind a parameter a, b or hall; null for another key.</summary>
    internal double? Parameter(string key) => key switch
    {
        "a" => Aa,
        "b" => Bb,
        "hall" => Ab,
        _ => null,
    };

    /// <summary>The same tensor seen from a frame in which the crystal axis a lies at the given angle (radians).</summary>
    public Tensor2 ToLab(double axis)
    {
        (double s, double c) = Math.SinCos(axis);

        // T_lab = R(axis) T R(-axis).
        double p = (c * Aa) - (s * Ba), q = (c * Ab) - (s * Bb);
        double r = (s * Aa) + (c * Ba), t = (s * Ab) + (c * Bb);
        return new((p * c) - (q * s), (p * s) + (q * c), (r * c) - (t * s), (r * s) + (t * c));
    }
}
