using MathNet.Numerics.LinearAlgebra;

namespace FieldSolve.Bands;

/// <summary>
/// A profile described by a tensor: y(ψ) = mean + amplitude cos 2(ψ - axis), by weighted least squares, and what such a
/// description leaves out.
/// </summary>
public sealed record TensorFit
{
    private const int FewestPoints = 4;
    private const double SameDirection = 1e-6; // rad

    /// <summary>Mean over the directions, unit of the profile.</summary>
    public required Estimate Mean { get; init; }

    /// <summary>Amplitude of the cos 2ψ part, ≥ 0.</summary>
    public required Estimate Amplitude { get; init; }

    /// <summary>Direction of the largest value, rad, from -90 to 90 degrees.</summary>
    public required Estimate Axis { get; init; }

    /// <summary>The fit in the directions given.</summary>
    public required IReadOnlyList<double> Fitted { get; init; }

    /// <summary>Root mean square of what is left, over the mean.</summary>
    public required double ResidualRms { get; init; }

    /// <summary>Largest size of what is left, over the mean.</summary>
    public required double ResidualLargest { get; init; }

    /// <summary>Amplitudes of cos 4ψ and cos 6ψ over the mean; null where the directions are too few to tell.</summary>
    public required (double Fourth, double Sixth)? Harmonics { get; init; }

    /// <summary>Why a profile cannot be fitted, in words; null if it can.</summary>
    /// <param name="directions">rad.</param>
    public static string? Forbids(IReadOnlyList<double> directions)
    {
        ArgumentNullException.ThrowIfNull(directions);
        return directions.Count < FewestPoints || Distinct(directions) < 3
            ? "a tensor has three numbers: at least four rows in at least three directions are needed, where 180 deg on counts as the same direction"
            : null;
    }

    /// <summary>Fits.</summary>
    /// <param name="directions">rad.</param>
    /// <param name="values">One per direction.</param>
    /// <param name="errors">Standard errors, &gt; 0; null for equal weights, whose size then follows from the residual.</param>
    /// <exception cref="ArgumentException">Too few directions.</exception>
    public static TensorFit Of(IReadOnlyList<double> directions, IReadOnlyList<double> values, IReadOnlyList<double>? errors = null)
    {
        ArgumentNullException.ThrowIfNull(values);
        if (Forbids(directions) is { } forbids)
        {
            throw new ArgumentException(forbids, nameof(directions));
        }

        (Vector<double> c, Matrix<double> covariance) = Solve(directions, values, errors, 1);
        double[] fitted = [.. directions.Select(d => Harmonic(c, d))];
        double[] rest = [.. values.Zip(fitted, (v, f) => v - f)];
        if (errors is null)
        {
            covariance *= rest.Sum(r => r * r) / (rest.Length - 3);
        }

        double amplitude = Math.Sqrt((c[1] * c[1]) + (c[2] * c[2])), cos = amplitude > 0 ? c[1] / amplitude : 1, sin = amplitude > 0 ? c[2] / amplitude : 0;
        double Spread(double p, double q) => Math.Sqrt(Math.Max(0, (p * p * covariance[1, 1]) + (2 * p * q * covariance[1, 2]) + (q * q * covariance[2, 2])));
        double mean = Math.Abs(c[0]);
        return new TensorFit
        {
            Mean = new(c[0], Math.Sqrt(covariance[0, 0])),
            Amplitude = new(amplitude, Spread(cos, sin)),
            Axis = new(0.5 * Math.Atan2(c[2], c[1]), amplitude > 0 ? Math.Min(Math.PI / 2, 0.5 * Spread(-sin, cos) / amplitude) : Math.PI / 2),
            Fitted = fitted,
            ResidualRms = Math.Sqrt(rest.Sum(r => r * r) / rest.Length) / mean,
            ResidualLargest = rest.Max(Math.Abs) / mean,
            Harmonics = Distinct(directions) >= 8 ? Higher(directions, values, errors, mean) : null,
        };
    }

    /// <summary>The principal values with the axis called a nearest to a wanted one.</summary>
    /// <param name="wanted">Angle of crystal a as the file has it, rad.</param>
    /// <returns>Values along a and b, in the unit of the profile, and the angle of a, rad.</returns>
    public (Estimate A, Estimate B, double Axis) Principal(double wanted)
    {
        double off = Math.IEEERemainder(Axis.Value - wanted, Math.PI), error = Mean.Error + Amplitude.Error;
        Estimate larger = new(Mean.Value + Amplitude.Value, error), smaller = new(Mean.Value - Amplitude.Value, error);
        return Math.Abs(off) <= Math.PI / 4
            ? (larger, smaller, wanted + off)
            : (smaller, larger, wanted + off - Math.CopySign(Math.PI / 2, off));
    }

    private static (double, double) Higher(IReadOnlyList<double> directions, IReadOnlyList<double> values, IReadOnlyList<double>? errors, double mean)
    {
        (Vector<double> c, _) = Solve(directions, values, errors, 3);
        return (Math.Sqrt((c[3] * c[3]) + (c[4] * c[4])) / mean, Math.Sqrt((c[5] * c[5]) + (c[6] * c[6])) / mean);
    }

    private static (Vector<double> Coefficients, Matrix<double> Covariance) Solve(
        IReadOnlyList<double> directions, IReadOnlyList<double> values, IReadOnlyList<double>? errors, int harmonics)
    {
        double Weight(int i) => errors is null ? 1 : 1 / errors[i];
        Matrix<double> m = Matrix<double>.Build.Dense(directions.Count, 1 + (2 * harmonics), (i, j) => Weight(i) * Basis(directions[i], j));
        Vector<double> y = Vector<double>.Build.Dense(directions.Count, i => Weight(i) * values[i]);
        return (m.QR().Solve(y), m.TransposeThisAndMultiply(m).Inverse());
    }

    private static double Basis(double direction, int j)
    {
        double angle = (j + 1) / 2 * 2 * direction;
        return j == 0 ? 1 : j % 2 == 1 ? Math.Cos(angle) : Math.Sin(angle);
    }

    private static double Harmonic(Vector<double> c, double direction) => c.Select((v, j) => v * Basis(direction, j)).Sum();

    private static int Distinct(IReadOnlyList<double> directions)
    {
        double[] sorted = [.. directions.Select(d => d - (Math.PI * Math.Floor(d / Math.PI))).Order()];
        int count = sorted.Length == 0 ? 0 : 1;
        for (int k = 1; k < sorted.Length; k++)
        {
            count += sorted[k] - sorted[k - 1] > SameDirection ? 1 : 0;
        }

        // The last may be the first again, half a turn on.
        return count > 1 && sorted[0] + Math.PI - sorted[^1] <= SameDirection ? count - 1 : count;
    }
}
