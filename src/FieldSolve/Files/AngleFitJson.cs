using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using FieldSolve.Turning;

namespace FieldSolve.Files;

/// <summary>The file angle-fit.json: what the curves say about the sheet, beside what the device file says.</summary>
public static class AngleFitJson
{
    private static readonly JsonSerializerOptions Indented = new() { WriteIndented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The file as text.</summary>
    public static string Text(TurnResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        AngleFit fit = result.Fit ?? throw new ArgumentException("The turn was cancelled and has no fit.", nameof(result));
        double near = fit.Law.Axis * 180 / Math.PI;
        double high = Math.Max(fit.Law.A, fit.Law.B) / Math.Min(fit.Law.A, fit.Law.B);
        var json = new JsonObject
        {
            ["title"] = result.Drive.Device.Title,
            ["sha256"] = result.Drive.Device.Sha256,
            ["turned"] = result.Mode switch { TurnMode.Ring => "ring", TurnMode.Wirings => "wirings", _ => "axis" },
            ["directions"] = fit.Directions,
            ["labels"] = "a is the principal axis nearest to the file's axis; elements of a fit stand in the frame of its own axis. Errors come from the misfit and from the numerical errors of the curves.",
            ["linear"] = new JsonObject
            {
                ["law"] = new JsonObject
                {
                    ["anisotropy_ratio"] = high,
                    ["ratio_a_over_b"] = fit.Law.A / fit.Law.B,
                    ["axis_deg"] = high - 1 > 1e-9 ? Degrees.Wrapped(near) : null,
                    ["sheet_resistance_ohm"] = fit.Law.SheetResistance,
                    ["hall_ohm"] = fit.Law.HallResistance + 0.0,
                },
                ["strip"] = Tensor(fit.Strip),
                ["device_geometry"] = Tensor(fit.Geometry),
            },
            ["second_order"] = new JsonObject
            {
                ["law"] = new JsonObject(
                    Law(fit).Select((v, k) => KeyValuePair.Create(FittedSecondOrder.Names[k], (JsonNode?)(v + 0.0)))),
                ["strip_single_mirror"] = Mirror(fit),
                ["strip"] = Second(fit.StripSecond),
                ["device_geometry"] = Second(fit.GeometrySecond),
            },
            ["harmonics"] = new JsonArray([.. fit.Harmonics.Select(h => (JsonNode)new JsonObject
            {
                ["curve"] = h.Curve,
                ["unit"] = h.Unit,
                ["angle"] = "of the current from crystal a of the file",
                ["terms"] = new JsonArray([.. h.Terms.Select(t => (JsonNode)new JsonObject
                {
                    ["order"] = t.Order,
                    ["cos"] = Number(t.Cos.Value),
                    ["cos_err"] = Number(t.Cos.Error),
                    ["sin"] = Number(t.Sin.Value),
                    ["sin_err"] = Number(t.Sin.Error),
                })]),
            })]),
        };
        return json.ToJsonString(Indented) + "\n";
    }

    /// <summary>Writes the file as a whole.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, TurnResult result) => WholeFile.WriteText(path, Text(result));

    private static double[] Law(AngleFit fit) =>
        [fit.LawSecond.D11, fit.LawSecond.D12, fit.LawSecond.D16, fit.LawSecond.D21, fit.LawSecond.D22, fit.LawSecond.D26];

    private static JsonObject? Tensor(FittedTensor? fit)
    {
        if (fit is null)
        {
            return null;
        }

        var json = new JsonObject();
        Add(json, "anisotropy_ratio", "", fit.AnisotropyRatio);
        Add(json, "ratio_a_over_b", "", fit.RatioAOverB);
        Add(json, "axis", "_deg", fit.AxisDegrees);
        Add(json, "sheet_resistance", "_ohm", fit.SheetResistance);
        Add(json, "hall", "_ohm", fit.HallResistance);
        json["misfit_ohm"] = Number(fit.Misfit);
        json["signal_ohm"] = Number(fit.Signal);
        return json;
    }

    private static JsonObject? Second(FittedSecondOrder? fit)
    {
        if (fit is null)
        {
            return null;
        }

        var json = new JsonObject();
        for (int k = 0; k < fit.Elements.Count; k++)
        {
            Add(json, FittedSecondOrder.Names[k], "", fit.Elements[k]);
        }

        json["misfit_ohm_per_A"] = Number(fit.Misfit);
        json["signal_ohm_per_A"] = Number(fit.Signal);
        return json;
    }

    private static JsonObject? Mirror(AngleFit fit)
    {
        if (fit.Mirror is not { } mirror)
        {
            return null;
        }

        double r = mirror.ResistivityRatio;
        return new JsonObject
        {
            ["mirror_line"] = mirror.AlongA ? "a" : "b",
            ["resistivity_ratio"] = Number(r),
            ["perpendicular"] = Element(mirror.AlongA ? "d12" : "d21", mirror.Perpendicular, mirror.AlongA ? fit.LawSecond.D12 : fit.LawSecond.D21),
            ["mixed"] = Element(
                mirror.AlongA ? "d11 - 2 r^2 d26" : "d22 - 2 r^2 d16", mirror.Mixed,
                mirror.AlongA
                    ? fit.LawSecond.D11 - (2 * Math.Pow(fit.Law.A / fit.Law.B, 2) * fit.LawSecond.D26)
                    : fit.LawSecond.D22 - (2 * Math.Pow(fit.Law.B / fit.Law.A, 2) * fit.LawSecond.D16)),
            ["misfit_per_V"] = Number(mirror.Misfit),
            ["signal_per_V"] = Number(mirror.Signal),
        };
    }

    private static JsonObject Element(string name, Fitted value, double law) => new()
    {
        ["element"] = name,
        ["value"] = Number(value.Value),
        ["err"] = Number(value.Error),
        ["law"] = Number(law),
    };

    private static void Add(JsonObject json, string name, string unit, Fitted? value)
    {
        json[name + unit] = Number(value?.Value);
        json[$"{name}_err{unit}"] = Number(value?.Error);
    }

    private static JsonNode? Number(double? value) => value is { } v && double.IsFinite(v) ? (JsonNode)(v + 0.0) : null;
}
