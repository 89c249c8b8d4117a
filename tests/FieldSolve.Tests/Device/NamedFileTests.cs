using System.Text;
using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>Device files on disk, and the outlines, pads and tables they name.</summary>
public sealed class NamedFileTests : IDisposable
{
    private const string Flake = """
        { "type": "FeatureCollection", "features": [
          { "type": "Feature", "properties": { "name": "flake" }, "geometry": { "type": "Polygon", "coordinates": [
            [[0, 0], [10, 0], [10, 6], [0, 6], [0, 0]],
            [[4, 2], [6, 2], [6, 3], [4, 3], [4, 2]] ] } } ] }
        """;

    private const string Device = """
        [sheet]
        outline = { file = "flake.geojson", unit = "um" }
        [[contact]]
        name = "s"
        edge = { from = ["0 um", "1 um"], to = ["0 um", "5 um"] }
        [[contact]]
        name = "d"
        edge = { from = ["10 um", "1 um"], to = ["10 um", "5 um"] }

        """ + DeviceTexts.Rest;

    private readonly string folder = Directory.CreateTempSubdirectory("device-test-").FullName;

    public void Dispose() => Directory.Delete(folder, true);

    [Theory]
    [InlineData("flake.geojson", Flake)]
    [InlineData("flake.wkt", "POLYGON ((0 0, 10 0, 10 6, 0 6, 0 0),\n (4 2, 4 3, 6 3, 6 2, 4 2))")]
    [InlineData("flake.wkt", "multipolygon z (((0 0 1, 10 0 1, 10 6 1, 0 6 1, 0 0 1), (4 2 0, 4 3 0, 6 3 0, 6 2 0, 4 2 0)), ((90 0, 91 0, 91 1, 90 0)))")]
    public void An_outline_with_a_hole(string name, string text)
    {
        Write(name, text);
        SheetDevice d = DeviceTexts.Good(Device.Replace("flake.geojson", name, StringComparison.Ordinal), folder);
        Assert.Equal("outline", d.Shape);
        Assert.Equal(2, d.Drawn.Count);
        Assert.Equal(4e-6, d.Named("s").Width, 1e-15);
        Assert.Contains(new Point2(10e-6, 6e-6), d.Domain.Vertices);
        Assert.Equal(32e-6 + 6e-6, d.Domain.Edges.Sum(e => e.Curve.Length), 1e-15);
    }

    // The hole runs clockwise in the domain; a shift is counter-clockwise about the hole's middle.
    [Fact]
    public void A_contact_on_a_hole_is_shifted_counter_clockwise_about_the_hole()
    {
        Write("flake.geojson", Flake);
        SheetDevice d = DeviceTexts.Good(Device + """
            [[contact]]
            name = "h"
            edge = { from = ["4.5 um", "3 um"], to = ["5.5 um", "3 um"] }
            shift = "0.25 um"
            """, folder);
        Assert.True(Point2.Distance(new(4.75e-6, 3e-6), d.Named("h").Middle) < 1e-13);
    }

    [Fact]
    public void Pads_are_found_by_the_name_of_their_feature_in_the_unit_of_the_outline()
    {
        Write("flake.geojson", Flake);
        Write("pads.geojson", """
            { "type": "FeatureCollection", "features": [
              { "type": "Feature", "properties": { "name": "a" }, "geometry": { "type": "Polygon", "coordinates": [[[1,1],[2,1],[2,2],[1,2],[1,1]]] } },
              { "type": "Feature", "properties": { "name": "b" }, "geometry": { "type": "Polygon", "coordinates": [[[8,1],[9,1],[9,2],[8,2],[8,1]]] } } ] }
            """);
        SheetDevice d = DeviceTexts.Good(Device + "[[contact]]\nname = \"x\"\npad = { file = \"pads.geojson\", name = \"b\" }\n", folder);
        Assert.True(Point2.Distance(new(8.5e-6, 1.5e-6), d.Named("x").Middle) < 1e-13);
        AssertOnly(
            Device + "[[contact]]\nname = \"x\"\npad = { file = \"pads.geojson\", name = \"bb\" }\n", "d.toml", 19, 39, "no polygon named 'bb'; there are 'a' and 'b'");
    }

    [Theory]
    [InlineData("{ \"type\": \"Polygon\",\n \"coordinates\": [[[0,0],[1,,0]]] }", 2, 28, "not valid JSON")]
    [InlineData("POLYGON ((0 0, 10 0,\n 10 x))", 2, 5, "expected a")]
    [InlineData("POLYGON ((0 0, 10 0, 10 6))", 1, 10, "not closed")]
    [InlineData("POLYGON EMPTY", 1, 9, "empty")]
    [InlineData("LINESTRING (0 0, 1 1)", 1, 1, "neither GeoJSON nor WKT")]
    public void Faults_inside_an_outline_are_placed_in_that_file(string text, int line, int column, string fragment)
    {
        Write("flake.geojson", text);
        AssertOnly(Device, Path.Combine(folder, "flake.geojson"), line, column, fragment);
    }

