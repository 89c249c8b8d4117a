using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Lockin;

/// <summary>Says in words which readings to distrust, why, and what helps; one sentence or two per wiring and cause.</summary>
internal static class LockinWarnings
{
    public static IReadOnlyList<string> Of(SheetDevice device, IReadOnlyList<LockinPoint> points, IReadOnlyDictionary<string, string> refusals)
    {
        var list = new List<string>();
        foreach (IGrouping<string, LockinPoint> wiring in points.GroupBy(p => p.Wiring))
        {
            if (First(wiring, RowStatus.OutsideLaw) is { Exit: { } exit } left)
            {
                HarmonicReading worst = left.Readings.Where(r => r.Status == RowStatus.OutsideLaw).MaxBy(r => Math.Abs(r.GuardShare))!;
                list.Add(Text(
                    $"Wiring '{wiring.Key}' leaves its law from {SiText.Of(left.CurrentRms, "A", 4)} RMS on: at {SiText.Place(exit.X, exit.Y)} the field reaches {SiText.Of(exit.Field, "V/m")}, beyond {SiText.Of(exit.From, "V/m")} where the law is guarded (zone of radius {SiText.Of(exit.Radius, "m")}), and that moves harmonic {worst.Harmonic} of '{worst.Pair}' by more than its wanted error. Give the law a field_limit, the contact a resistance, or drive less."));
            }

            if (First(wiring, RowStatus.NotConverged) is { } failed)
            {
                string why = refusals.TryGetValue(wiring.Key, out string? r) ? " " + r : "";
                list.Add(Text(
                    $"Wiring '{wiring.Key}' has no solution from {SiText.Of(failed.CurrentRms, "A", 4)} RMS{At(failed)} on: the iteration did not converge.{why} The sheet may not be able to carry the peak current under its law; drive less or extend the law."));
            }

            if (wiring.Where(p => p.Readings.Any(r => r.Status == RowStatus.ErrorAboveWanted)).MinBy(p => p.CurrentRms) is { } coarse)
            {
                HarmonicReading worst = coarse.Readings.Where(r => r.Status == RowStatus.ErrorAboveWanted).MaxBy(r => r.Error)!;
                list.Add(Text(
                    $"Wiring '{wiring.Key}' misses the wanted numerical error (first at {SiText.Of(coarse.CurrentRms, "A", 4)} RMS{At(coarse)}; error bar {SiText.Of(worst.Error, "V")} in harmonic {worst.Harmonic} of '{worst.Pair}'). Ask for a smaller [mesh] error or even_error, raise max_unknowns, or accept the error bars as they stand."));
            }
        }

        if (VoltageScale.Warning(device, points.SelectMany(p => p.Readings.Where(r => r.Pair == "along" && r.Harmonic == 1).Select(r => (p.CurrentRms, Math.Sqrt((r.X * r.X) + (r.Y * r.Y)))))) is { } small)
        {
            list.Add(small);
        }

        return list;
    }

    private static LockinPoint? First(IEnumerable<LockinPoint> points, RowStatus status) => points.Where(p => p.Status == status).MinBy(p => p.CurrentRms);

    private static string At(LockinPoint point) => point.Frequency is { } f ? Text($" and {SiText.Of(f, "Hz", 4)}") : "";

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
