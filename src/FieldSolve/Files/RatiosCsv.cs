using System.Text;
using FieldSolve.Turning;

namespace FieldSolve.Files;

/// <summary>The table ratios.csv: the linear response at other anisotropy ratios, one line per ratio and direction. RFC 4180.</summary>
public static class RatiosCsv
{
    /// <summary>The whole table; header and rows end with CR LF.</summary>
    public static string Text(IReadOnlyList<RatioCurve> curves)
    {
        ArgumentNullException.ThrowIfNull(curves);
        StringBuilder text = new();
        CurvesCsv.AddLine(
            text, ["ratio", "direction_deg", "wiring", "along_ohm", "along_err_ohm", "across_ohm", "across_err_ohm", "axis_deg", "angle_from_a_deg"]);
        foreach (RatioCurve curve in curves)
        {
            foreach (RatioPoint p in curve.Points)
            {
                CurvesCsv.AddLine(
                    text,
                    [
                        Digits.Of(curve.Ratio), Digits.Of(p.DirectionDegrees), p.Wiring,
                        Digits.Of(p.Along?.Value), Digits.Of(p.Along?.Error), Digits.Of(p.Across?.Value), Digits.Of(p.Across?.Error),
                        Digits.Of(p.AxisDegrees), Digits.Of(p.AngleDegrees),
                    ]);
            }
        }

        return text.ToString();
    }

    /// <summary>Writes the table to a file as a whole.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, IReadOnlyList<RatioCurve> curves) => WholeFile.WriteText(path, Text(curves));
}
