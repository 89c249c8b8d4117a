using System.Globalization;

namespace FieldSolve.Laws;

/// <summary>
/// Reads a law's table. CSV with the header ea_V_per_m, eb_V_per_m, ka_A_per_m, kb_A_per_m (columns in any order), one row per
/// point of a full rectangular grid, rows in any order; lines that begin with # and empty lines are skipped.
/// </summary>
internal sealed class TableReader
{
    private const int MostFaults = 50;

    // Fields and currents beyond this are slips; products of far larger ones would overflow in the spline.
    private const double MostNumber = 1e30;

    private static readonly string[] Columns = ["ea_V_per_m", "eb_V_per_m", "ka_A_per_m", "kb_A_per_m"];

    private readonly List<LawFileFault> faults = [];
    private readonly List<(double[] Values, int Line)> rows = [];
    private int[]? order;
    private int headerLine = 1;

    /// <summary>Reads the text of a table.</summary>
    public static TableLawReading Read(string text)
    {
        TableReader reader = new();
        TableLaw? law = reader.ReadRows(text) ? reader.Assemble() : null;
        return new(law, [.. reader.faults.OrderBy(f => f.Line).ThenBy(f => f.Column)]);
    }

    private bool ReadRows(string text)
    {
        int line = 0;
        foreach (ReadOnlySpan<char> raw in text.AsSpan().TrimStart('\uFEFF').EnumerateLines())
        {
            line++;
            if (raw.Trim() is not { IsEmpty: false } content || content[0] == '#')
            {
                continue;
            }

            if (order is null)
            {
                if (!ReadHeader(raw.ToString(), line))
                {
                    return false;
                }
            }
            else
            {
                ReadRow(raw, line);
            }

            if (faults.Count >= MostFaults)
            {
                faults.Add(new(line, 1, "Further faults of this table are not listed."));
                return false;
            }
        }

        if (order is null)
        {
            faults.Add(new(1, 1, $"The table is empty; it must begin with the header {string.Join(',', Columns)}."));
        }

        return faults.Count == 0;
    }

    private bool ReadHeader(string header, int line)
    {
        string[] names = [.. header.Split(',').Select(n => n.Trim())];
        order = [.. names.Select(n => Array.IndexOf(Columns, n))];
        headerLine = line;
        if (names.Length == Columns.Length && order.Distinct().Count() == names.Length && !order.Contains(-1))
        {
            return true;
        }

        int first = Enumerable.Range(0, names.Length).FirstOrDefault(i => order[i] < 0 || Array.IndexOf(order, order[i]) < i, names.Length - 1);
        int column = 1 + names.Take(first).Sum(n => n.Length + 1);
        faults.Add(new(line, column, $"The table's header must name {string.Join(',', Columns)}, each once."));
        return false;
    }

    private void ReadRow(ReadOnlySpan<char> raw, int line)
    {
        double[] values = new double[Columns.Length];
        int cell = 0, start = 0;
        while (start <= raw.Length)
        {
            int comma = raw[start..].IndexOf(',');
            ReadOnlySpan<char> field = comma < 0 ? raw[start..] : raw.Slice(start, comma);
            int column = 1 + start + (field.Length - field.TrimStart().Length);
            field = field.Trim();
            if (cell == Columns.Length)
            {
                faults.Add(new(line, column, $"A row of the table has {Columns.Length} numbers; this one has more."));
                return;
            }

            if (!double.TryParse(field, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) || !double.IsFinite(value))
            {
                faults.Add(new(line, column, $"'{Shorten(field)}' is not a finite number ({Columns[order![cell]]})."));
                return;
            }

            if (Math.Abs(value) > MostNumber)
            {
                faults.Add(new(line, column, $"'{Shorten(field)}' is too large ({Columns[order![cell]]}); is the unit right?"));
                return;
            }

            values[order![cell++]] = value;
            if (comma < 0)
            {
                break;
            }

            start += comma + 1;
        }

        if (cell < Columns.Length)
        {
            faults.Add(new(line, 1 + raw.TrimEnd().Length, $"A row of the table has {Columns.Length} numbers; this one has {cell}."));
            return;
        }

        rows.Add((values, line));
    }

