using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Says in words which rows to distrust, why, and what helps; one sentence or two per wiring and cause.</summary>
internal static class DriveWarnings
{
    public static IReadOnlyList<string> Of(SheetDevice device, IReadOnlyList<CurveRow> rows, IReadOnlyDictionary<string, string> refusals)
    {
        var list = new List<string>();
        foreach (IGrouping<string, CurveRow> wiring in rows.GroupBy(r => r.Wiring))
        {
            if (First(wiring, RowStatus.OutsideLaw) is { Exit: { } exit } left)
            {
                list.Add(Text(
                    $"Wiring '{wiring.Key}' leaves its law from {SiText.Of(left.Current, "A", 4)} on: at {SiText.Place(exit.X, exit.Y)} the field reaches {SiText.Of(exit.Field, "V/m")}, beyond {SiText.Of(exit.From, "V/m")} where the law is guarded (zone of radius {SiText.Of(exit.Radius, "m")}), and that moves a reading by more than its wanted error. Give the law a field_limit, the contact a resistance, or drive less."));
            }

            if (First(wiring, RowStatus.NotConverged) is { } failed)
            {
                string why = refusals.TryGetValue(wiring.Key, out string? r) ? " " + r : "";
                list.Add(Text(
                    $"Wiring '{wiring.Key}' has no solution from {SiText.Of(failed.Current, "A", 4)} on: the iteration did not converge.{why} The sheet may not be able to carry this current under its law; drive less or extend the law."));
            }

            if (First(wiring, RowStatus.ErrorAboveWanted) is { } coarse)
            {
                Reading worst = coarse.Readings.MaxBy(r => r.Error)!;
                list.Add(Text(
                    $"Wiring '{wiring.Key}' misses the wanted numerical error (first at {SiText.Of(coarse.Current, "A", 4)}; largest error bar {SiText.Of(worst.Error, "V")} in '{worst.Pair}'). Raise [mesh] max_unknowns, or accept the error bars as they stand."));
            }
        }

        list.AddRange(NarrowStrips.Of(device));
        if (VoltageScale.Warning(device, rows.Where(r => r.Of("along") is not null).Select(r => (r.Current, r.Of("along")!.Odd ?? r.Of("along")!.Value))) is { } small)
        {
            list.Add(small);
        }

        return list;
    }

    private static CurveRow? First(IEnumerable<CurveRow> rows, RowStatus status) =>
        rows.Where(r => r.Status == status).MinBy(r => Math.Abs(r.Current));

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
