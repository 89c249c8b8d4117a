using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A bar about the origin, its length along x, with arms of one width and length on both sides.</summary>
internal sealed class HallBarShape : ISheetShape
{
    private const int MostArms = 1000;

    public string Key => "hall_bar";

    public string Example =>
        "{ length = \"30 um\", width = \"6 um\", arm_width = \"1 um\", arm_length = \"3 um\", arms_at = [\"-8 um\", \"8 um\"] }";

    public SheetPlan? Read(Section section, FileSource files)
    {
        double? length = section.Quantity("length", Dimension.Length, Range.Extent, required: true, "30 um");
        double? width = section.Quantity("width", Dimension.Length, Range.Extent, required: true, "6 um");
        double? armWidth = section.Quantity("arm_width", Dimension.Length, Range.Extent, required: true, "1 um");
        double? armLength = section.Quantity("arm_length", Dimension.Length, Range.Extent, required: true, "3 um");
        List<(double X, Place At)>? arms = ArmsAt(section);
        if (length is not { } l || width is not { } w || armWidth is not { } aw || armLength is not { } al || arms is null
            || !ArmsFit(arms, l, aw, section.Faults))
        {
            return null;
        }

        double x = l / 2, y = w / 2, tip = y + al;
        double[] sorted = [.. arms.Select(a => a.X).Order()];
        List<Point2> corners = [new(-x, -y)];
        foreach (double at in sorted)
        {
            corners.AddRange([new(at - (aw / 2), -y), new(at - (aw / 2), -tip), new(at + (aw / 2), -tip), new(at + (aw / 2), -y)]);
        }

        corners.AddRange([new(x, -y), new(x, y)]);
        foreach (double at in sorted.Reverse())
        {
            corners.AddRange([new(at + (aw / 2), y), new(at + (aw / 2), tip), new(at - (aw / 2), tip), new(at - (aw / 2), y)]);
        }

        corners.Add(new(-x, y));
        return new SheetPlan(Key, new Outline([OutlinePolygons.Segments(corners)]))
        {
            Ends = [("left", new(-x, 0)), ("right", new(x, 0))],
            Arms = [.. arms.Select(a => (new Point2(a.X, tip), new Point2(a.X, -tip)))],
        };
    }

    private static List<(double X, Place At)>? ArmsAt(Section section)
    {
        TomlEntry? entry = section.Need("arms_at", "[\"-8 um\", \"8 um\"]");
        if (entry is null)
        {
            return null;
        }

        if (entry.Value is not TomlArray { OfTables: false } list || list.Items.Count is 0 or > MostArms)
        {
            section.Faults.Add(entry.Value.At, "'arms_at' must list where along x the arms stand, for example [\"-8 um\", \"8 um\"]");
            return null;
        }

        List<(double, Place)> arms = [];
        foreach (TomlValue item in list.Items)
        {
            if (Values.Quantity(item, "'arms_at'", Dimension.Length, Range.Coordinate, section.Faults) is { } at)
            {
                arms.Add((at, item.At));
            }
        }

        return arms.Count == list.Items.Count ? arms : null;
    }

    private static bool ArmsFit(List<(double X, Place At)> arms, double length, double armWidth, FaultList faults)
    {
        int before = faults.Count;
        for (int k = 0; k < arms.Count; k++)
        {
            // An arm flush with the bar's end would leave no corner between them.
            if (!(Math.Abs(arms[k].X) + (armWidth / 2) < length / 2 * (1 - 1e-6)))
            {
                faults.Add(arms[k].At, string.Create(
                    CultureInfo.InvariantCulture, $"arm {k + 1} reaches beyond the end of the bar; its middle must lie within {Values.Length((length - armWidth) / 2)} of the centre"));
                continue;
            }

            int other = arms.FindIndex(0, k, a => !(Math.Abs(a.X - arms[k].X) > armWidth * (1 + 1e-6)));
            if (other >= 0)
            {
                faults.Add(arms[k].At, string.Create(
                    CultureInfo.InvariantCulture, $"arm {k + 1} overlaps arm {other + 1}; their middles must be more than the arm width ({Values.Length(armWidth)}) apart"));
            }
        }

        return faults.Count == before;
    }
}
