using System.Globalization;

namespace FieldSolve.Device;

/// <summary>Collects the faults of a device file and puts them in order.</summary>
/// <param name="path">The device file as the user gave it.</param>
internal sealed class FaultList(string path)
{
    /// <summary>More than these are only counted: nobody reads on, and most then have one cause.</summary>
    private const int Shown = 20;

    private readonly List<(Place Order, Fault Fault)> faults = [];
    private readonly HashSet<Fault> seen = [];

    public string Path { get; } = path;

    public int Count => faults.Count;

    /// <summary>Notes a fault of the device file.</summary>
    public void Add(Place at, string message) => Keep(at, new(Path, at.Line, at.Column, message));

    /// <summary>Notes a fault of a file that the device file names at the given place.</summary>
    public void AddElsewhere(Place namedAt, string file, int line, int column, string message) =>
        Keep(namedAt, new(file, line, column, message));

    /// <summary>The faults in the order of their places; those beyond a readable number as a count.</summary>
    public IReadOnlyList<Fault> InOrder()
    {
        List<Fault> sorted =
        [
            .. faults.OrderBy(f => f.Order.Line).ThenBy(f => f.Order.Column).ThenBy(f => f.Fault.Line).ThenBy(f => f.Fault.Column)
                .Select(f => f.Fault),
        ];
        if (sorted.Count <= Shown + 1)
        {
            return sorted;
        }

        Fault next = sorted[Shown];
        int more = sorted.Count - Shown;
        return [.. sorted.Take(Shown), next with { Message = string.Create(CultureInfo.InvariantCulture, $"and {more} more faults from here on") }];
    }

    private void Keep(Place order, Fault fault)
    {
        if (seen.Add(fault))
        {
            faults.Add((order, fault));
        }
    }
}
