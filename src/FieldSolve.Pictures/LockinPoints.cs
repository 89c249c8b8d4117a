using FieldSolve.Lockin;

namespace FieldSolve.Pictures;

/// <summary>Picks points of an AC run.</summary>
internal static class LockinPoints
{
    /// <summary>The largest current of a wiring that has an answer, at its last frequency.</summary>
    public static LockinPoint? Largest(LockinResult result, string wiring) =>
        result.Points.Where(p => p.Wiring == wiring && p.Readings.Count > 0).Reverse().MaxBy(p => p.CurrentRms);

    /// <summary>The points of a wiring at the frequency of its largest one, by current.</summary>
    public static LockinPoint[] Row(LockinResult result, string wiring) => Largest(result, wiring) is { } last
        ? [.. result.Points.Where(p => p.Wiring == wiring && p.Readings.Count > 0 && p.Frequency == last.Frequency).OrderBy(p => p.CurrentRms).DistinctBy(p => p.CurrentRms)]
        : [];
}
