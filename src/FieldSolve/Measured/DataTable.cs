using System.Globalization;
using System.Security;
using System.Security.Cryptography;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Quantities;

namespace FieldSolve.Measured;

/// <summary>
/// A table of measured data: CSV (RFC 4180) with one header, whose columns end with their unit ("value_uV", "x_um", "value (uV)"). Semicolons or tabulators may stand for
/// the commas. Lines that begin with # and empty lines are passed over.
/// </summary>
internal sealed class DataTable
{
    private const long LargestFile = 64_000_000;

    // SI; no instrument reads less or more, and the squares of such numbers over- and underflow.
    private const double Smallest = 1e-24, Largest = 1e12;

    private static readonly UTF8Encoding Strict = new(false, true);

    private readonly FaultList faults;
    private readonly List<DataCell[]> rows = [];
    private readonly Dictionary<string, (int Index, Unit Unit)> columns = new(StringComparer.Ordinal);

    private char separator = ',';
    private bool commaTold;

    private DataTable(FaultList faults) => this.faults = faults;

    /// <summary>SHA-256 of the file.</summary>
    public string Sha256 { get; private set; } = "";

    /// <summary>Rows below the header, each with as many cells as the header.</summary>
    public IReadOnlyList<DataCell[]> Rows => rows;

    /// <summary>Where the header stands.</summary>
    public int HeaderLine { get; private set; } = 1;

    /// <summary>Reads a file; what is wrong goes to the list.</summary>
    public static DataTable? Load(string path, IReadOnlyList<DataColumn> known, FaultList faults)
    {
        byte[] bytes;
        try
        {
            if (Directory.Exists(path))
            {
                faults.Add(Place.Start, "this is a directory; name a table (CSV)");
                return null;
            }

            var info = new FileInfo(path);
            if (!info.Exists)
            {
                faults.Add(Place.Start, "the file does not exist");
                return null;
            }

            if (info.Length > LargestFile)
            {
                faults.Add(Place.Start, "the file is larger than 64 MB; was another file meant?");
                return null;
            }

            if (PlainFile.HasNoLength(path))
            {
                faults.Add(Place.Start, "the file is empty (or no plain file); name a table (CSV) with a header and at least one row");
                return null;
            }

            bytes = File.ReadAllBytes(path);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or SecurityException or ArgumentException or NotSupportedException)
        {
            faults.Add(Place.Start, $"the file cannot be read: {e.Message}");
            return null;
        }

        try
        {
            DataTable? table = Parse(Strict.GetString(bytes), known, faults);
            if (table is not null)
            {
                table.Sha256 = Convert.ToHexStringLower(SHA256.HashData(bytes));
            }

            return table;
        }
        catch (DecoderFallbackException)
        {
            faults.Add(Place.Start, "the file is not UTF-8 text");
            return null;
        }
    }

    /// <summary>Reads the text of a table.</summary>
    public static DataTable? Parse(string text, IReadOnlyList<DataColumn> known, FaultList faults)
    {
        var table = new DataTable(faults);
        DataCell[]? header = null;
        SortedDictionary<int, (Place First, int Rows)> odd = [];
        int line = 0;
        foreach (ReadOnlySpan<char> raw in text.AsSpan().TrimStart('\uFEFF').EnumerateLines())
        {
            line++;
            if (raw.Trim() is not { IsEmpty: false } content || content[0] == '#')
            {
                continue;
            }

            // Spreadsheets of half the world write semicolons, instruments tabulators; the header has no other use for them.
            table.separator = header is not null || content.Contains(',') ? table.separator : content.Contains(';') ? ';' : content.Contains('\t') ? '\t' : ',';
            if (table.Cells(raw, line) is not { } cells)
            {
                continue;
            }

            if (header is null)
            {
                header = cells;
                table.HeaderLine = line;
                if (!table.Header(cells, known))
                {
                    return null;
                }
            }
            else if (cells.Length != header.Length)
            {
                (Place first, int rows) = odd.GetValueOrDefault(cells.Length, (new(line, cells[^1].Column), 0));
                odd[cells.Length] = (first, rows + 1);
            }
            else
            {
                table.rows.Add(cells);
            }
        }

        // One message for all rows that share a mistake, as a file written with decimal commas does.
        foreach ((int cells, (Place first, int rows)) in odd)
        {
            string others = rows > 1 ? string.Create(CultureInfo.InvariantCulture, $" (and so have {rows - 1} more rows)") : "";
            string comma = table.separator == ',' && cells > header!.Length && cells <= 2 * header.Length ? "; where commas part the cells a number takes a decimal point" : "";
            faults.Add(first, string.Create(CultureInfo.InvariantCulture, $"this row has {cells} cells{others}; the header in line {table.HeaderLine} has {header!.Length}{comma}"));
        }

        if (header is null)
        {
            faults.Add(Place.Start, $"the table is empty; it begins with a header such as {string.Join(',', known.Select(k => k.Example))}");
            return null;
        }

        if (table.rows.Count == 0 && faults.Count == 0)
        {
            faults.Add(new(table.HeaderLine, 1), "there are no rows below the header");
        }

        return table;
    }

