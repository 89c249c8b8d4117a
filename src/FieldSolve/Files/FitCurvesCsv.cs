using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The table fit-curves.csv: every measured voltage beside the fitted model, in the order of the data.</summary>
public static class FitCurvesCsv
{
    /// <summary>The whole table, lines ended by CR LF.</summary>
    public static string Text(FitResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        SheetDevice device = result.Device;
        string Name(Terminal t) => t.IsTip ? device.Tips[t.Index].Name : device.Contacts[t.Index].Name;
        StringBuilder text = new();
        CurvesCsv.AddLine(
            text,
            [
                "wiring", "pair", "source", "drain", "plus", "minus", "current_A", "current_rms_A", "harmonic", "value_V", "sigma_V", "model_V", "model_err_V",
                "residual_sigma", "weight",
            ]);
        foreach (FittedVoltage d in result.Data)
        {
            CurvesCsv.AddLine(text,
            [
                d.Circuit.Wiring.Name, d.Pair.Name, device.Contacts[d.Circuit.Wiring.Source].Name, device.Contacts[d.Circuit.Wiring.Drain].Name,
                Name(d.Pair.Plus), Name(d.Pair.Minus),
                d.Datum.Harmonic is null ? Digits.Of(d.Datum.Current) : "", d.Datum.Harmonic is null ? "" : Digits.Of(d.Datum.Current),
                d.Datum.Harmonic?.ToString(CultureInfo.InvariantCulture) ?? "", Digits.Of(d.Datum.Value), Digits.Of(d.Datum.Sigma), Digits.Of(d.Model),
                Digits.Of(d.NumericalError), Digits.Of(d.Residual), Digits.Of(d.Weight),
            ]);
        }

        return text.ToString();
    }
}
