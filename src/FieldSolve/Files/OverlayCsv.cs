using System.Globalization;
using System.Text;
using FieldSolve.Measured;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The table overlay.csv: every point of the measured map where it lies on the sheet, beside the computed value.</summary>
public static class OverlayCsv
{
    /// <summary>The whole table, lines ended by CR LF.</summary>
    public static string Text(OverlayResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        string unit = result.Measured.Quantity == MapQuantity.Potential ? "V" : "V_per_m";
        StringBuilder text = new();
        CurvesCsv.AddLine(text, ["x_m", "y_m", "sheet_x_m", "sheet_y_m", "value_" + unit, "sigma_" + unit, "model_" + unit, "residual_" + unit, "residual_sigma", "weight", "line", "model_err_" + unit, "patch_" + unit]);
        foreach (OverlaidPoint p in result.Points)
        {
            CurvesCsv.AddLine(text,
            [
                Digits.Of(p.Point.X), Digits.Of(p.Point.Y), Digits.Of(p.Place.X), Digits.Of(p.Place.Y), Digits.Of(p.Point.Value), Digits.Of(p.Sigma), Digits.Of(p.Model),
                Digits.Of(p.Residual), Digits.Of(p.Residual / p.Sigma), Digits.Of(p.Weight), p.Point.Line.ToString(CultureInfo.InvariantCulture), p.Model is null ? "" : Digits.Of(p.MapError), p.Model is null ? "" : Digits.Of(p.OfPatch),
            ]);
        }

        return text.ToString();
    }
}
