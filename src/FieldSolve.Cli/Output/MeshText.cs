using System.Globalization;
using System.Text;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Cli.Output;

/// <summary>Says what a mesh is like.</summary>
internal static class MeshText
{
    public static string Plain(MeshQuality quality, IReadOnlyList<RefinementLevel> levels, string file)
    {
        var text = new StringBuilder();
        void Line(string name, string value) => text.Append(name.PadRight(11)).Append(value).Append('\n');
        string Invariant(FormattableString s) => s.ToString(CultureInfo.InvariantCulture);
        Line("mesh", Invariant($"{quality.Triangles} triangles, {quality.Vertices} vertices") + $", edges from {Engineering.Text(quality.SmallestEdge, "m")} to {Engineering.Text(quality.LargestEdge, "m")}");
        Line("angles", Invariant($"smallest {quality.MinimumAngle:F1} deg ({quality.MinimumAngleAwayFromSharpCorners:F1} away from sharp corners), largest {quality.MaximumAngle:F1}, mean smallest {quality.MeanMinimumAngle:F1}"));
        Line("refined", levels.Count > 0
            ? Invariant($"for the readings of the drive, {levels.Count} level{(levels.Count == 1 ? "" : "s")}; its split has {levels[^1].Unknowns} unknowns")
            : "by the shape alone: the device file has no drive");
        Line("written", file);
        return text.ToString();
    }

    public static string Json(MeshQuality quality, IReadOnlyList<RefinementLevel> levels, string file) => SummaryJson.Text(new()
    {
        ["file"] = file,
        ["triangles"] = quality.Triangles,
        ["vertices"] = quality.Vertices,
        ["minimum_angle_deg"] = quality.MinimumAngle,
        ["minimum_angle_away_from_sharp_corners_deg"] = quality.MinimumAngleAwayFromSharpCorners,
        ["mean_minimum_angle_deg"] = quality.MeanMinimumAngle,
        ["maximum_angle_deg"] = quality.MaximumAngle,
        ["smallest_edge_m"] = quality.SmallestEdge,
        ["largest_edge_m"] = quality.LargestEdge,
        ["area_m2"] = quality.Area,
        ["levels"] = levels.Count,
        ["unknowns"] = levels.Count > 0 ? levels[^1].Unknowns : null,
    });
}
