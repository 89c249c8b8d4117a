using System.Buffers.Binary;
using System.Globalization;
using System.Text.RegularExpressions;
using System.Xml.Linq;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using SkiaSharp;

namespace FieldSolve.Tests.PicturesTests;

public sealed class DrivePicturesTests : IDisposable
{
    private static readonly DriveResult Disc = SyntheticDrive.Make(rings: 8, mapSteps: [5, 10]);
    private readonly string folder = Directory.CreateTempSubdirectory("pictures-").FullName;

    public void Dispose() => Directory.Delete(folder, recursive: true);

    [Fact]
    public void Every_picture_is_written_in_both_formats_with_its_size_and_something_on_it()
    {
        IReadOnlyList<PictureFile> pictures = DrivePictures.Write(Disc, folder, CancellationToken.None);
        Assert.Equal(
            [
                "device", "curves", "even",
                "potential-0-deg", "field-0-deg", "sections-0-deg",
                "potential-30-deg", "field-30-deg", "sections-30-deg",
                "potential-60-deg", "field-60-deg", "sections-60-deg",
                "mesh", "convergence",
            ],
            pictures.Select(p => Path.GetFileNameWithoutExtension(p.PngPath)));
        foreach (PictureFile p in pictures)
        {
            byte[] png = File.ReadAllBytes(p.PngPath);
            Assert.Equal((int)MathF.Round(1.75f * p.Width), BinaryPrimitives.ReadInt32BigEndian(png.AsSpan(16)));
            Assert.Equal((int)MathF.Round(1.75f * p.Height), BinaryPrimitives.ReadInt32BigEndian(png.AsSpan(20)));
            Assert.True(InkShare(png) > 0.015, $"{p.Kind} is almost empty");

            string svg = File.ReadAllText(p.SvgPath);
            Assert.True(svg.Length < 1_000_000, $"{p.Kind}: {svg.Length} characters");
            XElement root = XDocument.Parse(svg).Root!;
            Assert.Equal($"0 0 {p.Width} {p.Height}", root.Attribute("viewBox")!.Value);
            Assert.DoesNotMatch("(?i)nan|inf", DrawnText(svg));
            Assert.True(root.Descendants().Count(e => e.Name.LocalName == "text") > 4, $"{p.Kind} has no text");
        }
    }

    [Fact]
    public void The_same_drive_gives_the_same_bytes()
    {
        IReadOnlyList<PictureFile> first = DrivePictures.Write(Disc, Path.Combine(folder, "a"), CancellationToken.None);
        IReadOnlyList<PictureFile> second = DrivePictures.Write(Disc, Path.Combine(folder, "b"), CancellationToken.None);
        foreach ((PictureFile a, PictureFile b) in first.Zip(second))
        {
            Assert.True(File.ReadAllBytes(a.PngPath).AsSpan().SequenceEqual(File.ReadAllBytes(b.PngPath)), a.PngPath);
            Assert.Equal(File.ReadAllText(a.SvgPath), File.ReadAllText(b.SvgPath));
        }
    }

    [Fact]
    public void A_map_shows_nothing_where_the_sheet_has_a_hole()
    {
        DriveResult ring = SyntheticDrive.Make(inner: 1.5e-6, rings: 6, mapSteps: [10]);
        PictureFile map = DrivePictures.Write(ring, folder, CancellationToken.None).First(p => p.Kind == "field");
        using SKBitmap bitmap = SKBitmap.Decode(map.PngPath);

        // The frame is 560 wide, begins 74 from the left and 40 from the top, and has the ring in its middle.
        int x = (int)(1.75 * (74 + 280)), y = (int)(1.75 * (40 + 280));
        Assert.Equal(SKColors.White, bitmap.GetPixel(x, y));
        Assert.NotEqual(SKColors.White, bitmap.GetPixel(x + (int)(1.75 * 180), y));
    }

    [Fact]
    public void What_a_drive_lacks_is_left_out()
    {
        DriveResult bare = Disc with { Rows = [], ReversedRows = [], Maps = [], Levels = [], Summaries = [] };
        Assert.Equal(["device", "mesh"], DrivePictures.Write(bare, folder, CancellationToken.None).Select(p => p.Kind));
    }

    [Fact]
    public void A_linear_law_has_no_picture_of_even_parts()
    {
        DriveResult linear = SyntheticDrive.Make(rings: 2, mapSteps: [], linear: true);
        Assert.Equal(
            ["device", "curves", "mesh", "convergence"], DrivePictures.Write(linear, folder, CancellationToken.None).Select(p => p.Kind));
    }

