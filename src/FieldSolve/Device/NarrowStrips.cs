using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Says which pads run so closely along the edge of the sheet that a mesh is dear there: most often a side that was meant to lie on the edge or across it.</summary>
public static class NarrowStrips
{
    /// <summary>Strips of more squares hold more triangles than a mesh may have.</summary>
    internal const double TooMany = 3e6;

    // Some ten unknowns a square: a hundred thousand for nothing.
    private const double Dear = 1e4;

    /// <summary>One sentence or two per pad; empty when there is none.</summary>
    public static IReadOnlyList<string> Of(SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(device);
        var list = new List<string>();
        for (int c = 0; c < device.Contacts.Count; c++)
        {
            ContactPlacement placement = device.Layout.Contacts[c];
            if (placement.Pad is { } pad && RimStrip.Of(device.Layout.Live, pad, placement.IdealPad) is { Squares: > Dear } strip)
            {
                list.Add($"{Words(device.Contacts[c].Name, strip)}: that strip alone takes some {Rounded(10 * strip.Squares)} unknowns. Move the side well off the edge, or let the pad reach across it.");
            }
        }

        return list;
    }

    /// <summary>What is so thin, and where; the beginning of a sentence.</summary>
    internal static string Words(string? pad, RimStrip strip) =>
        $"A side of the pad{(pad is null ? "" : $" of '{pad}'")} runs along the edge of the sheet at a distance of only {SiText.Of(strip.Gap, "m")} near {SiText.Place(strip.At.X, strip.At.Y)}";

    // One digit is all that is known.
    private static string Rounded(double v)
    {
        double digit = Math.Pow(10, Math.Floor(Math.Log10(v)));
        return (Math.Round(v / digit) * digit).ToString("F0", CultureInfo.InvariantCulture);
    }
}
