using System.Text.Json;
using System.Text.Json.Nodes;

namespace FieldSolve.Cli.Output;

/// <summary>What --json prints.</summary>
internal static class SummaryJson
{
    private static readonly JsonSerializerOptions Indented = new() { WriteIndented = true };

    public static string Text(JsonObject json) => json.ToJsonString(Indented) + "\n";

    /// <summary>With the folder of the results, under both names that commands have used for it.</summary>
    public static string Text(JsonObject json, string folder)
    {
        json["folder"] = folder;
        json["out"] = folder;
        return Text(json);
    }
}