    [Theory]
    [InlineData("[[0,0],[10,6],[10,0],[0,4],[0,0]]", "crosses itself")]
    [InlineData("[[0,0],[10,0],[0,0]]", "under three corners")]
    [InlineData("[[0,0],[10,0],[10,6],[0,6],[0,0]],[[20,20],[21,20],[21,21],[20,20]]", "hole lies outside")]
    [InlineData("[[0,0],[10,0],[10,6],[0,6],[1,1]]", "not closed")]
    [InlineData("[[0,0],[1e12,0],[10,6],[0,6],[0,0]]", "beyond 1 km")]
    [InlineData("[[0,0],[\"a\",0],[10,6],[0,6],[0,0]]", "finite number")]
    [InlineData("[[0,0],[1e999,0],[10,6],[0,6],[0,0]]", "finite number")]
    [InlineData("[[0],[1,0],[10,6],[0,6],[0,0]]", "two numbers")]
    public void Outlines_that_make_no_sheet(string rings, string fragment)
    {
        Write("flake.geojson", $$"""{ "type": "Polygon", "coordinates": [{{rings}}] }""");
        AssertOnly(Device, "d.toml", 2, 20, fragment);
    }

    [Theory]
    [InlineData("""{ "type": "Point", "coordinates": [0, 0] }""", "holds no polygon")]
    [InlineData("""{ "kind": 1 }""", "no GeoJSON")]
    public void Files_that_hold_no_polygon(string text, string fragment)
    {
        Write("flake.geojson", text);
        AssertOnly(Device, "d.toml", 2, 20, fragment);
    }

    [Fact]
    public void An_outline_needs_its_file_and_its_unit()
    {
        AssertOnly(Device, "d.toml", 2, 20, "does not exist");
        Write("flake.geojson", Flake);
        AssertOnly(Device.Replace(", unit = \"um\"", "", StringComparison.Ordinal), "d.toml", 2, 11, "needs 'unit'");
        AssertOnly(Device.Replace("\"um\"", "\"mA\"", StringComparison.Ordinal), "d.toml", 2, 44, "no unit of length");
        AssertOnly(Device.Replace("\"flake.geojson\"", "\".\"", StringComparison.Ordinal), "d.toml", 2, 20, "is a directory");
        File.WriteAllBytes(Path.Combine(folder, "flake.geojson"), [0xFF, 0xFE, 0x00]);
        AssertOnly(Device, "d.toml", 2, 20, "not UTF-8");
    }

    [Fact]
    public void A_table_law_reads_its_file_and_reports_its_faults_there()
    {
        Write("law.csv", "nonsense\n");
        string text = DeviceTexts.Bar.Replace("kind = \"ohmic\"\na = \"4 mS\"\nb = \"1 mS\"", "kind = \"table\"\nfile = \"law.csv\"", StringComparison.Ordinal);
        DeviceReading reading = DeviceFile.Parse(text, "d.toml", folder);
        Assert.NotEmpty(reading.Faults);
        Assert.All(reading.Faults, f => Assert.Equal(Path.Combine(folder, "law.csv"), f.File));
    }

    [Fact]
    public void A_device_file_on_disk()
    {
        Write("flake.geojson", Flake);
        Write("device.toml", "\uFEFF" + Device);
        DeviceReading reading = DeviceFile.Read(Path.Combine(folder, "device.toml"));
        Assert.Empty(reading.Faults);
        byte[] bytes = File.ReadAllBytes(Path.Combine(folder, "device.toml"));
        Assert.Equal(Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(bytes)), reading.Device!.Sha256);
    }

    [Fact]
    public void What_is_no_device_file()
    {
        Assert.Contains("does not exist", Only(Path.Combine(folder, "absent.toml")).Message, StringComparison.Ordinal);
        Assert.Contains("directory", Only(folder).Message, StringComparison.Ordinal);
        Assert.Contains("does not exist", Only(Path.Combine(folder, "no", "such.toml")).Message, StringComparison.Ordinal);
        Write("empty.toml", "");
        Assert.Contains("empty", Only(Path.Combine(folder, "empty.toml")).Message, StringComparison.Ordinal);
        byte[] noise = new byte[100_000];
        new Random(1).NextBytes(noise);
        File.WriteAllBytes(Path.Combine(folder, "noise.toml"), noise);
        Assert.Contains("not a text file", Only(Path.Combine(folder, "noise.toml")).Message, StringComparison.Ordinal);
        File.WriteAllBytes(Path.Combine(folder, "large.toml"), new byte[10_000_000]);
        Assert.Contains("larger than 200 kB", Only(Path.Combine(folder, "large.toml")).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Bytes_that_are_not_utf8_are_placed_and_the_other_lines_are_read()
    {
        byte[] bytes = Encoding.Latin1.GetBytes(DeviceTexts.Disc.Replace("\"8 um\"", "\"8 \u00B5m\"", StringComparison.Ordinal).Replace("steps = 11", "steps = 0", StringComparison.Ordinal));
        File.WriteAllBytes(Path.Combine(folder, "latin.toml"), bytes);
        IReadOnlyList<Fault> faults = DeviceFile.Read(Path.Combine(folder, "latin.toml")).Faults;
        Assert.Equal([(3, 24), (26, 51)], faults.Select(f => (f.Line, f.Column)));
        Assert.Contains("UTF-8", faults[0].Message, StringComparison.Ordinal);
    }

    private static Fault Only(string path)
    {
        Fault fault = Assert.Single(DeviceFile.Read(path).Faults);
        Assert.Equal((path, 1, 1), (fault.File, fault.Line, fault.Column));
        return fault;
    }

    private void AssertOnly(string text, string file, int line, int column, string fragment)
    {
        DeviceReading reading = DeviceFile.Parse(text, "d.toml", folder);
        Assert.True(reading.Faults.Count == 1, string.Join('\n', reading.Faults));
        Fault fault = reading.Faults[0];
        Assert.Equal((file, line, column), (fault.File, fault.Line, fault.Column));
        Assert.Contains(fragment, fault.Message, StringComparison.Ordinal);
    }

    private void Write(string name, string text) => File.WriteAllText(Path.Combine(folder, name), text);
}
