using System.Text.Json;
using FieldSolve.Lockin;

namespace FieldSolve.Files;

/// <summary>run.json of an AC run: the record of every run, then slopes, lines and frequency limits.</summary>
public static class LockinRecord
{
    /// <summary>The record as indented JSON.</summary>
    /// <param name="result">The run.</param>
    /// <param name="options">Options as the user gave them.</param>
    public static string Text(LockinResult result, IReadOnlyDictionary<string, string> options)
    {
        ArgumentNullException.ThrowIfNull(result);
        return RunRecord.Text(result.Common(), "lockin", options, json =>
        {
            json.WriteStartObject("lockin");
            WriteSlopes(json, result);
            WriteLines(json, result);
            WriteLimits(json, result);
            json.WriteEndObject();
        });
    }

    /// <summary>Writes the record to a file as a whole. Parameters as in <see cref="Text"/>.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, LockinResult result, IReadOnlyDictionary<string, string> options) =>
        WholeFile.WriteText(path, Text(result, options));

    private static void WriteSlopes(Utf8JsonWriter json, LockinResult result)
    {
        json.WriteStartArray("slopes");
        foreach (HarmonicSlope s in result.Slopes)
        {
            json.WriteStartObject();
            json.WriteString("wiring", s.Wiring);
            json.WriteString("pair", s.Pair);
            json.WriteNumber("harmonic", s.Harmonic);
            WriteFrequency(json, s.Frequency);
            RunRecord.WriteNumber(json, "slope", s.Slope);
            json.WriteNumber("points", s.Points);
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteLines(Utf8JsonWriter json, LockinResult result)
    {
        json.WriteStartArray("second_harmonic_lines");
        foreach (SecondHarmonicLine l in result.Lines)
        {
            json.WriteStartObject();
            json.WriteString("wiring", l.Wiring);
            WriteFrequency(json, l.Frequency);
            RunRecord.WriteNumber(json, "slope_per_V", l.Line.Slope);
            RunRecord.WriteNumber(json, "slope_error_per_V", l.Line.SlopeError);
            RunRecord.WriteNumber(json, "r_squared", l.Line.RSquared);
            json.WriteNumber("points", l.Line.Points);
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteLimits(Utf8JsonWriter json, LockinResult result)
    {
        json.WriteStartArray("quasi_static_to_1_percent");
        foreach (FrequencyLimit f in result.Limits)
        {
            json.WriteStartObject();
            json.WriteString("wiring", f.Wiring);
            RunRecord.WriteNumber(json, "current_rms_A", f.CurrentRms);
            json.WriteString("pair", f.Pair);
            json.WriteNumber("harmonic", f.Harmonic);
            RunRecord.WriteNumber(json, "frequency_Hz", f.Frequency);
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteFrequency(Utf8JsonWriter json, double? frequency)
    {
        if (frequency is { } f)
        {
            RunRecord.WriteNumber(json, "frequency_Hz", f);
        }
    }
}
