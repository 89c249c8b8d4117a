using System.Text;
using FieldSolve.Bands;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The file law.toml: a [law] that stands in a device file as it is, with comments that say where it comes from.</summary>
public static class LawToml
{
    /// <summary>The text, LF line ends.</summary>
    /// <param name="result">A run of the bands command.</param>
    public static string Text(BandsResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        BandLaw law = result.Law;
        StringBuilder text = new();
        void Line(string line) => text.Append(line).Append('\n');
        Line($"# {(result.Response is null ? "Tensor fitted to a measured profile" : "Sheet law of a band model")}: {OneLine(result.Input.Title)}");
        Line($"# written by FieldSolve {RunRecord.Version}; SHA-256 of the bands file {result.Input.Sha256}");
        if (result.Response is { } r)
        {
            foreach ((string name, Estimate drude) in r.Drude.Elements)
            {
                Estimate dipole = r.Dipole.Elements.First(e => e.Name == name).Number;
                if (law.IsQuadratic)
                {
                    Line($"# {name} in A m/V^2: shifted distribution {Shown(drude)}, Berry curvature dipole {Shown(dipole)}");
                }
            }
        }

        Line("");
        Line("[law]");
        Line($"kind = \"{(law.IsQuadratic ? "quadratic" : "ohmic")}\"");
        Line($"axis = \"{Digits.Of(law.Axis * 180 / Math.PI)} deg\"");
        Line($"a = \"{Digits.Of(law.A)} S\"");
        Line($"b = \"{Digits.Of(law.B)} S\"");
        if (law.Hall != 0)
        {
            Line($"hall = \"{Digits.Of(law.Hall)} S\"");
        }

        if (law.IsQuadratic)
        {
            foreach ((string name, Estimate d) in new SecondOrderSet(law.Second, default).Elements.Where(e => e.Number.Value != 0))
            {
                Line($"{name} = \"{Digits.Of(d.Value)} A m/V^2\"");
            }

            Line($"field_limit = \"{Digits.Of(law.FieldLimit)} V/m\"");
        }

        return text.ToString();
    }

    /// <summary>Writes the law to a file as a whole.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void Write(string path, BandsResult result) => WholeFile.WriteText(path, Text(result));

    private static string Shown(Estimate e) => e.IsZero ? "0" : Digits.Of(e.Value);

    // A title is any text: in a comment it must not begin a line of its own.
    private static string OneLine(string title) => string.Concat(title.Select(c => char.IsControl(c) || c is '\u2028' or '\u2029' ? ' ' : c));
}
