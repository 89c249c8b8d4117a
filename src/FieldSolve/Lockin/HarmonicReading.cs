using FieldSolve.Readings;

namespace FieldSolve.Lockin;

/// <summary>What a lock-in amplifier reads of one pair at one harmonic; RMS values, phases against I(t) = sqrt(2) I_rms sin(2 pi f t).</summary>
/// <param name="Pair">"along", "across", "source" or the extra pair's name.</param>
/// <param name="Harmonic">0 (the DC part, which X holds) to 5.</param>
/// <param name="X">RMS part along sin(2 pi k f t), V.</param>
/// <param name="Y">RMS part along cos(2 pi k f t), V.</param>
/// <param name="Error">Estimated numerical error of X and Y, V.</param>
/// <param name="GuardShare">What the guarded zone of the law does to the reading, V.</param>
/// <param name="Status">How far the reading can be trusted.</param>
public sealed record HarmonicReading(string Pair, int Harmonic, double X, double Y, double Error, double GuardShare, RowStatus Status)
{
    /// <summary>Magnitude, V.</summary>
    public double R => Math.Sqrt((X * X) + (Y * Y));

    /// <summary>Phase in degrees, above -180 to 180; 0 where nothing is read.</summary>
    public double PhaseDegrees
    {
        get
        {
            double degrees = X == 0 && Y == 0 ? 0 : Math.Atan2(Y, X) * 180 / Math.PI;
            return degrees <= -180 ? 180 : degrees;
        }
    }
}

/// <summary>V(t) of a pair as a sum of harmonics.</summary>
/// <param name="Pair">Name.</param>
/// <param name="Sine">Peak amplitude along sin(k theta), k from 0, V.</param>
/// <param name="Cosine">Peak amplitude along cos(k theta); the first is the DC part, V.</param>
public sealed record Waveform(string Pair, IReadOnlyList<double> Sine, IReadOnlyList<double> Cosine)
{
    /// <summary>V at a phase in radians.</summary>
    public double At(double theta)
    {
        double sum = 0;
        for (int k = 0; k < Sine.Count; k++)
        {
            (double s, double c) = Math.SinCos(k * theta);
            sum += (Sine[k] * s) + (Cosine[k] * c);
        }

        return sum;
    }
}

/// <summary>One wiring at one current and one frequency.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="CurrentRms">A.</param>
/// <param name="Frequency">Hz; null for a quasi-static run without a frequency.</param>
/// <param name="Readings">By pair, then harmonic; empty when not converged.</param>
/// <param name="Waves">V(t) of each pair; empty when not converged.</param>
/// <param name="Status">The worst of the readings.</param>
/// <param name="Exit">Where the law was left; null when it was not.</param>
/// <param name="PeakSheetCurrent">Largest |K| over cycle and sheet outside the cores of contact ends, A/m.</param>
/// <param name="PeakPower">Largest E.K likewise, W/m².</param>
/// <param name="Steps">Newton steps and sweeps of the harmonic balance.</param>
public sealed record LockinPoint(
    string Wiring, double CurrentRms, double? Frequency, IReadOnlyList<HarmonicReading> Readings, IReadOnlyList<Waveform> Waves, RowStatus Status,
    LawExit? Exit, double PeakSheetCurrent, double PeakPower, int Steps)
{
    /// <summary>Largest error of a reading over what is wanted of it, among those that are <see cref="RowStatus.ErrorAboveWanted"/>; 0 when none is.</summary>
    internal double Miss { get; init; }

    /// <summary>The reading of a pair at a harmonic, or null.</summary>
    public HarmonicReading? Of(string pair, int harmonic) => Readings.FirstOrDefault(r => r.Pair == pair && r.Harmonic == harmonic);
}
