using System.Globalization;
using System.Text.Json;
using FieldSolve.Laws;
using FieldSolve.Pictures;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The page's own arithmetic: laws and colours.</summary>
[Collection(ReportCollection.Name)]
public class PageMathTests(ReportFixture report)
{
    private static readonly SecondOrder Second = new(1e-9, 4e-9, -2e-9, 3e-9, -1e-9, 2e-9);

    private static ISheetLaw Make(string kind) => kind switch
    {
        "ohmic" => new OhmicLaw(4e-3, 1e-3, 5e-4),
        "quadratic" => GuardedLaw.Around(new QuadraticLaw(4e-3, 1e-3, 5e-4, Second)),
        "quadratic with a limit" => GuardedLaw.Around(new QuadraticLaw(4e-3, 1e-3, 5e-4, Second, 1e5)),
        "cubic" => GuardedLaw.Around(new CubicLaw(4e-3, 1e-3, 5e-4, Second, new(1e-14, -2e-14, 3e-14, 2e-14), 3e5)),
        "saturating" => GuardedLaw.Around(new SaturatingLaw(3e-3, 1e-3, 2e-4, 4e4, 1.2e5, 2)),
        _ => TableLaw.Read(Table()).Law!,
    };

    // K of a gentle law on a grid, as a table file holds it.
    private static string Table()
    {
        var text = new System.Text.StringBuilder("ea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n");
        for (int i = -12; i <= 12; i++)
        {
            for (int j = -12; j <= 12; j++)
            {
                double a = 2e4 * i, b = 2e4 * j, fade = 1 / (1 + (((a * a) + (b * b)) / 4e10));
                text.Append(CultureInfo.InvariantCulture, $"{a:R},{b:R},{(4e-3 * a) + (2e-9 * b * b * fade):R},{(1e-3 * b) + (1e-9 * a * b * fade):R}\n");
            }
        }

        return text.ToString();
    }

    [BrowserTheory]
    [InlineData("ohmic", 1e-12)]
    [InlineData("quadratic", 2e-5)]  // the guard starts with a jump of the third derivative, which cubic pieces round off
    [InlineData("quadratic with a limit", 1e-6)]
    [InlineData("cubic", 1e-6)]
    [InlineData("saturating", 1e-6)]
    [InlineData("table", 1e-4)]
    public async Task The_page_evaluates_every_kind_of_law(string kind, double tolerance)
    {
        const double Largest = 2e5, Axis = 0.4;
        ISheetLaw law = Make(kind);
        LiveLaw live = new(law, Axis, Largest);
        LiveData data = new();
        data.Laws.Add(live);
        using JsonDocument json = JsonDocument.Parse(data.Json());
        IPage page = await report.Shared();
        List<double[]> fields = [];
        for (int k = 0; k < 60; k++)
        {
            double r = Largest * Math.Pow(10, -8.0 * ((k * 0.618) % 1)), angle = 2.399 * k;
            fields.Add([r * Math.Cos(angle), r * Math.Sin(angle)]);
        }

        double[][] shown = await page.EvaluateAsync<double[][]>(
            "([law, fields]) => { const l = new fieldsolve.Law(JSON.parse(law)), o = new Float64Array(6); return fields.map(f => { l.at(f[0], f[1], o, true); return Array.from(o); }); }",
            new object[] { json.RootElement.GetProperty("laws")[0].GetRawText(), fields });
        LabLaw lab = new(law, Axis);
        Assert.True(live.Error <= tolerance, $"The form says of itself that it is off by {live.Error:G3}.");
        for (int k = 0; k < fields.Count; k++)
        {
            double[] kx = [0], ky = [0], xx = [0], xy = [0], yx = [0], yy = [0];
            lab.Evaluate([fields[k][0]], [fields[k][1]], kx, ky, xx, xy, yx, yy);
            double size = double.Hypot(kx[0], ky[0]), slope = xx[0] + yy[0];
            Assert.Equal(kx[0], shown[k][0], tolerance * size);
            Assert.Equal(ky[0], shown[k][1], tolerance * size);
            double[] expected = [xx[0], xy[0], yx[0], yy[0]];
            for (int i = 0; i < 4; i++)
            {
                // One order less for the derivative of a piecewise cubic.
                Assert.Equal(expected[i], shown[k][2 + i], 100 * tolerance * slope);
            }
        }
    }

