using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Lockin;

namespace FieldSolve.Files;

/// <summary>The table harmonics.csv: RFC 4180, one line per wiring, current, frequency, pair and harmonic.</summary>
public static class HarmonicsCsv
{
    private const int HighestHarmonic = 5;

    /// <summary>The whole table: header and lines, each ended by CR LF. The values of a point without a solution are empty.</summary>
    /// <param name="wirings">The device's wirings; they give the pairs of points without readings.</param>
    /// <param name="points">In the order of wirings, currents, frequencies.</param>
    public static string Text(IReadOnlyList<Wiring> wirings, IReadOnlyList<LockinPoint> points)
    {
        ArgumentNullException.ThrowIfNull(wirings);
        ArgumentNullException.ThrowIfNull(points);
        StringBuilder text = new();
        CurvesCsv.AddLine(
            text, ["wiring", "current_rms_A", "frequency_Hz", "pair", "harmonic", "x_V", "y_V", "r_V", "phase_deg", "err_V", "status"]);
        foreach (LockinPoint p in points)
        {
            string[] point = [p.Wiring, Digits.Of(p.CurrentRms), Digits.Of(p.Frequency)];
            foreach (HarmonicReading r in p.Readings)
            {
                CurvesCsv.AddLine(
                    text,
                    [
                        .. point, r.Pair, Harmonic(r.Harmonic), Digits.Of(r.X), Digits.Of(r.Y), Digits.Of(r.R), Digits.Of(r.PhaseDegrees), Digits.Of(r.Error),
                        CurvesCsv.StatusText(r.Status),
                    ]);
            }

            if (p.Readings.Count == 0)
            {
                IEnumerable<string> pairs = wirings.First(w => w.Name == p.Wiring).Pairs.Select(q => q.Name).Append("source");
                foreach (string pair in pairs)
                {
                    for (int h = 0; h <= HighestHarmonic; h++)
                    {
                        CurvesCsv.AddLine(text, [.. point, pair, Harmonic(h), "", "", "", "", "", CurvesCsv.StatusText(p.Status)]);
                    }
                }
            }
        }

        return text.ToString();
    }

    /// <summary>Writes the table to a file as a whole. Parameters as in <see cref="Text"/>.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, IReadOnlyList<Wiring> wirings, IReadOnlyList<LockinPoint> points) =>
        WholeFile.WriteText(path, Text(wirings, points));

    private static string Harmonic(int h) => h.ToString(CultureInfo.InvariantCulture);
}
