using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;

namespace FieldSolve.Measured;

/// <summary>Reads a table of measured voltages against a device.</summary>
public static class VoltageTable
{
    private const int MostHarmonic = 20;
    private const string SourcePair = "source";

    private static readonly DataColumn[] Columns =
    [
        new("wiring", null, "wiring"), new("pair", null, "pair"), new("source", null, "source"), new("drain", null, "drain"), new("plus", null, "plus"),
        new("minus", null, "minus"), new("current", Dimension.Current, "current_A"), new("current_rms", Dimension.Current, "current_rms_A"),
        new("harmonic", Dimension.None, "harmonic"), new("value", Dimension.Voltage, "value_V"), new("sigma", Dimension.Voltage, "sigma_V"),
    ];

    private sealed class Circuit
    {
        public required string Name { get; init; }

        public required int Source { get; init; }

        public required int Drain { get; init; }

        public Wiring? Known { get; init; }

        public List<Pair> Pairs { get; } = [];
    }

    /// <summary>Reads a file.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <param name="device">Whose contacts and wirings the table names.</param>
    /// <param name="noise">Standard deviations where the table has no column sigma; may be null.</param>
    public static (MeasuredVoltages? Data, IReadOnlyList<Fault> Faults) Read(string path, SheetDevice device, NoiseRule? noise)
    {
        ArgumentNullException.ThrowIfNull(path);
        ArgumentNullException.ThrowIfNull(device);
        var faults = new FaultList(path);
        return Finish(DataTable.Load(path, Columns, faults), path, device, noise, faults);
    }

