using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>What a turn says about the sheet, in sentences.</summary>
internal static class TurnWords
{
    /// <summary>The answer: what one would conclude by the strip formulas, and by the device's own geometry.</summary>
    public static IEnumerable<string> Answer(TurnResult result)
    {
        if (result.Fit is not { } fit)
        {
            yield return "The run was cancelled before the curves could be read.";
            yield break;
        }

        double ratio = Math.Max(fit.Law.A, fit.Law.B) / Math.Min(fit.Law.A, fit.Law.B);
        yield return $"The device file has an anisotropy ratio of {SiScale.Number(ratio, 4)}"
            + (ratio > 1 ? $" with crystal axis a at {SiScale.Number(Math.Round(Degrees.Wrapped(fit.Law.Axis * 180 / Math.PI), 6), 6)}°" : "") + $" and a sheet resistance of {SiScale.Text(fit.Law.SheetResistance, "Ω", 4)}.";
        if (Tensor("With the formulas for a uniform strip one would conclude", fit.Strip, fit) is { } strip)
        {
            yield return strip;
        }

        if (Tensor("With the response of this device's own shape and contacts the same curves give", fit.Geometry, fit) is { } geometry)
        {
            yield return geometry;
        }

        if (Largest(result, "across", r => r.Even, r => r.EvenError) is { } even)
        {
            yield return $"The even across voltage at {SiScale.Text(even.Row.Row.Current, "A")} is largest at {SiScale.Number(Math.Round(even.Row.DirectionDegrees, 3), 6)}°"
                + (result.Mode == TurnMode.Axis ? $" with the axis at {SiScale.Number(Math.Round(even.Row.AxisDegrees, 3), 6)}°" : "") + $": {ErrorText.Of(even.Value, even.Error, "V")}.";
        }
    }

    private static string? Tensor(string head, FittedTensor? tensor, AngleFit fit)
    {
        if (tensor is null)
        {
            return null;
        }

        double law = Math.Max(fit.Law.A, fit.Law.B) / Math.Min(fit.Law.A, fit.Law.B);
        string Of(Fitted? v) => v is { } f && double.IsFinite(f.Value) ? ErrorText.In(new(1, ""), f.Value, f.Error) : "an undetermined value";
        double off = tensor.AnisotropyRatio is Fitted { } r ? (r.Value / law) - 1 : double.NaN;
        return $"{head} a ratio of {Of(tensor.AnisotropyRatio)}"
            + (tensor.AxisDegrees is Fitted axis ? $", axis a at {Of(axis)}°" : ", no axis") + $", and {Of(tensor.SheetResistance)} Ω"
            + (double.IsFinite(off) ? Math.Abs(off) < 5e-4 ? "; the ratio of the file." : $"; the ratio is {SiScale.Number(100 * Math.Abs(off), 2)} % {(off > 0 ? "above" : "below")} that of the file." : ".");
    }

    private static (TurnRow Row, double Value, double? Error)? Largest(TurnResult result, string pair, Func<Reading, double?> part, Func<Reading, double?> error)
    {
        if (result.Drive.Device.Law.IsLinear)
        {
            return null;
        }

        double current = TurnQuantity.Largest(result);
        TurnRow? best = result.Rows.Where(r => r.Row.Current == current && r.Row.Of(pair) is { } v && part(v) is { } x && double.IsFinite(x)).MaxBy(r => Math.Abs(part(r.Row.Of(pair)!)!.Value));
        return best is null ? null : (best, part(best.Row.Of(pair)!)!.Value, error(best.Row.Of(pair)!));
    }
}
