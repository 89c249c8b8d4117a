using System.Text.Encodings.Web;
using System.Text.Json;
using System.Text.Json.Nodes;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>fit.json: what was fitted, how well, and what the data cannot tell. Equal input gives equal bytes.</summary>
public static class FitRecord
{
    private static readonly JsonSerializerOptions Style = new() { WriteIndented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The text of fit.json.</summary>
    public static string Text(FitResult result) => Json(result).ToJsonString(Style) + "\n";

    /// <summary>The text of run.json.</summary>
    /// <param name="result">The run.</param>
    /// <param name="options">Options as used.</param>
    public static string RunText(FitResult result, IReadOnlyDictionary<string, string> options)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(options);
        return new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["command"] = "fit",
            ["device"] = Named(result.Device),
            ["data"] = new JsonObject { ["path"] = result.Measured.Path, ["sha256"] = result.Measured.Sha256 },
            ["options"] = new JsonObject(options.OrderBy(o => o.Key, StringComparer.Ordinal).Select(o => KeyValuePair.Create(o.Key, (JsonNode?)o.Value))),
            ["mesh"] = new JsonObject { ["unknowns"] = result.Unknowns.Coarse, ["unknowns_of_error"] = result.Unknowns.Fine },
            ["solver"] = new JsonObject { ["states"] = result.Solves.States, ["adjoints"] = result.Solves.Adjoints },
            ["stages"] = new JsonArray([.. result.Stages.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["wall_s"] = s.Seconds })]),
            ["warnings"] = Texts(result.Warnings),
        }.ToJsonString(Style) + "\n";
    }

    /// <summary>The record.</summary>
    public static JsonObject Json(FitResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        FitQuality q = result.Quality;
        return new JsonObject
        {
            ["program"] = "FieldSolve",
            ["version"] = RunRecord.Version,
            ["device"] = Named(result.Device),
            ["data"] = new JsonObject { ["path"] = result.Measured.Path, ["sha256"] = result.Measured.Sha256, ["count"] = result.Data.Count },
            ["converged"] = result.Converged,
            ["steps"] = result.Steps,
            ["robust"] = result.Robust,
            ["parameters"] = new JsonArray([.. result.Parameters.Select(p => (JsonNode)Parameter(p, q))]),
            ["chi_squared"] = q.ChiSquared,
            ["degrees_of_freedom"] = q.Freedom,
            ["chi_squared_per_degree"] = q.Freedom > 0 ? q.ChiSquared / q.Freedom : null,
            ["residuals"] = new JsonObject
            {
                ["probability_of_chi_squared"] = q.Probability,
                ["runs_z"] = q.RunsZ,
                ["largest_sigma"] = q.Largest,
                ["largest_line"] = q.LargestLine,
                ["probability_of_largest"] = q.LargestProbability,
            },
            ["numerical_error_share"] = result.NumericalShare,
            ["numerical_error_share_wanted"] = result.WantedShare,
            ["correlation"] = Correlation(result),
            ["identifiability"] = new JsonArray([.. result.Directions.Select(d => (JsonNode)Direction(d, result))]),
            ["suggested"] = new JsonArray([.. result.Next.Select(n => (JsonNode)new JsonObject
            {
                ["source"] = n.Source,
                ["drain"] = n.Drain,
                ["plus"] = n.Plus,
                ["minus"] = n.Minus,
                ["current_A"] = n.Current,
                ["sigma_V"] = n.Sigma,
                ["volume_factor"] = 1 / n.Gain,
                ["helps"] = n.Helped,
                ["standard_error_factor"] = n.After / n.Before,
            })]),
            ["formulas"] = new JsonArray([.. result.Formulas.Select(f => (JsonNode)new JsonObject
            {
                ["method"] = f.Method,
                ["key"] = f.Key,
                ["unit"] = f.Unit,
                ["value"] = f.Value,
                ["fitted"] = f.Fitted,
                ["off_by_sigmas"] = f.Off,
            })]),
            ["starts"] = new JsonArray([.. result.Starts.Select(s => (JsonNode)new JsonObject { ["axis_deg"] = s.Axis * 180 / Math.PI, ["objective"] = s.Objective })]),
            ["warnings"] = Texts(result.Warnings),
        };
    }

    private static JsonObject Parameter(FittedParameter p, FitQuality q)
    {
        double unit = p.Parameter.UnitSize;
        bool poor = q is { Freedom: > 0 } && q.ChiSquared > q.Freedom;
        return new JsonObject
        {
            ["key"] = p.Parameter.Key,
            ["unit"] = p.Parameter.Unit,
            ["determined"] = p.Value is not null,
            ["value"] = p.Value / unit,
            ["standard_error"] = p.StandardError / unit,
            ["standard_error_scaled"] = poor ? p.StandardError / unit * Math.Sqrt(q.ChiSquared / q.Freedom) : p.StandardError / unit,
            ["numerical_error"] = p.Value is null ? null : p.NumericalError / unit,
            ["interval_95"] = p.Interval is { } i ? new JsonArray(i.Low / unit, i.High / unit) : null,
            ["at_bound"] = p.AtBound,
            ["start"] = p.Parameter.Start / unit,
            ["prior_mean"] = p.Parameter.PriorSigma is null ? null : p.Parameter.PriorMean / unit,
            ["prior_sigma"] = p.Parameter.PriorSigma / unit,
        };
    }

    private static JsonArray Correlation(FitResult result)
    {
        int m = result.Parameters.Count;
        return [.. Enumerable.Range(0, m).Select(i => (JsonNode)new JsonArray([.. Enumerable.Range(0, m).Select(j =>
            (JsonNode?)(result.Parameters[i].Value is null || result.Parameters[j].Value is null ? null : Math.Round(result.Correlation[i, j], 6)))]))];
    }

    private static JsonObject Direction(FitDirection d, FitResult result) => new()
    {
        ["singular_value"] = d.SingularValue,
        ["determined"] = d.Determined,
        ["direction"] = new JsonObject(d.Direction.Select((v, j) => KeyValuePair.Create(result.Parameters[j].Parameter.Key, (JsonNode?)Math.Round(v, 6)))),
        ["words"] = d.Words.Length == 0 ? null : d.Words,
    };

    private static JsonObject Named(SheetDevice device) => new() { ["title"] = device.Title, ["path"] = device.Path, ["sha256"] = device.Sha256 };

    private static JsonArray Texts(IReadOnlyList<string> texts) => [.. texts.Select(t => (JsonNode)t)];
}
