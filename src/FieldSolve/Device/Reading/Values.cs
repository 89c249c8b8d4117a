using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Single values of the device file: checked and turned into SI, or a fault at their place.</summary>
internal static class Values
{
    private const int LongestName = 64;
    private const double Nothing = 1e-13; // metres; what is left of rounding is shown as zero

    /// <summary>A number with its unit.</summary>
    public static double? Quantity(TomlValue value, string what, Dimension dimension, Range range, FaultList faults, string? example = null)
    {
        example ??= dimension.Example;
        string wanted = $"{dimension.NameWithArticle} is wanted, for example \"{example}\"";
        if (value is not TomlText text)
        {
            string is_ = value is TomlNumber n ? $"{Short(n.Raw)} has no unit" : $"it is {value.Kind}";
            faults.Add(value.At, $"{what}: {is_}; {wanted}");
            return null;
        }

        string quoted = $"\"{Short(text.Value)}\"";
        if (!Quantities.Quantity.TryParse(text.Value, out double si, out Dimension got, out _, out string? error))
        {
            faults.Add(text.At, $"{what}: {quoted}: {error}; {wanted}");
            return null;
        }

        if (got != dimension)
        {
            faults.Add(text.At, got == Dimension.None ? $"{what}: {quoted} has no unit; {wanted}" : $"{what}: {quoted} is {got.NameWithArticle}; {wanted}{Inverse(si, got, dimension)}");
            return null;
        }

        if (!range.Allows(si))
        {
            faults.Add(text.At, $"{what} is {quoted}; it must be {range.Text}");
            return null;
        }

        return si;
    }

    // A sheet resistance where its inverse is wanted: the habit of a data sheet.
    private static string Inverse(double si, Dimension got, Dimension wanted) =>
        got == Dimension.Resistance && wanted == Dimension.SheetConductance && si > 0
            ? string.Create(CultureInfo.InvariantCulture, $"; 1 over this is \"{1e3 / si:G6} mS\"")
            : "";

    /// <summary>A plain number.</summary>
    public static double? Number(TomlValue value, string what, Range range, bool integer, FaultList faults)
    {
        string wanted = integer ? "a whole number" : "a plain number";
        if (value is not TomlNumber number)
        {
            faults.Add(value.At, $"{what} is {value.Kind}; write {wanted}, without unit and quotes");
            return null;
        }

        if ((integer && !number.IsInteger) || !double.IsFinite(number.Value))
        {
            faults.Add(value.At, $"{what} is {Short(number.Raw)}; it must be {(integer ? wanted : "finite")}");
            return null;
        }

        if (!range.Allows(number.Value))
        {
            faults.Add(value.At, $"{what} is {Short(number.Raw)}; it must be {range.Text}");
            return null;
        }

        return number.Value;
    }

    /// <summary>A text that is not empty.</summary>
    public static TomlText? Text(TomlValue value, string what, string example, FaultList faults)
    {
        if (value is not TomlText text)
        {
            faults.Add(value.At, $"{what} is {value.Kind}; write text in quotes, for example \"{example}\"");
            return null;
        }

        if (string.IsNullOrWhiteSpace(text.Value))
        {
            faults.Add(value.At, $"{what} is empty; write for example \"{example}\"");
            return null;
        }

        return text;
    }

    /// <summary>A name that can stand in tables and pictures.</summary>
    public static bool IsName(string name, Place at, string what, FaultList faults)
    {
        string? wrong = string.IsNullOrWhiteSpace(name) ? "is empty"
            : name.Length > LongestName ? string.Create(CultureInfo.InvariantCulture, $"is longer than {LongestName} characters")
            : name.Any(c => char.IsControl(c) || c is '\u2028' or '\u2029' || char.GetUnicodeCategory(c) == UnicodeCategory.Format)
                ? "contains a control character, or one that cannot be seen"
            : null;
        if (wrong is not null)
        {
            faults.Add(at, $"{what} {wrong}; choose a short plain name");
        }

        return wrong is null;
    }

    /// <summary>A point: two lengths.</summary>
    public static Point2? Point(TomlValue value, string what, FaultList faults)
    {
        if (value is not TomlArray { OfTables: false, Items: [TomlValue x, TomlValue y] })
        {
            faults.Add(value.At, $"{what}: a point is wanted, two lengths x and y, for example [\"1 um\", \"-2 um\"]");
            return null;
        }

        double? px = Quantity(x, $"{what}, x", Dimension.Length, Range.Coordinate, faults);
        double? py = Quantity(y, $"{what}, y", Dimension.Length, Range.Coordinate, faults);
        return px is null || py is null ? null : new Point2(px.Value, py.Value);
    }

    /// <summary>A user's text for a message: cut where it is long.</summary>
    public static string Short(string text)
    {
        const int Longest = 60;
        int cut = text.Length > Longest && char.IsHighSurrogate(text[Longest - 1]) ? Longest - 1 : Longest;
        return text.Length > Longest ? text[..cut] + "…" : text;
    }

    /// <summary>A length for a message, for example "3.25 um".</summary>
    public static string Length(double metres)
    {
        // What rounds to 1000 of a unit is written in the next.
        (double scale, string unit) = (Math.Abs(metres) * (1 + 1e-9)) switch
        {
            < Nothing => (double.PositiveInfinity, "um"),
            < 1e-6 => (1e-9, "nm"),
            < 1e-3 => (1e-6, "um"),
            < 1 => (1e-3, "mm"),
            _ => (1.0, "m"),
        };
        string sign = metres <= -Nothing ? "-" : "";
        return string.Create(CultureInfo.InvariantCulture, $"{sign}{Math.Abs(metres) / scale:0.####} {unit}");
    }

    /// <summary>A point as it would be written in the file.</summary>
    public static string Point(Point2 p) => $"[\"{Length(p.X)}\", \"{Length(p.Y)}\"]";
}