    private TableLaw? Assemble()
    {
        double[] a = Axis(0), b = Axis(1);
        if (!(AxisIsGood(a, 0) & AxisIsGood(b, 1)))
        {
            return null;
        }

        // Long: a table of noise may have as many distinct fields as rows along both axes.
        if ((long)a.Length * b.Length > 4L * rows.Count)
        {
            faults.Add(Whole(
                $"The rows do not form a rectangular grid: {a.Length} values of ea and {b.Length} of eb ask for {(long)a.Length * b.Length} rows, not {rows.Count}."));
            return null;
        }

        int[,] line = new int[a.Length, b.Length];
        double[,] ka = new double[a.Length, b.Length], kb = new double[a.Length, b.Length];
        foreach ((double[] v, int at) in rows)
        {
            int i = Nearest(a, v[0]), j = Nearest(b, v[1]);
            if (line[i, j] != 0)
            {
                Add(new(at, 1, $"The point ({Text(v[0])}, {Text(v[1])}) V/m stands in line {line[i, j]} already."));
                continue;
            }

            (line[i, j], ka[i, j], kb[i, j]) = (at, v[2], v[3]);
        }

        for (int i = 0; i < a.Length; i++)
        {
            for (int j = 0; j < b.Length; j++)
            {
                if (line[i, j] == 0)
                {
                    Add(Whole($"The grid point ({Text(a[i])}, {Text(b[j])}) V/m is missing; the table must fill its rectangular grid."));
                }
            }
        }

        return faults.Count > 0 ? null : Judge(new TableGrid(a, b, ka, kb));
    }

    private TableLaw? Judge(TableGrid grid)
    {
        (double ka, double kb) = grid.TakeOffset();
        double most = grid.LargestCurrent;
        if (!(Math.Max(Math.Abs(ka), Math.Abs(kb)) <= 1e-3 * most))
        {
            faults.Add(Whole(
                $"At zero field the table gives K = ({Text(ka)}, {Text(kb)}) A/m; it must be zero, to a thousandth of the largest K. Take the offset off."));
            return null;
        }

        TableLaw law = new(grid);
        if (!(law.AtZeroField.SmallestSymmetricEigenvalue > 0))
        {
            faults.Add(Whole("At zero field the symmetric part of the table's dK/dE is not positive definite: the sheet would yield power."));
            return null;
        }

        return law;
    }

    private bool AxisIsGood(double[] axis, int column)
    {
        if (axis.Length < 4)
        {
            faults.Add(Whole($"The table has {axis.Length} different values of {Columns[column]}; it needs at least 4."));
            return false;
        }

        if (!(axis[0] < 0 && axis[^1] > 0))
        {
            faults.Add(Whole($"The table's {Columns[column]} runs from {Text(axis[0])} to {Text(axis[^1])}; zero must lie inside."));
            return false;
        }

        return true;
    }

    /// <summary>The different values of a column in rising order; values apart by rounding only count as one.</summary>
    private double[] Axis(int column)
    {
        double[] sorted = [.. rows.Select(r => r.Values[column]).Order()];
        List<double> axis = [];
        foreach (double v in sorted)
        {
            if (axis.Count == 0 || v - axis[^1] > 1e-9 * (sorted[^1] - sorted[0]))
            {
                axis.Add(v);
            }
        }

        return [.. axis];
    }

    private static int Nearest(double[] axis, double value)
    {
        int i = Array.BinarySearch(axis, value);
        return i >= 0 ? i : ~i - 1;
    }

    private void Add(LawFileFault fault)
    {
        if (faults.Count < MostFaults)
        {
            faults.Add(fault);
        }
    }

    private LawFileFault Whole(string message) => new(headerLine, 1, message);

    private static string Text(double value) => value.ToString("G6", CultureInfo.InvariantCulture);

    private static string Shorten(ReadOnlySpan<char> field) =>
        field.Length > 30 ? string.Concat(field[..30], "…") : field.ToString();
}