    [Fact]
    public void A_contact_in_both_pairs_shows_both_and_a_terminal_in_none_shows_its_bare_name()
    {
        Wiring first = Disc.Device.Wirings[0];
        DriveResult shared = Disc with
        {
            Device = Disc.Device with { Wirings = [first with { Across = new("across", first.Along!.Plus, first.Across!.Minus) }] },
            Maps = [],
        };
        string[] texts = Texts(DrivePictures.Write(shared, folder, CancellationToken.None)[0]);
        Assert.Contains("c6 (∥+, ⊥+)", texts);
        Assert.Contains("c10 (⊥−)", texts);
        Assert.Contains("c4", texts);
        Assert.Contains("p1", texts);
        Assert.Contains("I", texts);
    }

    [Fact]
    public void All_panels_of_the_device_have_the_same_ticks()
    {
        string[] texts = Texts(DrivePictures.Write(Disc with { Maps = [] }, folder, CancellationToken.None)[0]);
        Assert.All(texts.Where(t => double.TryParse(t.Replace('−', '-'), CultureInfo.InvariantCulture, out _)).CountBy(t => t), t => Assert.Equal(0, t.Value % 3));
        Assert.Contains("−2", texts);
    }

    [Fact]
    public void A_contact_round_a_whole_loop_has_no_arrow_and_its_name_stands_in_the_hole()
    {
        DriveResult ring = SyntheticDrive.Make(inner: 1.5e-6, rings: 2, mapSteps: []);
        Curve hole = Curve.Arc(default, 1.5e-6, 0, -2 * Math.PI);
        Contact[] contacts = [.. ring.Device.Contacts];
        contacts[6] = new("inner", ContactKind.Edge, 0, 0, [hole], hole.Length) { Middle = hole.At(0.5) };
        Assert.True(SheetFrame.IsLoop(contacts[6]));
        Assert.False(SheetFrame.IsLoop(contacts[0]));
        ring = ring with { Device = ring.Device with { Contacts = contacts, Wirings = [ring.Device.Wirings[0]] } };
        PictureFile picture = DrivePictures.Write(ring, folder, CancellationToken.None)[0];
        string[] texts = Texts(picture);
        Assert.Contains("inner (I+)", texts);
        Assert.DoesNotContain("I", texts);
    }

    [Fact]
    public void A_drive_at_zero_current_draws()
    {
        DriveResult zero = SyntheticDrive.Make(rings: 4, mapSteps: [0]);
        zero = zero with { Rows = [.. zero.Rows.Where(r => r.Current == 0)], ReversedRows = [] };
        Assert.Contains(DrivePictures.Write(zero, folder, CancellationToken.None), p => p.Kind == "field");
    }

    [Fact]
    public void Rows_without_readings_and_errors_without_numbers_draw()
    {
        DriveResult gaps = Disc with
        {
            Rows = [.. Disc.Rows.Select((r, k) => k % 3 == 0
                ? r with { Status = RowStatus.NotConverged, Readings = [] }
                : r with { Readings = [.. r.Readings.Select(v => v with { Error = double.PositiveInfinity, EvenError = double.NaN })] })],
            Maps = [],
        };
        foreach (PictureFile p in DrivePictures.Write(gaps, folder, CancellationToken.None))
        {
            Assert.DoesNotMatch("(?i)nan|inf", DrawnText(File.ReadAllText(p.SvgPath)));
        }
    }

    [Fact]
    public void A_cancelled_run_stops() =>
        Assert.ThrowsAny<OperationCanceledException>(() => DrivePictures.Write(Disc, folder, new CancellationToken(canceled: true)));

    [Fact]
    public void The_embedded_font_has_every_sign_the_pictures_use()
    {
        Assert.Equal("DejaVu Sans", EmbeddedFont.Typeface.FamilyName);
        using SKFont font = new(EmbeddedFont.Typeface, 12);
        Assert.All("µΩ²∥⊥−±°…·⁻⁰¹³⁴⁹\u202f", c => Assert.True(font.ContainsGlyph(c), $"U+{(int)c:X4}"));
    }

    private static string[] Texts(PictureFile picture) =>
        [.. XDocument.Load(picture.SvgPath).Descendants().Where(e => e.Name.LocalName == "text").Select(e => e.Value.Trim())];

    // Images are base64, where any letters may meet.
    private static string DrawnText(string svg) => Regex.Replace(svg, "base64,[^\"]*", "");

    private static double InkShare(byte[] png)
    {
        using SKBitmap bitmap = SKBitmap.Decode(png);
        int ink = bitmap.Pixels.Count(c => c.Red + c.Green + c.Blue < 700);
        return (double)ink / bitmap.Pixels.Length;
    }
}
