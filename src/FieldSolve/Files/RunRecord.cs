using System.Reflection;
using System.Text;
using System.Text.Encodings.Web;
using System.Text.Json;
using FieldSolve.Readings;

namespace FieldSolve.Files;

/// <summary>The run record run.json: what was run with what, how the answer was reached, and what the user should know.</summary>
public static class RunRecord
{
    /// <summary>The program's version, without build metadata.</summary>
    public static string Version { get; } =
        (typeof(RunRecord).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "0").Split('+')[0];

    /// <summary>The record as indented JSON, UTF-8 text with LF line ends.</summary>
    /// <param name="result">The run.</param>
    /// <param name="command">Command word, for example "drive".</param>
    /// <param name="options">Options as the user gave them; written in the order of their names.</param>
    /// <param name="more">Writes what only this command has, at the end; may be null.</param>
    /// <param name="figures">Further figures of the command, by name; none when null.</param>
    /// <remarks>Numbers that are not finite are written as null.</remarks>
    public static string Text(
        DriveResult result, string command, IReadOnlyDictionary<string, string> options, Action<Utf8JsonWriter>? more = null,
        IReadOnlyDictionary<string, double>? figures = null)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(options);

        using MemoryStream memory = new();
        JsonWriterOptions style = new() { Indented = true, NewLine = "\n", Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };
        using (Utf8JsonWriter json = new(memory, style))
        {
            json.WriteStartObject();
            json.WriteString("program", "FieldSolve");
            json.WriteString("version", Version);
            json.WriteString("command", command);
            WriteDevice(json, result);
            WriteOptions(json, options);
            WriteMesh(json, result);
            WriteRows(json, result);
            WriteLevels(json, result);
            WriteSolver(json, result.Figures, result.Points);
            WriteFigures(json, figures);
            WriteStages(json, result.Stages);
            WriteTexts(json, "warnings", result.Warnings);
            WriteTexts(json, "cautions", result.Cautions);
            more?.Invoke(json);
            json.WriteEndObject();
        }

        return Encoding.UTF8.GetString(memory.ToArray()) + "\n";
    }

    /// <summary>Writes the record to a file as a whole. Parameters as in <see cref="Text"/>.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(
        string path, DriveResult result, string command, IReadOnlyDictionary<string, string> options, Action<Utf8JsonWriter>? more = null,
        IReadOnlyDictionary<string, double>? figures = null) =>
        WholeFile.WriteText(path, Text(result, command, options, more, figures));

    private static void WriteDevice(Utf8JsonWriter json, DriveResult result)
    {
        json.WriteStartObject("device");
        json.WriteString("title", result.Device.Title);
        json.WriteString("path", result.Device.Path);
        json.WriteString("sha256", result.Device.Sha256);
        json.WriteEndObject();
    }

    private static void WriteOptions(Utf8JsonWriter json, IReadOnlyDictionary<string, string> options)
    {
        json.WriteStartObject("options");
        foreach ((string name, string value) in options.OrderBy(o => o.Key, StringComparer.Ordinal))
        {
            json.WriteString(name, value);
        }

        json.WriteEndObject();
    }

    private static void WriteMesh(Utf8JsonWriter json, DriveResult result)
    {
        json.WriteStartObject("mesh");
        json.WriteNumber("triangles", result.Figures.Triangles);
        json.WriteNumber("unknowns", result.Figures.Unknowns);
        WriteNumber(json, "wanted_error", result.Device.Mesh.Error);
        WriteNumber(json, "wanted_even_error", result.Device.Mesh.EvenError);
        json.WriteNumber("max_unknowns", result.Device.Mesh.MaxUnknowns);
        json.WriteEndObject();
    }

    private static void WriteRows(Utf8JsonWriter json, DriveResult result)
    {
        json.WriteStartObject("rows");
        json.WriteNumber("written", result.Rows.Count);
        foreach (RowStatus status in Enum.GetValues<RowStatus>())
        {
            json.WriteNumber(CurvesCsv.StatusText(status), result.Rows.Count(r => r.Status == status));
        }

        json.WriteBoolean("cancelled", result.Cancelled);
        json.WriteEndObject();
    }

    private static void WriteLevels(Utf8JsonWriter json, DriveResult result)
    {
        json.WriteStartArray("levels");
        foreach (RefinementLevel level in result.Levels)
        {
            json.WriteStartObject();
            json.WriteNumber("level", level.Level);
            json.WriteNumber("triangles", level.Triangles);
            json.WriteNumber("unknowns", level.Unknowns);
            json.WriteStartArray("estimates");
            foreach (LevelEstimate e in level.Estimates)
            {
                json.WriteStartObject();
                json.WriteString("wiring", e.Wiring);
                json.WriteString("pair", e.Pair);
                json.WriteString("part", e.Part);
                WriteNumber(json, "value_V", e.Value);
                WriteNumber(json, "correction_V", e.Correction);
                WriteNumber(json, "err_V", e.Error);
                WriteNumber(json, "wanted_V", e.Wanted);
                json.WriteEndObject();
            }

            json.WriteEndArray();
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteSolver(Utf8JsonWriter json, SolverFigures figures, IReadOnlyList<PointWork> points)
    {
        json.WriteStartObject("solver");
        json.WriteNumber("factor_nonzeros", figures.FactorNonZeros);
        json.WriteNumber("factorisations", figures.Factorisations);
        json.WriteNumber("solves", figures.Solves);
        json.WriteNumber("newton_steps", figures.NewtonSteps);
        WriteNumber(json, "largest_residual", figures.LargestResidual);
        json.WriteStartArray("points");
        foreach (PointWork point in points)
        {
            json.WriteStartObject();
            json.WriteString("wiring", point.Wiring);
            WriteNumber(json, "current_A", point.Current);
            json.WriteNumber("factorisations", point.Factorisations);
            json.WriteNumber("solves", point.Solves);
            json.WriteEndObject();
        }

        json.WriteEndArray();
        json.WriteEndObject();
    }

    private static void WriteFigures(Utf8JsonWriter json, IReadOnlyDictionary<string, double>? figures)
    {
        if (figures is null)
        {
            return;
        }

        json.WriteStartObject("figures");
        foreach ((string name, double value) in figures.OrderBy(f => f.Key, StringComparer.Ordinal))
        {
            WriteNumber(json, name, value);
        }

        json.WriteEndObject();
    }

    private static void WriteStages(Utf8JsonWriter json, IReadOnlyList<StageTime> stages)
    {
        json.WriteStartArray("stages");
        foreach (StageTime stage in stages)
        {
            json.WriteStartObject();
            json.WriteString("name", stage.Name);
            WriteNumber(json, "wall_s", stage.Seconds);
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteTexts(Utf8JsonWriter json, string name, IReadOnlyList<string> texts)
    {
        json.WriteStartArray(name);
        foreach (string text in texts)
        {
            json.WriteStringValue(text);
        }

        json.WriteEndArray();
    }

    internal static void WriteNumber(Utf8JsonWriter json, string name, double value)
    {
        if (double.IsFinite(value))
        {
            json.WriteNumber(name, value);
        }
        else
        {
            json.WriteNull(name);
        }
    }
}
