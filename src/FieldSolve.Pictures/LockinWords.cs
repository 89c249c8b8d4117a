using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>What an AC run computed, in sentences.</summary>
internal static class LockinWords
{
    /// <summary>The answer: a sentence or two per wiring and frequency.</summary>
    public static IEnumerable<string> Answer(LockinResult result)
    {
        foreach (Wiring wiring in result.Device.Wirings)
        {
            // The lowest frequency and the highest: what lies between stands in the tables.
            IGrouping<double?, LockinPoint>[] groups = [.. result.Points.Where(p => p.Wiring == wiring.Name).GroupBy(p => p.Frequency).OrderBy(g => g.Key)];
            foreach (IGrouping<double?, LockinPoint> group in groups.Where((_, k) => k == 0 || k == groups.Length - 1))
            {
                yield return Sentence(result, wiring, group.Key, [.. group], group == groups[0]);
            }

            if (result.Limits.Where(l => l.Wiring == wiring.Name && l.Harmonic is >= 1 and <= 3).GroupBy(l => l.CurrentRms).MaxBy(g => g.Key)?.MinBy(l => l.Frequency) is { } limit)
            {
                yield return $"Wiring {wiring.Name}: below {SiScale.Text(limit.Frequency, "Hz", 3)} the gate's charge moves no reading by more than 1 %; the first to feel it is V_{limit.Pair}, harmonic {limit.Harmonic.ToString(CultureInfo.InvariantCulture)}.";
            }
        }

        if (result.Points.Count(p => p.Status != RowStatus.Ok) is > 0 and var poor)
        {
            yield return string.Create(CultureInfo.InvariantCulture, $"{poor} of {result.Points.Count} points are not 'ok': see the status in the tables.");
        }
    }

    private static string Sentence(LockinResult result, Wiring wiring, double? frequency, LockinPoint[] points, bool first)
    {
        string head = $"Wiring {wiring.Name}" + (frequency is { } f ? $", {SiScale.Text(f, "Hz")}" : "");
        if (points.Where(p => p.Readings.Count > 0).MaxBy(p => p.CurrentRms) is not { } last)
        {
            return head + ": no point could be solved.";
        }

        string Read(string pair, int harmonic)
        {
            HarmonicReading? r = last.Of(pair, harmonic);
            return r is null ? "" : $"{ErrorText.Of(r.R, r.Error, "V")} at {SiScale.Number(Math.Round(r.PhaseDegrees, 2) + 0.0, 5)}°";
        }

        // What is read and can be told from its own error.
        List<string> parts = [];
        foreach (string pair in (string[])["along", "across"])
        {
            List<string> own = [];
            foreach (int harmonic in (int[])[1, 2, 3])
            {
                if (last.Of(pair, harmonic) is { } r && r.R > r.Error && Read(pair, harmonic) is { Length: > 0 } text)
                {
                    own.Add($"{(harmonic == 1 ? "first" : harmonic == 2 ? "second" : "third")} harmonic {text}");
                }
            }

            if (own.Count > 0)
            {
                parts.Add($"V_{pair} has {string.Join(", ", own)}");
            }
        }

        string sentence = $"{head}, at {SiScale.Text(last.CurrentRms, "A")} RMS: " + (parts.Count > 0 ? string.Join("; ", parts) + "." : "nothing is read beyond the numerical error.");
        if (first && result.Slopes.FirstOrDefault(s => s.Wiring == wiring.Name && s.Frequency == frequency && s.Pair == "across" && s.Harmonic == 2) is { } slope)
        {
            sentence += $" The second harmonic across grows with the current to the power {slope.Slope.ToString("F3", CultureInfo.InvariantCulture)} (2 for a weak second-order law).";
        }

        return sentence;
    }
}
