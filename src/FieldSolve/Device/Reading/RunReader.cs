using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads how the device is run: [drive], [turn], [mesh] and [caution].</summary>
internal static class RunReader
{
    private const int MostSteps = 10_000;
    private const int MostUnknowns = 100_000_000;
    private const int FewestUnknowns = 100;
    private const string CurrentExample = "{ from = \"0 uA\", to = \"500 uA\", steps = 11 }";

    public static DriveSpec? Drive(Section root)
    {
        if (root.Header("drive") is not { } drive)
        {
            return null;
        }

        (double From, double To, int Steps)? current = null;
        drive.Need("current", CurrentExample);
        if (drive.Inner("current", CurrentExample) is { } keys)
        {
            current = Current(keys);
            keys.Finish();
        }

        bool bothSigns = drive.Flag("both_signs") ?? false;
        double offset = drive.Quantity("offset", Dimension.Current, Range.Any, example: "0 uA") ?? 0;
        List<double> frequencies = Frequencies(drive);
        drive.Finish();
        return current is { } c ? new DriveSpec(c.From, c.To, c.Steps, bothSigns, frequencies, offset) { At = (drive.At.Line, drive.At.Column) } : null;
    }

    public static TurnSpec? Turn(Section root, ContactReader contacts, IReadOnlyList<Wiring> wirings)
    {
        if (root.Header("turn") is not { } turn)
        {
            return null;
        }

        TomlText? around = turn.Text("around", "c", required: false);
        RingDraft? ring = around is null ? null : contacts.Rings.FirstOrDefault(r => r.Prefix == around.Value);
        if (around is not null && ring is null && contacts.NamesComplete)
        {
            turn.Faults.Add(around.At, $"no ring of [[contacts]] has the prefix '{Values.Short(around.Value)}'{Suggest.Hint(around.Value, [.. contacts.Rings.Select(r => r.Prefix)])}");
        }

        if (ring is not null && wirings.Count > 0)
        {
            RequireInRing(turn, around!, ring, wirings[0]);
        }

        turn.Finish();
        return new TurnSpec(ring?.Prefix, ring is null ? [] : [.. Enumerable.Range(ring.First, ring.Count)]);
    }

    // A current that does not turn gives the same direction every time.
    private static void RequireInRing(Section turn, TomlText around, RingDraft ring, Wiring wiring)
    {
        bool Belongs(int contact) => contact >= ring.First && contact < ring.First + ring.Count;
        if (!Belongs(wiring.Source) && !Belongs(wiring.Drain))
        {
            turn.Faults.Add(
                around.At,
                $"the first wiring '{wiring.Name}' is stepped round the ring '{ring.Prefix}', but neither its source nor its drain belongs to it; use contacts of the ring, or leave 'around' out and write every direction as a [[wiring]]");
        }
    }

    public static MeshSpec Mesh(Section root)
    {
        MeshSpec standard = new();
        if (root.Header("mesh") is not { } mesh)
        {
            return standard;
        }

        Range part = new(1e-12, 0.5, "between 1e-12 and 0.5");
        MeshSpec read = new()
        {
            Error = mesh.Number("error", part) ?? standard.Error,
            EvenError = mesh.Number("even_error", part) ?? standard.EvenError,
            MaxUnknowns = (int)(mesh.Number("max_unknowns", new(FewestUnknowns, MostUnknowns, "between 100 and 100000000"), integer: true) ?? standard.MaxUnknowns),
        };
        mesh.Finish();
        return read;
    }

    public static CautionSpec Caution(Section root)
    {
        CautionSpec standard = new();
        if (root.Header("caution") is not { } caution)
        {
            return standard;
        }

        CautionSpec read = new()
        {
            SheetCurrentDensity = caution.Quantity("sheet_current_density", Dimension.SheetCurrent, Range.Positive) ?? standard.SheetCurrentDensity,
            PowerDensity = caution.Quantity("power_density", Dimension.PowerDensity, Range.Positive) ?? standard.PowerDensity,
        };
        caution.Finish();
        return read;
    }

    private static (double From, double To, int Steps)? Current(Section keys)
    {
        double? from = keys.Quantity("from", Dimension.Current, Range.Any, required: true, "0 uA");
        double? to = keys.Quantity("to", Dimension.Current, Range.Any, required: true, "500 uA");
        TomlEntry? entry = keys.Need("steps", "11");
        double? steps = keys.Number("steps", new(1, MostSteps, "from 1 to 10000"), integer: true);
        if (steps == 1 && from is not null && to is not null && from != to)
        {
            keys.Faults.Add(entry!.Value.At, "'steps' counts both ends; one value needs 'from' equal to 'to', two ends need 'steps' of 2 or more");
            return null;
        }

        return from is { } a && to is { } b && steps is { } n ? (a, b, (int)n) : null;
    }

    private static List<double> Frequencies(Section drive)
    {
        TomlEntry? entry = drive.Take("frequency");
        IEnumerable<TomlValue> values = entry?.Value is TomlArray { OfTables: false } list ? list.Items : entry is null ? [] : [entry.Value];
        if (entry is not null && !values.Any())
        {
            drive.Faults.Add(entry.Value.At, "'frequency' is an empty list; write for example \"17.77 Hz\"");
        }

        return
        [
            .. values.Select(v => Values.Quantity(v, "'frequency'", Dimension.Frequency, Range.Positive, drive.Faults))
                .Where(f => f is not null).Select(f => f!.Value),
        ];
    }
}