    /// <summary>Reads the text of a table.</summary>
    /// <param name="text">CSV.</param>
    /// <param name="path">What faults call it.</param>
    /// <param name="device">Whose contacts and wirings the table names.</param>
    /// <param name="noise">Standard deviations where the table has no column sigma; may be null.</param>
    public static (MeasuredVoltages? Data, IReadOnlyList<Fault> Faults) Parse(string text, string path, SheetDevice device, NoiseRule? noise)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(path);
        ArgumentNullException.ThrowIfNull(device);
        var faults = new FaultList(path);
        return Finish(DataTable.Parse(text, Columns, faults), path, device, noise, faults);
    }

    private static (MeasuredVoltages? Data, IReadOnlyList<Fault> Faults) Finish(
        DataTable? table, string path, SheetDevice device, NoiseRule? noise, FaultList faults)
    {
        if (table is null || !Complete(table, noise, faults))
        {
            return (null, faults.InOrder());
        }

        var circuits = new List<Circuit>();
        var data = new List<MeasuredVoltage>();
        foreach (DataCell[] row in table.Rows)
        {
            Circuit? circuit = CircuitOf(table, row, device, circuits, faults);
            int pair = circuit is null ? -1 : PairOf(table, row, device, circuit, faults);
            (double current, int? harmonic)? drive = Drive(table, row, faults);
            double? value = table.Number(row, "value");
            double? sigma = Sigma(table, row, value, noise, faults);
            if (circuit is not null && pair >= 0 && drive is { } d && value is { } v && sigma is { } s)
            {
                data.Add(new(circuits.IndexOf(circuit), pair, d.current, d.harmonic, v, s, row[0].Line));
            }
        }

        if (faults.Count > 0)
        {
            return (null, faults.InOrder());
        }

        return (new(path, table.Sha256, [.. circuits.Select(Made)], data), []);
    }

    private static bool Complete(DataTable table, NoiseRule? noise, FaultList faults)
    {
        int before = faults.Count;
        Place header = new(table.HeaderLine, 1);
        if (!table.Has("value"))
        {
            faults.Add(header, "the table needs the column 'value' with its unit, for example value_V");
        }

        if (!table.Has("current") && !table.Has("current_rms"))
        {
            faults.Add(header, "the table needs the column current_A (DC) or current_rms_A (harmonics)");
        }

        if (table.Has("current_rms") && !table.Has("harmonic") && !table.Has("current"))
        {
            faults.Add(header, "a current_rms needs the column 'harmonic': 1 for the first harmonic, 2 for the second, 0 for the DC part");
        }

        bool wired = table.Has("wiring"), placed = table.Has("source") && table.Has("drain");
        if (!wired && !placed)
        {
            faults.Add(header, "the table needs the column 'wiring', or the columns source and drain");
        }

        if (!table.Has("pair") && !(table.Has("plus") && table.Has("minus")))
        {
            faults.Add(header, "the table needs the column 'pair', or the columns plus and minus");
        }

        if (!table.Has("sigma") && noise is null)
        {
            faults.Add(header, "the table has no column sigma_V; add one, or give the noise on the command line: --noise \"20 nV + 0.1 %\"");
        }

        return faults.Count == before;
    }

    private static double? Sigma(DataTable table, DataCell[] row, double? value, NoiseRule? noise, FaultList faults)
    {
        if (table.Has("sigma") && (noise is null || table.Cell(row, "sigma").Text.Length > 0))
        {
            double? sigma = table.Number(row, "sigma");
            if (sigma is { } s && !(s > 0))
            {
                DataCell at = table.Cell(row, "sigma");
                faults.Add(new(at.Line, at.Column), $"'sigma' is {at.Text}; a standard deviation is greater than zero");
                return null;
            }

            return sigma;
        }

        double found = value is { } v ? noise!.Of(v) : 1;
        if (found > 0)
        {
            return found;
        }

        DataCell cell = table.Cell(row, "value");
        faults.Add(new(cell.Line, cell.Column), "the noise rule gives this value no standard deviation; add an absolute part, for example --noise \"20 nV + 0.1 %\"");
        return null;
    }

    private static (double Current, int? Harmonic)? Drive(DataTable table, DataCell[] row, FaultList faults)
    {
        DataCell cell = table.Cell(row, "harmonic"), rms = table.Cell(row, "current_rms"), dc = table.Cell(row, "current");
        int? harmonic = null;
        if (cell.Text.Length > 0)
        {
            if (!int.TryParse(cell.Text, NumberStyles.None, CultureInfo.InvariantCulture, out int n) || n > MostHarmonic)
            {
                faults.Add(new(cell.Line, cell.Column), string.Create(CultureInfo.InvariantCulture, $"'harmonic' is '{Values.Short(cell.Text)}'; write a whole number from 0 to {MostHarmonic}, or nothing for a DC voltage"));
                return null;
            }

            harmonic = n;
        }

        if (harmonic is null ? dc.Text.Length == 0 : rms.Text.Length == 0)
        {
            DataCell at = harmonic is null ? (table.Has("current") ? dc : rms) : cell;
            faults.Add(new(at.Line, at.Column), harmonic is null
                ? "a DC voltage (blank 'harmonic') needs its current in the column current_A"
                : "a harmonic needs its current in the column current_rms_A");
            return null;
        }

        double? current = table.Number(row, harmonic is null ? "current" : "current_rms");
        if (harmonic is not null && current < 0)
        {
            faults.Add(new(rms.Line, rms.Column), "a root mean square is zero or greater");
            return null;
        }

        return current is { } c ? (c, harmonic) : null;
    }

    private static Circuit? CircuitOf(DataTable table, DataCell[] row, SheetDevice device, List<Circuit> circuits, FaultList faults)
    {
        DataCell cell = table.Cell(row, "wiring");
        Wiring? known = cell.Text.Length == 0 ? null : device.Wirings.FirstOrDefault(w => w.Name == cell.Text);
        int source = -1, drain = -1;
        if (table.Cell(row, "source").Text.Length > 0 || table.Cell(row, "drain").Text.Length > 0)
        {
            source = Contact(table.Cell(row, "source"), "source", device, faults);
            drain = Contact(table.Cell(row, "drain"), "drain", device, faults);
            if (source < 0 || drain < 0)
            {
                return null;
            }

            if (source == drain)
            {
                DataCell at = table.Cell(row, "drain");
                faults.Add(new(at.Line, at.Column), "'source' and 'drain' are the same contact; a current needs two");
                return null;
            }

            if (known is not null && (known.Source != source || known.Drain != drain))
            {
                faults.Add(new(cell.Line, cell.Column), $"wiring '{known.Name}' of the device file has another source or drain; leave one of the two out");
                return null;
            }
        }
        else if (known is null)
        {
            faults.Add(new(cell.Line, cell.Column), cell.Text.Length == 0
                ? "neither a wiring nor source and drain are named"
                : $"there is no wiring '{Values.Short(cell.Text)}'{Suggest.Hint(cell.Text, [.. device.Wirings.Select(w => w.Name)])}");
            return null;
        }
        else
        {
            (source, drain) = (known.Source, known.Drain);
        }

        string name = cell.Text.Length > 0 ? cell.Text : $"{device.Contacts[source].Name} to {device.Contacts[drain].Name}";
        if (circuits.Find(c => c.Source == source && c.Drain == drain && (c.Known == known || known is null)) is { } there)
        {
            return there;
        }

        var made = new Circuit { Name = name, Source = source, Drain = drain, Known = known };
        circuits.Add(made);
        return made;
    }

    private static int PairOf(DataTable table, DataCell[] row, SheetDevice device, Circuit circuit, FaultList faults)
    {
        DataCell cell = table.Cell(row, "pair"), plus = table.Cell(row, "plus"), minus = table.Cell(row, "minus");
        if (plus.Text.Length > 0 || minus.Text.Length > 0)
        {
            Terminal? p = TerminalOf(plus, "plus", device, faults), m = TerminalOf(minus, "minus", device, faults);
            if (p is null || m is null)
            {
                return -1;
            }

            if (p == m)
            {
                faults.Add(new(minus.Line, minus.Column), "'plus' and 'minus' are the same; a voltage is read between two");
                return -1;
            }

            int same = circuit.Pairs.FindIndex(x => x.Plus == p && x.Minus == m);
            if (same >= 0)
            {
                return same;
            }

            string name = cell.Text.Length > 0 ? cell.Text : $"{plus.Text}-{minus.Text}";
            if (circuit.Pairs.Any(x => x.Name == name) || (PairNamed(name, circuit) is { } other && (other.Plus != p || other.Minus != m)))
            {
                faults.Add(new(cell.Line, cell.Column), $"the pair '{Values.Short(name)}' already stands for other probes");
                return -1;
            }

            circuit.Pairs.Add(new(name, p.Value, m.Value));
            return circuit.Pairs.Count - 1;
        }

        int at = circuit.Pairs.FindIndex(x => x.Name == cell.Text);
        if (at >= 0)
        {
            return at;
        }

        if (PairNamed(cell.Text, circuit) is not { } known)
        {
            string[] names = [.. circuit.Known?.Pairs.Select(x => x.Name) ?? [], SourcePair];
            faults.Add(new(cell.Line, cell.Column), circuit.Known is null
                ? $"'{Values.Short(cell.Text)}': a circuit that is not in the device file names its probes in the columns plus and minus (or 'source' for the two-terminal voltage)"
                : $"wiring '{circuit.Name}' has no pair '{Values.Short(cell.Text)}'{Suggest.Hint(cell.Text, names)}");
            return -1;
        }

        circuit.Pairs.Add(known);
        return circuit.Pairs.Count - 1;
    }

    // What a name stands for, whatever the table says.
    private static Pair? PairNamed(string name, Circuit circuit) => name == SourcePair
        ? new Pair(SourcePair, new(false, circuit.Source), new(false, circuit.Drain))
        : circuit.Known?.Pairs.FirstOrDefault(x => x.Name == name);

    private static int Contact(DataCell cell, string column, SheetDevice device, FaultList faults)
    {
        int k = device.Contacts.ToList().FindIndex(c => c.Name == cell.Text);
        if (k < 0)
        {
            faults.Add(new(cell.Line, cell.Column), $"'{column}': there is no contact '{Values.Short(cell.Text)}'{Suggest.Hint(cell.Text, [.. device.Contacts.Select(c => c.Name)])}");
        }

        return k;
    }

    private static Terminal? TerminalOf(DataCell cell, string column, SheetDevice device, FaultList faults)
    {
        int contact = device.Contacts.ToList().FindIndex(c => c.Name == cell.Text), tip = device.Tips.ToList().FindIndex(t => t.Name == cell.Text);
        if (contact < 0 && tip < 0)
        {
            string[] names = [.. device.Contacts.Select(c => c.Name), .. device.Tips.Select(t => t.Name)];
            faults.Add(new(cell.Line, cell.Column), $"'{column}': there is no contact or point '{Values.Short(cell.Text)}'{Suggest.Hint(cell.Text, names)}");
            return null;
        }

        return contact >= 0 ? new(false, contact) : new(true, tip);
    }

    // Where the device file says which pair lies along and which across, that stands; else the first two count as such, so that their even parts are looked after.
    private static MeasuredCircuit Made(Circuit c)
    {
        Pair[] read = [.. c.Pairs.Where(p => p.Name != SourcePair)];
        Pair? along = c.Known is null ? read.FirstOrDefault() : read.FirstOrDefault(p => p == c.Known.Along);
        Pair? across = c.Known is null ? read.Skip(1).FirstOrDefault() : read.FirstOrDefault(p => p == c.Known.Across);
        return new(new Wiring(c.Name, c.Source, c.Drain, along, across, [.. read.Where(p => p != along && p != across)]), c.Pairs);
    }
}
