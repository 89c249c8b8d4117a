using System.Globalization;
using System.Text;
using System.Text.Json.Nodes;
using FieldSolve.Files;
using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Cli.Output;

/// <summary>The short summary of a turn.</summary>
internal static class TurnText
{
    public static string Plain(TurnResult result, string folder)
    {
        var text = new StringBuilder();
        text.Append(result.Drive.Device.Title).Append("\n\n");
        int directions = result.Rows.Select(r => (r.DirectionDegrees, r.AxisDegrees, r.Row.Wiring)).Distinct().Count();
        text.Append(CultureInfo.InvariantCulture, $"{directions} {(result.Mode == TurnMode.Axis ? $"axes under wiring {result.Drive.Device.Wirings[0].Name}" : "directions")}\n\n");
        if (result.Fit is { } fit)
        {
            text.Append("  ").Append("".PadRight(30)).Append("device file".PadRight(14)).Append("strip formulas".PadRight(24)).Append("device geometry\n");
            void Line(string name, string law, Fitted? strip, Fitted? geometry, string unit) => text.Append("  ").Append(name.PadRight(30)).Append(law.PadRight(14))
                .Append(Value(strip, unit).PadRight(24)).Append(Value(geometry, unit)).Append('\n');
            double ratio = Math.Max(fit.Law.A, fit.Law.B) / Math.Min(fit.Law.A, fit.Law.B);
            Line("anisotropy ratio", Digits(ratio), fit.Strip?.AnisotropyRatio, fit.Geometry?.AnisotropyRatio, "");
            Line("axis a (deg)", ratio > 1 ? Digits(Degrees.Wrapped(fit.Law.Axis * 180 / Math.PI)) : "-", fit.Strip?.AxisDegrees, fit.Geometry?.AxisDegrees, "");
            Line("sheet resistance (ohm)", Digits(fit.Law.SheetResistance), fit.Strip?.SheetResistance, fit.Geometry?.SheetResistance, "");
            if (fit.GeometrySecond is not null || fit.StripSecond is not null)
            {
                double[] law = [fit.LawSecond.D11, fit.LawSecond.D12, fit.LawSecond.D16, fit.LawSecond.D21, fit.LawSecond.D22, fit.LawSecond.D26];
                for (int k = 0; k < law.Length; k++)
                {
                    Line($"{FittedSecondOrder.Names[k]} (A m/V^2)", Digits(law[k]), fit.StripSecond?.Elements[k], fit.GeometrySecond?.Elements[k], "");
                }
            }

            if (fit.Strip is null && result.Drive.Device.Wirings.All(w => w.Pairs.All(p => p.Name != "along")))
            {
                text.Append("  - : these fits read the 'along' pair, and no wiring has one\n");
            }

            text.Append('\n');
        }

        Dictionary<RowStatus, int> counts = result.Rows.GroupBy(r => r.Row.Status).ToDictionary(g => g.Key, g => g.Count());
        text.Append(CultureInfo.InvariantCulture, $"{result.Rows.Count} rows: ");
        text.AppendJoin(", ", Enum.GetValues<RowStatus>().Where(counts.ContainsKey).Select(k => $"{counts[k].ToString(CultureInfo.InvariantCulture)} {CurvesCsv.StatusText(k)}"));
        text.Append(CultureInfo.InvariantCulture, $"; {result.Drive.Figures.Unknowns} unknowns on {result.Drive.Figures.Triangles} triangles\n");
        if (result.Drive.Cancelled)
        {
            text.Append("cancelled; the rows that were finished are kept\n");
        }

        return text.Append("results in ").Append(folder).Append('\n').ToString();
    }

    public static string Json(TurnResult result, string folder)
    {
        static JsonNode? Number(Fitted? f) => f is { } v && double.IsFinite(v.Value) ? v.Value : null;
        static JsonObject? Tensor(FittedTensor? t) => t is null ? null : new JsonObject
        {
            ["anisotropy_ratio"] = Number(t.AnisotropyRatio),
            ["axis_deg"] = Number(t.AxisDegrees),
            ["sheet_resistance_ohm"] = Number(t.SheetResistance),
        };
        static JsonObject? Second(FittedSecondOrder? s) => s is null
            ? null
            : new JsonObject(s.Elements.Select((e, k) => KeyValuePair.Create(FittedSecondOrder.Names[k], Number(e))));
        var json = new JsonObject
        {
            ["title"] = result.Drive.Device.Title,
            ["folder"] = folder,
            ["directions"] = result.Rows.Select(r => (r.DirectionDegrees, r.AxisDegrees, r.Row.Wiring)).Distinct().Count(),
            ["rows"] = result.Rows.Count,
            ["ok"] = result.Rows.Count(r => r.Row.Status == RowStatus.Ok),
            ["cancelled"] = result.Drive.Cancelled,
            ["unknowns"] = result.Drive.Figures.Unknowns,
            ["strip"] = Tensor(result.Fit?.Strip),
            ["device_geometry"] = Tensor(result.Fit?.Geometry),
            ["strip_second_order"] = Second(result.Fit?.StripSecond),
            ["device_geometry_second_order"] = Second(result.Fit?.GeometrySecond),
            ["cautions"] = new JsonArray([.. result.Drive.Cautions.Select(c => (JsonNode)c)]),
            ["warnings"] = new JsonArray([.. result.Drive.Warnings.Select(c => (JsonNode)c)]),
        };
        return SummaryJson.Text(json, folder);
    }

    private static string Digits(double value) => value.ToString("G5", CultureInfo.InvariantCulture);

    private static string Value(Fitted? value, string unit) => value is { } v
        ? Engineering.MeasuredPlain(v.Value, v.Error, unit)
        : "-";
}
