using System.Text;
using FieldSolve.Device;
using FieldSolve.Turning;

namespace FieldSolve.Files;

/// <summary>The table angles.csv: direction, then the columns of curves.csv, then where the crystal axis lay. RFC 4180.</summary>
public static class AnglesCsv
{
    /// <summary>The whole table.</summary>
    /// <param name="wirings">They give the pair columns.</param>
    /// <param name="rows">Rows by direction, then by current.</param>
    /// <returns>Header and rows, each ended by CR LF.</returns>
    public static string Text(IReadOnlyList<Wiring> wirings, IReadOnlyList<TurnRow> rows)
    {
        ArgumentNullException.ThrowIfNull(wirings);
        ArgumentNullException.ThrowIfNull(rows);
        string[] pairs = CurvesCsv.PairNames(wirings);
        StringBuilder text = new();
        CurvesCsv.AddLine(text, ["direction_deg", .. CurvesCsv.Header(pairs), "axis_deg", "angle_from_a_deg"]);
        foreach (TurnRow row in rows)
        {
            CurvesCsv.AddLine(
                text, [Digits.Of(row.DirectionDegrees), .. CurvesCsv.Cells(row.Row, pairs), Digits.Of(row.AxisDegrees), Digits.Of(row.AngleDegrees)]);
        }

        return text.ToString();
    }

    /// <summary>Writes the table to a file as a whole. Parameters as in <see cref="Text"/>.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, IReadOnlyList<Wiring> wirings, IReadOnlyList<TurnRow> rows) => WholeFile.WriteText(path, Text(wirings, rows));
}
