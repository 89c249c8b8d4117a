using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Sessions;

/// <summary>What a misplacement of one contact does to the across voltage: one standard deviation, V.</summary>
/// <param name="Contact">Name.</param>
/// <param name="Causes">What was moved and by how much, such as "position 50 nm".</param>
/// <param name="Odd">To the odd part.</param>
/// <param name="OddError">Its numerical error.</param>
/// <param name="Even">To the even part; 0 for a linear law.</param>
/// <param name="EvenError">Its numerical error.</param>
public sealed record ContactEffect(string Contact, string Causes, double Odd, double OddError, double Even, double EvenError);

/// <summary>The part of the tolerance budget that belongs to places of contacts.</summary>
public static class LayoutSensitivity
{
    private const string Stated = "\"50 nm\"";
    private static readonly string[] Places = ["position", "x", "y"];

    /// <summary>Works out the effects for one wiring. A file without places in its [tolerance] gets 50 nm for every contact.</summary>
    /// <param name="state">The layout.</param>
    /// <param name="wiring">Name of the wiring.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <returns>Contacts that can be misplaced, the largest effect on the odd part first.</returns>
    /// <exception cref="LayoutEditException">The wiring has no across pair, or no contact can be misplaced.</exception>
    /// <exception cref="ToleranceException">The layout has no solution.</exception>
    public static IReadOnlyList<ContactEffect> Of(SessionState state, string wiring, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(state);
        SheetDevice device = WithPlaces(state);
        if (device.Wirings.FirstOrDefault(w => w.Name == wiring) is not { Across: not null } chosen)
        {
            throw new LayoutEditException("this wiring reads nothing across");
        }

        SheetCause[] causes = [.. device.Tolerance!.Causes.Where(IsPlace)];
        device = device with { Wirings = [chosen], Tolerance = device.Tolerance with { Causes = causes } };
        IReadOnlyList<BudgetEntry> budget = Budget.Of(ToleranceModel.Build(device, _ => { }, new StageClock(), cancel), cancel);
        List<ContactEffect> effects = [];
        foreach (IGrouping<string, SheetCause> own in causes.GroupBy(c => c.Target.Name))
        {
            (double, double) Sum(ReadingPart part)
            {
                BudgetEntry[] entries = [.. budget.Where(e => own.Contains(e.Cause) && e.Quantity.Pair == "across" && e.Quantity.Part == part)];
                return (Root(entries.Select(e => e.Contribution)), Root(entries.Select(e => e.Error)));
            }

            (double odd, double oddError) = Sum(ReadingPart.Odd);
            (double even, double evenError) = Sum(ReadingPart.Even);
            effects.Add(new(own.Key, string.Join(", ", own.Select(c => $"{c.Kind.Key} {QuantityText.Like("1 nm", c.Sigma, 1e-10, "nm")}")), odd, oddError, even, evenError));
        }

        return [.. effects.OrderByDescending(e => e.Odd)];
    }

    private static SheetDevice WithPlaces(SessionState state)
    {
        if (state.Device.Tolerance?.Causes.Any(IsPlace) == true)
        {
            return state.Device;
        }

        EditableToml text = state.Text;
        if (text.Blocks.Any(b => b.Path.StartsWith("tolerance", StringComparison.Ordinal)) || text.Pieces.Any(p => p.Path.StartsWith("tolerance", StringComparison.Ordinal)))
        {
            throw new LayoutEditException("the [tolerance] of the file names no place of a contact; add for example position = \"50 nm\" under [tolerance.contacts]");
        }

        List<string> keys = [.. state.Device.Contacts.Any(c => c.Kind == ContactKind.Edge) ? ["position"] : Array.Empty<string>()];
        keys.AddRange(state.Device.Contacts.Any(c => c.Kind == ContactKind.Pad) ? ["x", "y"] : Array.Empty<string>());
        string block = "[tolerance.contacts]\n" + string.Join('\n', keys.Select(k => $"{k} = {Stated}"));
        DeviceReading reading = DeviceFile.Parse(text.Appended(block, after: null).Text, state.Path, Path.GetDirectoryName(state.Path) ?? "");
        return reading.Device is { Tolerance.Causes: { } causes } device && causes.Any(IsPlace)
            ? device
            : throw new LayoutEditException("no contact of this layout can be misplaced" + (reading.Faults.Count > 0 ? ": " + reading.Faults[0].Message : ""));
    }

    private static bool IsPlace(SheetCause cause) => cause.Target.Name.Length > 0 && Places.Contains(cause.Kind.Key);

    private static double Root(IEnumerable<double> values) => Math.Sqrt(values.Sum(v => v * v));
}
