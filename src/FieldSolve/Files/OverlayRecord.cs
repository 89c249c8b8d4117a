using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using FieldSolve.Measured;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>overlay.json: the registration, and where the measured map differs from the computed one. Equal input gives equal bytes.</summary>
public static class OverlayRecord
{
    private static readonly JsonSerializerOptions Style = new() { WriteIndented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The text of overlay.json.</summary>
    public static string Text(OverlayResult result) => Json(result).ToJsonString(Style) + "\n";

    /// <summary>The text of run.json.</summary>
    /// <param name="result">The run.</param>
    /// <param name="options">Options as used.</param>
    public static string RunText(OverlayResult result, IReadOnlyDictionary<string, string> options)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(options);
        return new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["command"] = "overlay",
            ["device"] = Named(result),
            ["map"] = new JsonObject { ["path"] = result.Measured.Path, ["sha256"] = result.Measured.Sha256 },
            ["options"] = new JsonObject(options.OrderBy(o => o.Key, StringComparer.Ordinal).Select(o => KeyValuePair.Create(o.Key, (JsonNode?)o.Value))),
            ["stages"] = new JsonArray([.. result.Stages.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["wall_s"] = s.Seconds })]),
            ["warnings"] = Texts(result.Warnings),
        }.ToJsonString(Style) + "\n";
    }

    /// <summary>The record.</summary>
    public static JsonObject Json(OverlayResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        string unit = result.Measured.Quantity == MapQuantity.Potential ? "V" : "V_per_m";
        JsonObject Number(Registered r, double scale = 1) => new() { ["value"] = r.Value / scale, ["standard_error"] = r.StandardError / scale, ["noise_error"] = r.Noise / scale, ["numerical_error"] = r.Numerical / scale, ["weighting_error"] = r.Weighting / scale, ["free"] = r.StandardError > 0 };
        Reading? source = result.Row.Of("source");
        return new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["device"] = Named(result),
            ["map"] = new JsonObject { ["path"] = result.Measured.Path, ["sha256"] = result.Measured.Sha256, ["quantity"] = result.Measured.Quantity == MapQuantity.Potential ? "potential" : "field" },
            ["wiring"] = result.Map.Wiring,
            ["current_A"] = result.Map.Current,
            ["v_source_V"] = source?.Value,
            ["v_source_err_V"] = source?.Error,
            ["candidates"] = new JsonArray([.. result.Candidates.Select(c => (JsonNode)new JsonObject { ["wiring"] = c.Wiring, ["current_A"] = c.Current, ["misfit_sigma"] = c.Misfit })]),
            ["converged"] = result.Converged,
            ["shift_x_m"] = Number(result.ShiftX),
            ["shift_y_m"] = Number(result.ShiftY),
            ["turn_deg"] = Number(result.Turn, Math.PI / 180),
            ["scale"] = Number(result.Scale),
            ["gain"] = Number(result.Gain),
            ["offset_" + unit] = Number(result.Offset),
            ["centre_m"] = new JsonArray(result.Centre.X, result.Centre.Y),
            ["points"] = result.Measured.Points.Count,
            ["points_on_sheet"] = result.Points.Count(p => p.Model is not null),
            ["rms_" + unit] = result.Rms,
            ["noise_" + unit] = result.Noise,
            ["noise_is_estimated"] = result.NoiseIsEstimated,
            ["rms_over_noise"] = result.Rms / result.Noise,
            ["rejected_share"] = result.Rejected,
            ["misfit_over_noise"] = result.Misfit,
            ["misfit_pattern"] = result.Structure,
            ["misfit_is_structured"] = result.IsStructured,
            ["patch"] = result.Patch is not { } patch ? null : new JsonObject
            {
                ["x_m"] = Number(patch.X),
                ["y_m"] = Number(patch.Y),
                ["missing_A_m"] = Number(patch.Missing),
                ["dead_disc_radius_m"] = patch.Radius,
            },
            ["beyond_noise"] = new JsonArray([.. result.Places.Select(p => (JsonNode)new JsonObject
            {
                ["x_m"] = p.Place.X,
                ["y_m"] = p.Place.Y,
                ["mean_residual_" + unit] = p.Mean,
                ["sigmas"] = p.Significance,
                ["radius_m"] = p.Radius,
            })]),
            ["warnings"] = Texts(result.Warnings),
        };
    }

    private static JsonObject Named(OverlayResult result) => new() { ["title"] = result.Device.Title, ["path"] = result.Device.Path, ["sha256"] = result.Device.Sha256 };

    private static JsonArray Texts(IReadOnlyList<string> texts) => [.. texts.Select(t => (JsonNode)t)];
}
