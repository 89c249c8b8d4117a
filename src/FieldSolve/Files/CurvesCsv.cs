using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Files;

/// <summary>The table curves.csv: RFC 4180 (comma, CRLF, quotes where needed), one line per wiring and current.</summary>
/// <remarks>The file is small; a run that adds rows as they finish simply writes the whole table again.</remarks>
public static class CurvesCsv
{
    /// <summary>The whole table.</summary>
    /// <param name="wirings">The device's wirings; they give the pair columns (those of all wirings, in order of first
    /// appearance), so that the columns do not depend on which rows are finished.</param>
    /// <param name="rows">Rows in the order of wirings, then currents.</param>
    /// <param name="reversed">Rows at the reversed currents in the same order. Those of a wiring follow its other rows;
    /// a reversed zero current says nothing new and is left out.</param>
    /// <returns>Header and rows, each ended by CR LF.</returns>
    public static string Text(IReadOnlyList<Wiring> wirings, IReadOnlyList<CurveRow> rows, IReadOnlyList<CurveRow>? reversed = null)
    {
        ArgumentNullException.ThrowIfNull(wirings);
        ArgumentNullException.ThrowIfNull(rows);

        string[] pairs = PairNames(wirings);
        StringBuilder text = new();
        AddLine(text, Header(pairs));
        foreach (CurveRow row in InOrder(rows, reversed ?? []))
        {
            AddLine(text, Cells(row, pairs));
        }

        return text.ToString();
    }

    /// <summary>Writes the table to a file as a whole. Parameters as in <see cref="Text"/>.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(
        string path, IReadOnlyList<Wiring> wirings, IReadOnlyList<CurveRow> rows, IReadOnlyList<CurveRow>? reversed = null) =>
        WholeFile.WriteText(path, Text(wirings, rows, reversed));

    /// <summary>The word for a status in the table.</summary>
    public static string StatusText(RowStatus status) => status switch
    {
        RowStatus.Ok => "ok",
        RowStatus.OutsideLaw => "outside-law",
        RowStatus.NotConverged => "not-converged",
        RowStatus.ErrorAboveWanted => "error-above-wanted",
        _ => throw new ArgumentOutOfRangeException(nameof(status), status, "Not a status of a row."),
    };

    private static IEnumerable<CurveRow> InOrder(IReadOnlyList<CurveRow> rows, IReadOnlyList<CurveRow> reversed)
    {
        foreach (string wiring in rows.Concat(reversed).Select(r => r.Wiring).Distinct(StringComparer.Ordinal))
        {
            foreach (CurveRow row in rows.Where(r => r.Wiring == wiring))
            {
                yield return row;
            }

            foreach (CurveRow row in reversed.Where(r => r.Wiring == wiring && r.Current != 0))
            {
                yield return row;
            }
        }
    }

    /// <summary>Names of the extra pairs of all wirings, in order of first appearance.</summary>
    internal static string[] PairNames(IEnumerable<Wiring> wirings) =>
        [.. wirings.SelectMany(w => w.Extra).Select(p => p.Name).Distinct(StringComparer.Ordinal)];

    /// <summary>Names of the columns.</summary>
    internal static IEnumerable<string> Header(string[] pairs) =>
    [
        "wiring", "current_A",
        "v_along_V", "v_along_err_V", "v_across_V", "v_across_err_V",
        "v_along_odd_V", "v_along_even_V", "v_along_even_err_V",
        "v_across_odd_V", "v_across_even_V", "v_across_even_err_V",
        .. pairs.SelectMany(p => new[] { $"pair_{p}_V", $"pair_{p}_err_V" }),
        "v_source_V", "v_source_err_V", "newton_steps", "status",
    ];

    /// <summary>One row of the table.</summary>
    internal static IEnumerable<string> Cells(CurveRow row, string[] pairs)
    {
        Reading? along = row.Of("along"), across = row.Of("across"), source = row.Of("source");
        return
        [
            row.Wiring, Digits.Of(row.Current),
            Digits.Of(along?.Value), Digits.Of(along?.Error), Digits.Of(across?.Value), Digits.Of(across?.Error),
            Digits.Of(along?.Odd), Digits.Of(along?.Even), Digits.Of(along?.EvenError),
            Digits.Of(across?.Odd), Digits.Of(across?.Even), Digits.Of(across?.EvenError),
            .. pairs.Select(row.Of).SelectMany(r => new[] { Digits.Of(r?.Value), Digits.Of(r?.Error) }),
            Digits.Of(source?.Value), Digits.Of(source?.Error),
            row.NewtonSteps.ToString(CultureInfo.InvariantCulture), StatusText(row.Status),
        ];
    }

    /// <summary>Adds a line with quotes where they are needed.</summary>
    internal static void AddLine(StringBuilder text, IEnumerable<string> cells)
    {
        bool first = true;
        foreach (string cell in cells)
        {
            text.Append(first ? "" : ",").Append(Quoted(cell));
            first = false;
        }

        text.Append("\r\n");
    }

    private static string Quoted(string cell) =>
        cell.AsSpan().IndexOfAny(",\"\r\n") < 0 ? cell : $"\"{cell.Replace("\"", "\"\"", StringComparison.Ordinal)}\"";
}
