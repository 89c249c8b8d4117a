using System.Globalization;
using FieldSolve.Bands;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The report of the bands command: one HTML file like that of a drive, see <see cref="ReportPage"/>.</summary>
public static class BandsReport
{
    private const double Degree = Math.PI / 180;

    /// <summary>Writes the page.</summary>
    /// <param name="result">The run.</param>
    /// <param name="pictures">Its pictures, already written; their SVG files are put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(BandsResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);
        LiveData data = BandsLive.Of(result);
        Html page = new();
        PageShell.Begin(page, result.Input.Title, "bands", $"Sheet law from {result.Input.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, Answer(result));
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "Law for a device file");
        page.Raw($"<pre>{Html.Escaped(LawToml.Text(result).Trim())}</pre>");
        page.Element("h2", "Conductance against direction").Raw("<div class=\"charts\">");
        data.Charts.ForEach(c => PageShell.Chart(page, c.Id));
        page.Raw("</div>");
        ReportPage.AddPictures(page, pictures);
        Numbers(page, result);
        PageShell.End(page, data, $"SHA-256 of the bands file: {result.Input.Sha256}", path);
    }

    private static IEnumerable<string> Answer(BandsResult result)
    {
        BandLaw law = result.Law;
        yield return $"The sheet conductance is {SiScale.Text(law.A, "S", 5)} along crystal a, which lies at {SiScale.Number(Math.Round(law.Axis / Degree, 4), 6)}° from lab x, and {SiScale.Text(law.B, "S", 5)} along b: an anisotropy of {SiScale.Number(Math.Max(law.A, law.B) / Math.Min(law.A, law.B), 4)}.";
        if (result.Response is { } r)
        {
            yield return law.IsQuadratic
                ? $"The second order is largest in {Largest(r.Total)}. Expanding in the field is in order up to some {SiScale.Text(r.FieldLimit, "V/m", 3)}, where the contours shift by {SiScale.Number(result.Input.Model!.Shift, 3)} of their half width."
                : "There is no second order beyond the error of the quadrature.";
            yield return r.Hall is { IsZero: false } hall ? $"Without a magnetic field it has a Hall sheet conductance of {ErrorText.Of(hall.Value, hall.Error, "S")}." : "";
        }

        yield return string.Create(CultureInfo.InvariantCulture, $"A tensor leaves up to {100 * result.Fit.ResidualLargest:G2} % of the mean of the {(result.Response is null ? "measured" : "ballistic")} profile unexplained.");
    }

    private static string Largest(SecondOrderSet set)
    {
        (string name, Estimate most) = set.Elements.MaxBy(e => Math.Abs(e.Number.Value));
        return $"{name} = {Second(most)} A m/V²";
    }

    private static void Numbers(Html page, BandsResult result)
    {
        if (result.Response is { } r)
        {
            page.Element("h2", "Second order").Table(
                "In A m/V², in the principal frame of the sheet conductance; 0 where nothing is left beyond the error of the quadrature.",
                ["element", "shifted distribution", "Berry curvature dipole", "sum"],
                [.. r.Total.Elements.Select((e, k) => new[] { e.Name, Second(r.Drude.Elements[k].Number), Second(r.Dipole.Elements[k].Number), Second(e.Number) })]);
            // What is rounding beside the largest conductance is zero.
            double largest = r.Shares.Max(s => Math.Max(Math.Abs(s.Aa), Math.Abs(s.Bb)));
            string Siemens(double v) => Math.Abs(v) <= 1e-9 * largest ? "0" : SiScale.Text(v, "S");
            page.Element("h2", "Cones").Table(
                "With their degeneracy; the sheet conductances in the crystal frame of the file.",
                ["cone", "states (1/(J m²))", "σ_aa", "σ_ab", "σ_bb", "half width of the contour", "mean free path"],
                [.. r.Shares.Select(s => new[]
                {
                    s.Name, SiScale.Number(s.States), Siemens(s.Aa), Siemens(s.Ab), Siemens(s.Bb), $"{SiScale.Number(1e-9 * s.HalfWidth)} 1/nm", SiScale.Text(s.MeanFreePath, "m"),
                })],
                null, 0);
        }

        page.Element("h2", "Accuracy").Element("p", result.Response is not null
            ? "Errors are those of the quadrature; how well cones and one relaxation time describe a crystal is not in them."
            : "The errors come from those of the table, or from the scatter about the fit where it states none.");
        List<string[]> rows =
        [
            ["mean of the profile", Of(result.Fit.Mean)],
            ["amplitude of its cos 2θ part", Of(result.Fit.Amplitude)],
            ["direction of the largest value", ErrorText.In(new(1, ""), result.Fit.Axis.Value / Degree, result.Fit.Axis.Error / Degree) + "°"],
            ["left by the tensor, root mean square over the mean", $"{SiScale.Number(100 * result.Fit.ResidualRms, 3)} %"],
        ];
        if (result.Fit.Harmonics is { } h)
        {
            rows.Add(["cos 4θ and cos 6θ parts over the mean", $"{SiScale.Number(100 * h.Fourth, 3)} %, {SiScale.Number(100 * h.Sixth, 3)} %"]);
        }

        if (result.Response is { } found)
        {
            rows.Add(["sheet conductance along a", Of(found.A, "S")]);
            rows.Add(["sheet conductance along b", Of(found.B, "S")]);
            rows.Add(["wanted relative error of the quadrature", SiScale.Number(result.Input.Model!.Error)]);
        }

        page.Table("", ["figure", "value"], rows, null, 0);

        string Of(Estimate e, string? unit = null) => ErrorText.Of(e.Value, e.Error, unit ?? (result.Response is not null ? "S/m" : result.Input.Profile!.IsResistance ? "Ω" : "S"));
    }

    // A power of ten of its own: the unit takes no prefix.
    private static string Second(Estimate e)
    {
        if (e.IsZero || e.Value == 0)
        {
            return "0";
        }

        int power = (int)Math.Floor(Math.Log10(Math.Abs(e.Value)));
        return $"{SiScale.Number(e.Value / Math.Pow(10, power), 5)}·10{SiScale.Raised(power)}";
    }
}
