using System.Text;
using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>run.json of a tolerance: what was run with what, statistics, answers and warnings.</summary>
public static class ToleranceRecord
{
    private static readonly JsonSerializerOptions Style = new() { WriteIndented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>Writes the record as a whole.</summary>
    /// <param name="path">Target file.</param>
    /// <param name="result">The run.</param>
    /// <param name="options">Options as used, in the order of their names.</param>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, ToleranceResult result, IReadOnlyDictionary<string, string> options) =>
        WholeFile.WriteText(path, Json(result, options).ToJsonString(Style) + "\n");

    /// <summary>The record.</summary>
    public static JsonObject Json(ToleranceResult result, IReadOnlyDictionary<string, string> options)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(options);
        SheetDevice device = result.Device;
        return new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["command"] = "tolerance",
            ["device"] = new JsonObject { ["title"] = device.Title, ["path"] = device.Path, ["sha256"] = device.Sha256 },
            ["options"] = new JsonObject(options.OrderBy(o => o.Key, StringComparer.Ordinal).Select(o => KeyValuePair.Create(o.Key, (JsonNode?)o.Value))),
            ["current_A"] = result.Current,
            ["mesh"] = new JsonObject { ["unknowns"] = result.Unknowns.Fine, ["unknowns_of_samples"] = result.Unknowns.Coarse, ["wanted_error"] = device.Mesh.Error },
            ["causes"] = new JsonArray([.. device.Tolerance!.Causes.Select(c => (JsonNode)new JsonObject
            {
                ["cause"] = c.Kind.Key,
                ["contact"] = c.Target.Name,
                ["sigma"] = c.Sigma / c.UnitSize,
                ["unit"] = c.Unit,
                ["shape"] = c.Shape == CauseShape.Normal ? "normal" : "uniform",
            })]),
            ["samples"] = Samples(result),
            ["statistics"] = new JsonArray([.. result.Statistics.Select(s => (JsonNode)Statistics(s))]),
            ["answers"] = Texts(result.Answers),
            ["stages"] = new JsonArray([.. result.Stages.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["wall_s"] = s.Seconds })]),
            ["warnings"] = Texts(result.Warnings),
            ["cautions"] = Texts(result.Cautions),
        };
    }

    private static JsonObject Samples(ToleranceResult result)
    {
        var json = new JsonObject { ["count"] = result.Samples.Count };
        foreach (SampleStatus status in Enum.GetValues<SampleStatus>())
        {
            json[SamplesCsv.StatusText(status)] = result.Samples.Count(s => s.Status == status);
        }

        json["cancelled"] = result.Cancelled;
        return json;
    }

    private static JsonObject Statistics(SampleStatistics s)
    {
        string v = s.Quantity.IsRatio ? "" : "_V";
        JsonNode? Of(SampleEstimate e) => s.Count == 0 ? null : new JsonArray(e.Value, e.Low, e.High);
        return new JsonObject
        {
            ["wiring"] = s.Quantity.Wiring,
            ["pair"] = s.Quantity.Pair,
            ["part"] = s.Quantity.Part == ReadingPart.Odd ? "odd" : "even",
            ["design" + v] = s.Design,
            ["design_err" + v] = s.NumericalError,
            ["first_order_sigma" + v] = s.FirstOrder,
            ["first_order_sigma_err" + v] = s.SpreadError,
            ["mean" + v] = Of(s.Mean),
            ["sigma" + v] = Of(s.Deviation),
            ["p05" + v] = Of(s.Percentiles[0]),
            ["p50" + v] = Of(s.Percentiles[1]),
            ["p95" + v] = Of(s.Percentiles[2]),
        };
    }

    private static JsonArray Texts(IReadOnlyList<string> texts) => [.. texts.Select(t => (JsonNode)t)];
}
