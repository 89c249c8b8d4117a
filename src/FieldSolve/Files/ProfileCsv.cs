using System.Text;
using FieldSolve.Bands;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The table profile.csv: conductance against direction, and what a tensor makes of it. RFC 4180, CR LF.</summary>
public static class ProfileCsv
{
    /// <summary>The whole table.</summary>
    /// <param name="result">A run of the bands command.</param>
    public static string Text(BandsResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        StringBuilder text = new();
        void Line(params IEnumerable<string> cells) => text.AppendJoin(',', cells).Append("\r\n");
        if (result.Response is { } response)
        {
            Line("direction_deg", "ballistic_S_per_m", "ballistic_err_S_per_m", "tensor_fit_S_per_m", "residual_S_per_m", "conductance_S", "conductance_err_S");
            for (int k = 0; k < response.Profile.Count; k++)
            {
                ProfilePoint p = response.Profile[k];
                double fit = result.Fit.Fitted[k];
                Line(new double[] { 360.0 * k / response.Profile.Count, p.Ballistic.Value, p.Ballistic.Error, fit, p.Ballistic.Value - fit, p.Sheet.Value, p.Sheet.Error }
                    .Select(v => Digits.Of(v)));
            }

            return text.ToString();
        }

        MeasuredProfile profile = result.Input.Profile!;
        (string name, string unit) = profile.IsResistance ? ("resistance", "ohm") : ("conductance", "S");
        Line("direction_deg", $"{name}_{unit}", $"{name}_err_{unit}", $"tensor_fit_{unit}", $"residual_{unit}");
        for (int k = 0; k < profile.Values.Count; k++)
        {
            double v = profile.Values[k], fit = result.Fit.Fitted[k];
            Line(new double?[] { Math.Round(profile.Directions[k] * 180 / Math.PI, 10), v, profile.Errors?[k], fit, v - fit }.Select(Digits.Of));
        }

        return text.ToString();
    }

    /// <summary>Writes the table to a file as a whole.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, BandsResult result) => WholeFile.WriteText(path, Text(result));
}
