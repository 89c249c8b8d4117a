using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;

namespace FieldSolve.Sessions;

/// <summary>What a layout reads.</summary>
/// <param name="Version">Version of the text that was solved.</param>
/// <param name="Device">What that text says.</param>
/// <param name="IsAccurate">Solved to the wanted errors of the device file; otherwise on a coarse mesh, for a first look.</param>
/// <param name="Rows">Rows; their bars are those of the mesh that was used.</param>
/// <param name="Frames">Potential at the largest current of each wiring that was solved.</param>
/// <param name="Failure">Why there is no answer; null when there is one.</param>
/// <param name="Milliseconds">Time the answer took.</param>
/// <param name="Drive">The whole drive behind an accurate answer for all wirings, else null.</param>
public sealed record LayoutAnswer(
    int Version, SheetDevice Device, bool IsAccurate, IReadOnlyList<CurveRow> Rows, IReadOnlyList<PotentialFrame> Frames, string? Failure, double Milliseconds,
    DriveResult? Drive);
