namespace FieldSolve.Lockin;

/// <summary>Harmonics of a signal known at an even number of equally spaced phases, and back.</summary>
internal static class CycleTransform
{
    /// <summary>Peak amplitudes along sin(h theta) and cos(h theta); for h = 0 the mean stands in the second.</summary>
    public static (double Sine, double Cosine) Harmonic(ReadOnlySpan<double> signal, int harmonic)
    {
        int phases = signal.Length;
        double sine = 0, cosine = 0;
        for (int m = 0; m < phases; m++)
        {
            (double s, double c) = At(harmonic, m, phases);
            sine += s * signal[m];
            cosine += c * signal[m];
        }

        double scale = harmonic == 0 || 2 * harmonic == phases ? 1.0 / phases : 2.0 / phases;
        return (scale * sine, scale * cosine);
    }

    /// <summary>sin and cos of harmonic times 2 pi m / phases, with the exact zeros and ones of a whole cycle.</summary>
    public static (double Sine, double Cosine) At(int harmonic, int m, int phases)
    {
        int turn = (int)((long)harmonic * m % phases);
        (double s, double c) = Math.SinCos(2 * Math.PI * turn / phases);
        return (2 * turn % phases == 0 ? 0 : s, 4 * turn % phases == 0 && 2 * turn % phases != 0 ? 0 : c);
    }

    /// <summary>
    /// The derivative of the trigonometric interpolant, by phase: entry [m, l] multiplies the value at phase l. L. N. Trefethen, Spectral Methods in MATLAB
    /// (2000), chapter 3.
    /// </summary>
    public static double[,] Derivative(int phases)
    {
        double[,] d = new double[phases, phases];
        for (int m = 0; m < phases; m++)
        {
            for (int l = 0; l < phases; l++)
            {
                if (m != l)
                {
                    d[m, l] = 0.5 * ((m - l) % 2 == 0 ? 1 : -1) / Math.Tan((m - l) * Math.PI / phases);
                }
            }
        }

        return d;
    }
}
