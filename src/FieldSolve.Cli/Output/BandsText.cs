using System.Globalization;
using System.Text;
using System.Text.Json.Nodes;
using FieldSolve.Bands;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>The short summary of the bands command.</summary>
internal static class BandsText
{
    public static string Plain(BandsResult result, string folder)
    {
        var text = new StringBuilder();
        void Line(string name, string value) => text.Append("  ").Append(name.PadRight(44)).Append(value).Append('\n');
        text.Append(result.Input.Title).Append("\n\n");
        BandLaw law = result.Law;
        Line("crystal a from lab x", Text($"{law.Axis * 180 / Math.PI:G6} deg"));
        Line("sheet conductance along a", Engineering.Text(law.A, "S", 6));
        Line("sheet conductance along b", Engineering.Text(law.B, "S", 6));
        if (result.Response is { } r)
        {
            Line("relative error of their quadrature", Text($"{Math.Max(r.A.Error / r.A.Value, r.B.Error / r.B.Value):G2}"));
            Line("Hall sheet conductance", r.Hall is null ? "not known, left at 0" : Engineering.Text(law.Hall, "S", 6));
            foreach ((string name, Estimate sum) in r.Total.Elements.Where(e => law.IsQuadratic && !e.Number.IsZero))
            {
                Estimate drude = Of(r.Drude, name), dipole = Of(r.Dipole, name);
                Line(name, Text($"{sum.Value:G6} A m/V^2 (shifted distribution {Shown(drude)}, Berry dipole {Shown(dipole)})"));
            }

            Line("second order", law.IsQuadratic ? "as listed" : "none within the error");
            Line("field limit", Text($"{Engineering.Text(r.FieldLimit, "V/m", 4)} (contour shifted by {result.Input.Model!.Shift:G3} of its half width)"));
            Line("longest mean free path", Engineering.Text(r.Shares.Max(s => s.MeanFreePath), "m", 4));
            Line("ballistic conductance per width", Text($"{Engineering.Text(result.Fit.Mean.Value, "S/m", 6)} on average, cos 2θ part {Engineering.Text(result.Fit.Amplitude.Value, "S/m", 4)}"));
        }
        else
        {
            Line("error of the axis", Text($"{result.Fit.Axis.Error * 180 / Math.PI:G3} deg"));
            Line("relative error of a principal value", Text($"{(result.Fit.Mean.Error + result.Fit.Amplitude.Error) / (result.Fit.Mean.Value - result.Fit.Amplitude.Value):G3} at most"));
        }

        Line("left by the tensor's description", Text($"{100 * result.Fit.ResidualLargest:G3} % of the mean at most, {100 * result.Fit.ResidualRms:G3} % rms"));
        return text.Append("\nresults in ").Append(folder).Append('\n').ToString();
    }

    public static string Json(BandsResult result, string folder)
    {
        var json = new JsonObject { ["title"] = result.Input.Title, ["folder"] = folder };
        foreach ((string name, JsonNode? node) in BandsRecord.Numbers(result).ToArray())
        {
            json[name] = node?.DeepClone();
        }

        return SummaryJson.Text(json, folder);
    }

    private static Estimate Of(SecondOrderSet set, string name) => set.Elements.First(e => e.Name == name).Number;

    private static string Shown(Estimate e) => e.IsZero ? "0" : e.Value.ToString("G4", CultureInfo.InvariantCulture);

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
