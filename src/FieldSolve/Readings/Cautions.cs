using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Readings;

/// <summary>
/// What the user should be told before connecting or trusting anything: touch-safe limits, thin flakes that burn, and a local law in doubt.
/// </summary>
public static class Cautions
{
    // IEC 61010-1, clause 6.3: accessible parts, normal condition, dry location; limits from memory.
    private const double TouchSafeDc = 60;
    private const double TouchSafeAcRms = 30;
    private const double LocalLawPaths = 10;

    private const string Defer = "Local safety rules come first; leave the wiring of such voltages to a licensed person.";

    /// <summary>Cautions of a drive; empty when there are none.</summary>
    public static IReadOnlyList<string> Of(SheetDevice device, IReadOnlyList<CurveRow> rows)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(rows);
        var list = new List<string>();
        Voltage(device, rows, list);
        Burning(device, rows, list);
        MeanFreePath(device, list);
        return list;
    }

    /// <summary>The caution about the mean free path alone; null when the law is local enough or no mean free path is given.</summary>
    public static string? OfMeanFreePath(SheetDevice device)
    {
        var list = new List<string>();
        MeanFreePath(device, list);
        return list.FirstOrDefault();
    }

    private static void Voltage(SheetDevice device, IReadOnlyList<CurveRow> rows, List<string> list)
    {
        bool ac = device.Drive?.Frequencies.Count > 0;
        double limit = ac ? TouchSafeAcRms : TouchSafeDc;
        CurveRow? worst = rows.Where(r => r.Of("source") is not null).MaxBy(r => Math.Abs(r.Of("source")!.Value));
        if (worst is not null && Math.Abs(worst.Of("source")!.Value) > limit)
        {
            list.Add(Text(
                $"Hazardous voltage: the source reaches {SiText.Of(Math.Abs(worst.Of("source")!.Value), "V")} in wiring '{worst.Wiring}', above the touch-safe limit of {limit:G3} V {(ac ? "RMS AC" : "DC")} (IEC 61010-1, dry conditions). {Defer}"));
        }
    }

    private static void Burning(SheetDevice device, IReadOnlyList<CurveRow> rows, List<string> list)
    {
        CurveRow? current = rows.MaxBy(r => r.PeakSheetCurrent), power = rows.MaxBy(r => r.PeakPower);
        if (current is not null && current.PeakSheetCurrent > device.Caution.SheetCurrentDensity)
        {
            string bulk = device.Thickness is { } t ? Text($" ({SiText.Of(current.PeakSheetCurrent / t, "A/m²")} through its thickness)") : "";
            list.Add(Text(
                $"The sheet may be destroyed: the sheet current density peaks at {SiText.Of(current.PeakSheetCurrent, "A/m")}{bulk} in wiring '{current.Wiring}', above {SiText.Of(device.Caution.SheetCurrentDensity, "A/m")}, where thin flakes commonly fail (common practice, no source; set it in [caution])."));
        }

        if (power is not null && power.PeakPower > device.Caution.PowerDensity)
        {
            list.Add(Text(
                $"The device may burn: the power density peaks at {SiText.Of(power.PeakPower, "W/m²")} in wiring '{power.Wiring}', above {SiText.Of(device.Caution.PowerDensity, "W/m²")}, where thin flakes commonly burn (common practice, no source; set it in [caution]). Keep anything that can catch fire away and follow local rules."));
        }
    }

    private static void MeanFreePath(SheetDevice device, List<string> list)
    {
        if (device.MeanFreePath is not { } path || device.Domain.Edges.Count == 0)
        {
            return;
        }

        // Collinear neighbours, such as the two halves of an edge that a contact splits, still are features a carrier meets: the contact's end.
        DomainEdge smallest = device.Domain.Edges.MinBy(e => e.Curve.Length)!;
        double size = smallest.Curve.Length;
        if (size < LocalLawPaths * path)
        {
            string what = smallest.Contact >= 0 ? $"contact '{device.Contacts[smallest.Contact].Name}'" : "a stretch of the edge";
            list.Add(Text(
                $"A local law is in doubt: the smallest feature ({what}, {SiText.Of(size, "m")}) is under ten mean free paths ({SiText.Of(path, "m")} each); carriers may cross it without scattering."));
        }
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