    [BrowserFact]
    public async Task The_page_reads_packed_numbers_of_every_size()
    {
        Random random = new(5);
        long[] numbers = [0, 1, -1, 1L << 42, -(1L << 42), .. Enumerable.Range(0, 700).Select(k => (long)((random.NextDouble() - 0.5) * Math.Pow(2, k % 43))), .. new long[300], 7];
        byte[] packed = BitPacker.Pack(numbers);
        double[] read = await (await report.Shared()).EvaluateAsync<double[]>(
            "([text, count]) => { const out = []; new fieldsolve.PackedNumbers(text).read(count, v => out.push(v)); return out; }", new object[] { Convert.ToBase64String(packed), numbers.Length });
        Assert.Equal(numbers, read.Select(v => (long)v));
        Assert.True(BitPacker.Pack(new long[9600]).Length < 1300, "Zeros take about a bit each.");
    }

    [Fact]
    public void The_laws_tested_are_all_there_are() =>
        Assert.Equal(["cubic", "ohmic", "quadratic", "saturating", "table"], LawCatalogue.Kinds.Select(k => k.Name).Order(StringComparer.Ordinal));

    /// <summary>
    /// Lightness after B. Ottosson's OKLab; deuteranopia and protanopia after F. Viénot, H. Brettel and J. D. Mollon, Color Res. Appl. 24 (1999) 243
    /// (matrices from memory).
    /// </summary>
    [BrowserTheory]
    [InlineData("shore")]
    [InlineData("ember")]
    [InlineData("dusk")]
    public async Task Colours_grow_lighter_in_even_steps_for_everybody(string name)
    {
        int[] table = await (await report.Shared()).EvaluateAsync<int[]>($"Array.from(fieldsolve.RAMPS.{name})");
        foreach (string eye in (string[])["all", "deuteranopia", "protanopia"])
        {
            double[] light = [.. Enumerable.Range(0, 256).Select(k => Lightness(Seen(Linear(table[3 * k]), Linear(table[(3 * k) + 1]), Linear(table[(3 * k) + 2]), eye)))];
            double whole = light[255] - light[0];
            Assert.True(whole > 0.55);
            for (int k = 0; k + 16 < 256; k += 8)
            {
                double share = (light[k + 16] - light[k]) / whole * 255 / 16;
                Assert.InRange(share, eye == "all" ? 0.85 : 0.3, eye == "all" ? 1.15 : 1.8);
            }
        }
    }

    [BrowserFact]
    public async Task Pictures_have_the_colours_of_the_page()
    {
        foreach ((string page, MapColours picture) in new[] { ("RAMPS.shore", MapColours.Shore), ("RAMPS.ember", MapColours.Ember), ("DIVERGING", MapColours.Diverging) })
        {
            int[] table = await (await report.Shared()).EvaluateAsync<int[]>($"Array.from(fieldsolve.{page})");
            for (int k = 0; k < 256; k++)
            {
                ScottPlot.Color c = picture.GetColor(k / 255.0);
                Assert.InRange(Math.Max(Math.Abs(c.R - table[3 * k]), Math.Max(Math.Abs(c.G - table[(3 * k) + 1]), Math.Abs(c.B - table[(3 * k) + 2]))), 0, 1);
            }
        }
    }

    private static double Linear(int v) => v / 255.0 <= 0.04045 ? v / 255.0 / 12.92 : Math.Pow(((v / 255.0) + 0.055) / 1.055, 2.4);

    private static double[] Seen(double r, double g, double b, string eye) => eye switch
    {
        "deuteranopia" => [(0.29275 * r) + (0.70725 * g), (0.29275 * r) + (0.70725 * g), (-0.02234 * r) + (0.02234 * g) + b],
        "protanopia" => [(0.11238 * r) + (0.88762 * g), (0.11238 * r) + (0.88762 * g), (0.00401 * r) - (0.00401 * g) + b],
        _ => [r, g, b],
    };

    private static double Lightness(double[] c)
    {
        double l = Math.Cbrt((0.4122214708 * c[0]) + (0.5363325363 * c[1]) + (0.0514459929 * c[2]));
        double m = Math.Cbrt((0.2119034982 * c[0]) + (0.6806995451 * c[1]) + (0.1073969566 * c[2]));
        double s = Math.Cbrt((0.0883024619 * c[0]) + (0.2817188376 * c[1]) + (0.6299787005 * c[2]));
        return (0.2104542553 * l) + (0.7936177850 * m) - (0.0040720468 * s);
    }
}
