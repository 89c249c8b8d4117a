using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using FieldSolve.Bands;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The run record run.json of the bands command, whose numbers are also the command's summary as JSON.</summary>
public static class BandsRecord
{
    private static readonly JsonSerializerOptions Style = new() { WriteIndented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The record as indented JSON, UTF-8 text with LF line ends.</summary>
    /// <param name="result">The run.</param>
    /// <param name="options">Options as the user gave them.</param>
    public static string Text(BandsResult result, IReadOnlyDictionary<string, string> options)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(options);
        var json = new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["command"] = "bands",
            ["bands"] = new JsonObject { ["title"] = result.Input.Title, ["path"] = result.Input.Path, ["sha256"] = result.Input.Sha256 },
            ["options"] = new JsonObject(options.OrderBy(o => o.Key, StringComparer.Ordinal).Select(o => KeyValuePair.Create(o.Key, (JsonNode?)o.Value))),
        };
        foreach ((string name, JsonNode? node) in Numbers(result).ToArray())
        {
            json[name] = node?.DeepClone();
        }

        json["stages"] = new JsonArray([.. result.Stages.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["wall_s"] = s.Seconds })]);
        return json.ToJsonString(Style) + "\n";
    }

    /// <summary>What was found, with the error of each number; numbers that are not finite are null.</summary>
    /// <param name="result">The run.</param>
    public static JsonObject Numbers(BandsResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        BandLaw law = result.Law;
        var json = new JsonObject
        {
            ["law"] = new JsonObject
            {
                ["kind"] = law.IsQuadratic ? "quadratic" : "ohmic",
                ["axis_deg"] = Number(law.Axis * 180 / Math.PI),
                ["a_S"] = Number(law.A),
                ["b_S"] = Number(law.B),
                ["hall_S"] = Number(law.Hall),
                ["field_limit_V_per_m"] = law.FieldLimit is { } f ? Number(f) : null,
            },
        };
        if (result.Response is { } r)
        {
            json["linear"] = new JsonObject
            {
                ["a_S"] = Pair(r.A),
                ["b_S"] = Pair(r.B),
                ["ab_S"] = Pair(r.Ab),
                ["hall_S"] = r.Hall is { } h ? Pair(h) : null,
                ["rotation_deg"] = Number(r.Rotation * 180 / Math.PI),
            };
            json["second_order_A_m_per_V2"] = new JsonObject
            {
                ["drude"] = Elements(r.Drude),
                ["berry_dipole"] = Elements(r.Dipole),
                ["sum"] = Elements(r.Total),
            };
            json["berry_dipole_m"] = new JsonObject { ["a"] = Pair(r.BerryDipole.A), ["b"] = Pair(r.BerryDipole.B) };
            json["contour_shift"] = result.Input.Model!.Shift;
            json["field_limit_V_per_m"] = Number(r.FieldLimit);
            json["cones"] = new JsonArray([.. r.Shares.Select(s => (JsonNode)new JsonObject
            {
                ["name"] = s.Name,
                ["states_per_J_m2"] = Number(s.States),
                ["aa_S"] = Number(s.Aa),
                ["ab_S"] = Number(s.Ab),
                ["bb_S"] = Number(s.Bb),
                ["contour_half_width_per_m"] = Number(s.HalfWidth),
                ["mean_free_path_m"] = Number(s.MeanFreePath),
            })]);
        }

        TensorFit fit = result.Fit;
        json["profile_fit"] = new JsonObject
        {
            ["of"] = result.Response is not null ? "ballistic_S_per_m" : result.Input.Profile!.IsResistance ? "resistance_ohm" : "conductance_S",
            ["mean"] = Pair(fit.Mean),
            ["amplitude"] = Pair(fit.Amplitude),
            ["axis_of_largest_deg"] = Number(fit.Axis.Value * 180 / Math.PI),
            ["axis_err_deg"] = Number(fit.Axis.Error * 180 / Math.PI),
            ["residual_rms_of_mean"] = Number(fit.ResidualRms),
            ["residual_largest_of_mean"] = Number(fit.ResidualLargest),
            ["cos4_of_mean"] = fit.Harmonics is { } four ? Number(four.Fourth) : null,
            ["cos6_of_mean"] = fit.Harmonics is { } six ? Number(six.Sixth) : null,
        };
        json["reached"] = result.AllOk;
        json["cautions"] = new JsonArray([.. result.Cautions.Select(c => (JsonNode)c)]);
        json["warnings"] = new JsonArray([.. result.Warnings.Select(c => (JsonNode)c)]);
        return json;
    }

    /// <summary>Writes the record to a file as a whole.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, BandsResult result, IReadOnlyDictionary<string, string> options) =>
        WholeFile.WriteText(path, Text(result, options));

    private static JsonObject Elements(SecondOrderSet set) => new(set.Elements.Select(e => KeyValuePair.Create(e.Name, (JsonNode?)Pair(e.Number))));

    private static JsonArray Pair(Estimate e) => new(Number(e.Value), Number(e.Error));

    private static JsonValue? Number(double value) => double.IsFinite(value) ? JsonValue.Create(value + 0.0) : null;
}
