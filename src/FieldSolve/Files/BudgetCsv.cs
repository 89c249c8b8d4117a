using System.Globalization;
using System.Text;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The table budget.csv: one line per wiring, quantity and cause, the largest contribution of a quantity first.</summary>
public static class BudgetCsv
{
    /// <summary>The whole table, lines ended by CR LF.</summary>
    public static string Text(ToleranceResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        StringBuilder text = new();
        CurvesCsv.AddLine(
            text,
            ["wiring", "pair", "cause", "contact", "sigma", "unit", "dv_dx_V", "dv_V", "part", "order", "d2v_dx2_V", "dv_err_V", "current_A"]);
        foreach (BudgetEntry e in result.Budget)
        {
            double unit = e.Cause.UnitSize;
            CurvesCsv.AddLine(text,
            [
                e.Quantity.Wiring, e.Quantity.Pair, e.Cause.Kind.Key, e.Cause.Target.Name, Digits.Of(Rounded(e.Cause.Sigma / unit)), e.Cause.Unit,
                Digits.Of(e.Slope * unit), Digits.Of(e.Contribution), e.Quantity.Part == ReadingPart.Odd ? "odd" : "even",
                e.Order.ToString(CultureInfo.InvariantCulture), Digits.Of(e.Curvature * unit * unit), Digits.Of(e.Error), Digits.Of(result.Current),
            ]);
        }

        return text.ToString();
    }

    // As written in the device file: 1 deg, not 1.0000000000000002 deg.
    private static double Rounded(double value) => double.Parse(value.ToString("G14", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
}