    /// <summary>Whether the table has a column.</summary>
    public bool Has(string column) => columns.ContainsKey(column);

    /// <summary>A cell; its text is empty where it is blank or the table has no such column.</summary>
    public DataCell Cell(DataCell[] row, string column) => columns.TryGetValue(column, out (int Index, Unit Unit) c) ? row[c.Index] : new("", row[0].Line, row[0].Column);

    /// <summary>A number in SI; null, with a fault, where there is none.</summary>
    public double? Number(DataCell[] row, string column)
    {
        (int index, Unit unit) = columns[column];
        DataCell cell = row[index];
        if (cell.Text.Length == 0)
        {
            faults.Add(new(cell.Line, cell.Column), $"'{column}' is blank; a number is wanted");
            return null;
        }

        if (!double.TryParse(cell.Text.Replace('\u2212', '-'), NumberStyles.Float, CultureInfo.InvariantCulture, out double value) || !double.IsFinite(value))
        {
            if (HasDecimalComma(cell.Text))
            {
                TellComma(cell, column);
                return null;
            }

            string why = cell.Text.Any(char.IsLetter) && !cell.Text.Equals("nan", StringComparison.OrdinalIgnoreCase) ? "; the unit stands in the header" : "";
            faults.Add(new(cell.Line, cell.Column), $"'{Values.Short(cell.Text)}' is no finite number ('{column}'){why}");
            return null;
        }

        double si = unit.Of(value);
        if (si != 0 && Math.Abs(si) is < Smallest or > Largest)
        {
            faults.Add(new(cell.Line, cell.Column), $"'{Values.Short(cell.Text)}' is beyond anything that is measured ('{column}'); is its unit right?");
            return null;
        }

        return si;
    }

    private static bool HasDecimalComma(string text) =>
        text.Count(c => c == ',') == 1 && double.TryParse(text.Replace(',', '.').Replace('\u2212', '-'), NumberStyles.Float, CultureInfo.InvariantCulture, out _);

    // Once for the whole table: such files have one in every row.
    private void TellComma(DataCell cell, string column)
    {
        if (commaTold)
        {
            return;
        }

        commaTold = true;
        int others = rows.Sum(r => r.Count(c => HasDecimalComma(c.Text))) - 1;
        string also = others > 0 ? string.Create(CultureInfo.InvariantCulture, $", here and in the {(others == 1 ? "other cell that has" : $"{others} other cells that have")} a decimal comma") : "";
        faults.Add(new(cell.Line, cell.Column), $"'{Values.Short(cell.Text)}' is no finite number ('{column}'); write a decimal point{also}");
    }

