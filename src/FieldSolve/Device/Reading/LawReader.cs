using System.Globalization;
using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads [law].</summary>
internal static class LawReader
{
    // SI; far outside what any number of a law can be, far inside what doubles hold.
    private const double Smallest = 1e-60, Largest = 1e60;

    private const double LargestAnisotropy = 10_000, LargestHallTangent = 100, Rounding = 1 + 1e-6;

    /// <returns>The law, null with faults if it is no good, and the angle from lab x to crystal a in radians.</returns>
    public static (ISheetLaw? Law, double Axis) Read(Section root, FileSource files)
    {
        if (root.Header("law") is not { } section)
        {
            if (root.Table.Find("law") is null)
            {
                root.MissingUnlessMisspelt("the file has no [law], which says how the sheet conducts, for example kind = \"ohmic\", a = \"4 mS\", b = \"1 mS\"", "law");
            }

            return (null, 0);
        }

        double axis = section.Quantity("axis", Dimension.Angle, Range.Angle) ?? 0;
        string[] names = [.. LawCatalogue.Kinds.Select(k => k.Name)];
        TomlText? name = section.Text("kind", names[0], required: true);
        LawKind? kind = name is null ? null : LawCatalogue.Find(name.Value);
        if (kind is null)
        {
            if (name is not null)
            {
                section.Faults.Add(name.At, $"unknown law '{Values.Short(name.Value)}'{Suggest.Hint(name.Value, names)}");
            }

            // Which keys belong here is anyone's guess without the kind: know the keys of all laws.
            foreach (LawParameter p in LawCatalogue.Kinds.SelectMany(k => k.Parameters).DistinctBy(p => p.Key))
            {
                if (section.Take(p.Key) is { } entry && !p.IsFile)
                {
                    Number(p, entry.Value, section.Faults);
                }
            }

            section.Finish();
            return (null, axis);
        }

        ISheetLaw? law = Build(kind, section, files);
        section.Finish();
        return (law, axis);
    }

    private static ISheetLaw? Build(LawKind kind, Section section, FileSource files)
    {
        Dictionary<string, double> numbers = [];
        Dictionary<string, LawFile> texts = [];
        Place fileAt = section.At;
        bool complete = true;
        foreach (LawParameter p in kind.Parameters)
        {
            TomlEntry? entry = p.Required ? section.Need(p.Key, Example(p)) : section.Take(p.Key);
            if (entry is null)
            {
                complete &= !p.Required;
            }
            else if (p.IsFile)
            {
                fileAt = entry.Value.At;
                TomlText? name = Values.Text(entry.Value, $"'{p.Key}'", "law.csv", section.Faults);
                string? text = name is null ? null : files.Read(name);
                complete &= text is not null;
                texts[p.Key] = new(name is null ? "" : files.Shown(name.Value), text ?? "");
            }
            else if (Number(p, entry.Value, section.Faults) is { } value)
            {
                numbers[p.Key] = value;
            }
            else
            {
                complete = false;
            }
        }

        if (!complete)
        {
            return null;
        }

        try
        {
            ISheetLaw law = kind.Build(new LawValues(kind, numbers, texts));
            return Resolvable(law, section) ? law : null;
        }
        catch (LawException e) when (e.File is not null)
        {
            foreach (LawFileFault f in e.Faults)
            {
                section.Faults.AddElsewhere(fileAt, e.File, f.Line, f.Column, f.Message);
            }
        }
        catch (LawException e)
        {
            section.Faults.Add(section.At, $"[law]: {e.Message}");
        }

        return null;
    }

    // Meshes have triangles of good shape; far larger anisotropies and Hall angles squeeze the current into layers that no mesh of bearable size resolves,
    // and an unresolved answer is wrong by orders of magnitude. Up to these the error bars were seen to hold.
    private static bool Resolvable(ISheetLaw law, Section section)
    {
        Tensor2 t = law.AtZeroField;
        double mean = (t.Aa + t.Bb) / 2, radius = double.Hypot((t.Aa - t.Bb) / 2, (t.Ab + t.Ba) / 2), hall = Math.Abs(t.Ab - t.Ba) / 2;
        double ratio = (mean + radius) / Math.Max(double.Epsilon, mean - radius), tangent = hall / Math.Sqrt((mean + radius) * Math.Max(double.Epsilon, mean - radius));
        if (!(ratio <= LargestAnisotropy * Rounding))
        {
            section.Faults.Add(section.At, string.Create(
                CultureInfo.InvariantCulture, $"[law]: the sheet conductances along its principal axes differ by a factor of {ratio:G3}; no mesh resolves more than {LargestAnisotropy}; check the units of 'a' and 'b'"));
            return false;
        }

        if (!(tangent <= LargestHallTangent * Rounding))
        {
            section.Faults.Add(section.At, string.Create(
                CultureInfo.InvariantCulture, $"[law]: the tangent of the Hall angle, hall / sqrt(a b), is {tangent:G3}; no mesh resolves more than {LargestHallTangent}; check the unit of 'hall'"));
            return false;
        }

        return true;
    }

    private static double? Number(LawParameter p, TomlValue value, FaultList faults)
    {
        string what = $"'{p.Key}'";
        double? number = p.Dimension == Dimension.None
            ? Values.Number(value, what, Range.Any, integer: false, faults)
            : Values.Quantity(value, what, p.Dimension, Range.Any, faults);
        if (number is null)
        {
            return null;
        }

        if (!p.Allows(number.Value))
        {
            faults.Add(value.At, $"{what} ({p.Meaning}) must be {p.BoundText}");
            return null;
        }

        // A denormal field once let the search for the guard step without getting on.
        if (number != 0 && Math.Abs(number.Value) is < Smallest or > Largest)
        {
            faults.Add(value.At, string.Create(CultureInfo.InvariantCulture, $"{what} ({p.Meaning}) is {number.Value:G3} in SI units, beyond any sheet; check its unit"));
            return null;
        }

        return number;
    }

    private static string Example(LawParameter p) =>
        p.IsFile ? "\"law.csv\"" : p.Dimension == Dimension.None ? p.Dimension.Example : $"\"{p.Dimension.Example}\"";
}
