using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;

namespace FieldSolve.Measured;

/// <summary>Reads a measured map: columns x, y, value and perhaps sigma, with their units in the header. Rows whose value is blank or nan are points that were not measured.</summary>
public static class MapTable
{
    /// <summary>Fewer points than these register nothing.</summary>
    public const int FewestPoints = 12;

    /// <summary>Reads a file.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <param name="quantity">What it shows.</param>
    /// <param name="noise">Standard deviations where the table has no column sigma; may be null.</param>
    public static (MeasuredMap? Map, IReadOnlyList<Fault> Faults) Read(string path, MapQuantity quantity, NoiseRule? noise)
    {
        ArgumentNullException.ThrowIfNull(path);
        var faults = new FaultList(path);
        return Finish(DataTable.Load(path, Columns(quantity), faults), path, quantity, noise, faults);
    }

    /// <summary>Reads the text of a table.</summary>
    /// <param name="text">CSV.</param>
    /// <param name="path">What faults call it.</param>
    /// <param name="quantity">What it shows.</param>
    /// <param name="noise">Standard deviations where the table has no column sigma; may be null.</param>
    public static (MeasuredMap? Map, IReadOnlyList<Fault> Faults) Parse(string text, string path, MapQuantity quantity, NoiseRule? noise)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(path);
        var faults = new FaultList(path);
        return Finish(DataTable.Parse(text, Columns(quantity), faults), path, quantity, noise, faults);
    }

    private static DataColumn[] Columns(MapQuantity quantity)
    {
        (Dimension dimension, string unit) = quantity == MapQuantity.Potential ? (Dimension.Voltage, "V") : (Dimension.Field, "V_per_m");
        return [new("x", Dimension.Length, "x_m"), new("y", Dimension.Length, "y_m"), new("value", dimension, "value_" + unit), new("sigma", dimension, "sigma_" + unit)];
    }

    private static (MeasuredMap? Map, IReadOnlyList<Fault> Faults) Finish(DataTable? table, string path, MapQuantity quantity, NoiseRule? noise, FaultList faults)
    {
        if (table is not null)
        {
            foreach (DataColumn column in Columns(quantity).Take(3).Where(c => !table.Has(c.Name)))
            {
                faults.Add(new(table.HeaderLine, 1), $"the table needs the column '{column.Name}' with its unit, for example {column.Example}");
            }
        }

        if (table is null || faults.Count > 0)
        {
            return (null, faults.InOrder());
        }

        var points = new List<MapPoint>();
        foreach (DataCell[] row in table.Rows)
        {
            // Instruments that scan a frame write one or the other where the tip met nothing.
            if (table.Cell(row, "value").Text is "" or "nan" or "NaN" or "NAN" or "--")
            {
                continue;
            }

            double? x = table.Number(row, "x"), y = table.Number(row, "y"), value = table.Number(row, "value"), sigma = null;
            if (table.Has("sigma") && table.Cell(row, "sigma").Text.Length > 0)
            {
                sigma = table.Number(row, "sigma");
                if (!(sigma > 0))
                {
                    DataCell at = table.Cell(row, "sigma");
                    faults.Add(new(at.Line, at.Column), $"'sigma' is {at.Text}; a standard deviation is greater than zero");
                }
            }

            if (x is { } px && y is { } py && value is { } v)
            {
                double? known = sigma ?? (noise?.Of(v) is > 0 and var s ? s : null);
                points.Add(new(px, py, v, known, row[0].Line));
            }
        }

        if (faults.Count == 0 && points.Count < FewestPoints)
        {
            faults.Add(new(table.HeaderLine, 1), string.Create(CultureInfo.InvariantCulture, $"the map has {points.Count} points; at least {FewestPoints} are needed to register it"));
        }

        if (faults.Count == 0 && points.TrueForAll(p => p.Value == points[0].Value))
        {
            faults.Add(new(table.HeaderLine, 1), "all values of the map are the same; there is nothing to register it by");
        }

        if (faults.Count == 0 && points.TrueForAll(p => p.X == points[0].X && p.Y == points[0].Y))
        {
            faults.Add(new(table.HeaderLine, 1), "all points of the map lie at one place; are x and y the right columns?");
        }

        return faults.Count > 0 ? (null, faults.InOrder()) : (new(path, table.Sha256, quantity, points), []);
    }
}