    private bool Header(DataCell[] cells, IReadOnlyList<DataColumn> known)
    {
        int before = faults.Count;
        for (int i = 0; i < cells.Length; i++)
        {
            Place at = new(cells[i].Line, cells[i].Column);
            (DataColumn? column, string suffix) = Known(cells[i].Text, known);
            if (column is null)
            {
                string? near = Suggest.Nearest(cells[i].Text, known.Select(k => k.Example).Concat(known.Select(k => k.Name)));
                faults.Add(at, $"unknown column '{Values.Short(cells[i].Text)}'; {(near is null ? $"allowed are {Suggest.List([.. known.Select(k => k.Example)])}" : $"did you mean '{near}'?")}");
                continue;
            }

            Unit unit = default;
            if (column.Dimension is { } dimension && dimension != Dimension.None)
            {
                if (suffix.Length == 0)
                {
                    faults.Add(at, $"'{Values.Short(cells[i].Text)}' does not say its unit; write for example {column.Example}");
                    continue;
                }

                if (!Unit.TryParse(suffix.Replace("_per_", "/", StringComparison.Ordinal).Replace('_', ' '), out unit, out string? error) || unit.Dimension != dimension)
                {
                    faults.Add(at, $"'{Values.Short(cells[i].Text)}': {error ?? $"'{suffix}' is the unit of {unit.Dimension.NameWithArticle}"}; {dimension.NameWithArticle} is wanted, for example {column.Example}");
                    continue;
                }
            }
            else if (suffix.Length > 0)
            {
                faults.Add(at, $"'{column.Name}' has no unit; write {column.Example}");
                continue;
            }

            if (!columns.TryAdd(column.Name, (i, unit)))
            {
                faults.Add(at, $"there is a column '{column.Name}' already");
            }
        }

        return faults.Count == before;
    }

    // The column and its unit: "value_uV", "value (uV)", "value [uV]"; longest names first, so that current_rms_A is not current_A.
    private static (DataColumn? Column, string Unit) Known(string text, IReadOnlyList<DataColumn> known)
    {
        foreach (DataColumn k in known.OrderByDescending(k => k.Name.Length))
        {
            if (text.StartsWith(k.Name, StringComparison.OrdinalIgnoreCase))
            {
                string rest = text[k.Name.Length..];
                if (rest.Length == 0)
                {
                    return (k, "");
                }

                string trimmed = rest.Trim();
                if (trimmed is ['(', .., ')'] or ['[', .., ']'])
                {
                    return (k, trimmed[1..^1].Trim());
                }

                if (rest[0] == '_' && rest.Length > 1 && k.Dimension is not null)
                {
                    return (k, rest[1..]);
                }
            }
        }

        return (null, "");
    }

    // RFC 4180 without line breaks in cells.
    private DataCell[]? Cells(ReadOnlySpan<char> raw, int line)
    {
        var cells = new List<DataCell>();
        int at = 0;
        while (true)
        {
            while (at < raw.Length && raw[at] != separator && raw[at] is ' ' or '\t')
            {
                at++;
            }

            int column = at + 1;
            if (at < raw.Length && raw[at] == '"')
            {
                var text = new StringBuilder();
                bool closed = false;
                for (at++; at < raw.Length; at++)
                {
                    if (raw[at] != '"')
                    {
                        text.Append(raw[at]);
                    }
                    else if (at + 1 < raw.Length && raw[at + 1] == '"')
                    {
                        text.Append('"');
                        at++;
                    }
                    else
                    {
                        closed = true;
                        at++;
                        break;
                    }
                }

                int next = raw[at..].IndexOf(separator);
                ReadOnlySpan<char> behind = next < 0 ? raw[at..] : raw.Slice(at, next);
                if (!closed || !behind.Trim().IsEmpty)
                {
                    faults.Add(new(line, column), closed ? "something follows the closing quote of this cell" : "the quote that opens this cell is not closed in its line");
                    return null;
                }

                cells.Add(new(text.ToString().Trim(), line, column));
                if (next < 0)
                {
                    return [.. cells];
                }

                at += next + 1;
                continue;
            }

            int comma = raw[at..].IndexOf(separator);
            ReadOnlySpan<char> cell = comma < 0 ? raw[at..] : raw.Slice(at, comma);
            cells.Add(new(cell.Trim().ToString(), line, column));
            if (comma < 0)
            {
                return [.. cells];
            }

            at += comma + 1;
        }
    }
}
