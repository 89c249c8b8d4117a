using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Runs;

/// <summary>
/// The voltage that wanted errors are relative to: the largest along voltage, but no less than a thousandth of current times sheet resistance. An along voltage
/// that is zero by symmetry would ask for errors of zero.
/// </summary>
internal static class VoltageScale
{
    private const double LeastShare = 1e-3;

    /// <summary>The scale of all wirings together, V; without any along pair, the largest of all readings.</summary>
    /// <param name="device">For its sheet resistance.</param>
    /// <param name="current">A.</param>
    /// <param name="readings">V.</param>
    public static double Of(SheetDevice device, double current, IEnumerable<(bool IsAlong, double Value)> readings)
    {
        double any = 0;
        double? along = null;
        foreach ((bool isAlong, double value) in readings)
        {
            any = Math.Max(any, Math.Abs(value));
            along = isAlong ? Math.Max(along ?? 0, Math.Abs(value)) : along;
        }

        return along is { } largest ? Math.Max(largest, Least(device, current)) : any;
    }

    /// <summary>What to say when the along voltages at the largest current are too small to be a scale; null when they are not, or nothing is read along.</summary>
    /// <param name="device">For its sheet resistance.</param>
    /// <param name="alongs">Current and along voltage of every row of every wiring, A and V.</param>
    public static string? Warning(SheetDevice device, IEnumerable<(double Current, double Along)> alongs)
    {
        (double Current, double Along)[] all = [.. alongs.Where(a => a.Current != 0)];
        if (all.Length == 0)
        {
            return null;
        }

        double current = all.Max(a => Math.Abs(a.Current)), least = Least(device, current);
        return all.Where(a => Math.Abs(a.Current) == current).Any(a => Math.Abs(a.Along) >= least) ? null : string.Create(
            CultureInfo.InvariantCulture,
            $"No along voltage reaches a thousandth of current times sheet resistance ({SiText.Of(least, "V")} at {SiText.Of(current, "A", 4)}), as where both probes lie on one equipotential by symmetry: the wanted error is relative to that thousandth instead. Read 'along' between probes that the current passes one after the other, or lower [mesh] error.");
    }

    // The geometric mean of the principal sheet resistances at zero field; with a Hall part the root of det rho.
    private static double Least(SheetDevice device, double current)
    {
        Tensor2 k = device.Law.AtZeroField;
        return LeastShare * Math.Abs(current) / Math.Sqrt((k.Aa * k.Bb) - (k.Ab * k.Ba));
    }
}
