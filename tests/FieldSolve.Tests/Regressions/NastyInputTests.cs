using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.RegressionTests;

/// <summary>Input that once hung the reader, got through it, or was answered with a NaN.</summary>
public sealed class NastyInputTests : IDisposable
{
    private const string Outline = """
        [sheet]
        outline = { file = "flake.geojson", unit = "um" }
        [[contact]]
        name = "s"
        edge = { from = ["0 um", "1 um"], to = ["0 um", "5 um"] }
        [[contact]]
        name = "d"
        edge = { from = ["8 um", "1 um"], to = ["8 um", "5 um"] }

        """ + DeviceTexts.Rest;

    private readonly string folder = Directory.CreateTempSubdirectory("nasty-").FullName;

    public void Dispose() => Directory.Delete(folder, true);

    [PosixFact]
    public void A_device_without_end_is_no_outline()
    {
        AssertOnly(Outline.Replace("flake.geojson", "/dev/zero", StringComparison.Ordinal), 2, 20, "no plain file");
        File.CreateSymbolicLink(Path.Combine(folder, "flake.geojson"), "/dev/zero");
        AssertOnly(Outline, 2, 20, "no plain file");
    }

    // Its powers once overflowed into a law without current.
    [Theory]
    [InlineData("1e300")]
    [InlineData("101")]
    [InlineData("0.5")]
    public void An_exponent_beyond_any_corner_is_refused(string sharpness) => AssertOnly(
        DeviceTexts.Disc.Replace("kind = \"ohmic\"", $"kind = \"saturating\"\nfield_a = \"1 kV/m\"\nfield_b = \"1 kV/m\"\nsharpness = {sharpness}", StringComparison.Ordinal), 8, 13, "from 1 to 100");

    // Answered once with error bars a thousand times too small.
    [Theory]
    [InlineData("\"4 mS\"", "\"40 S\"", "factor of 4E+04")]
    [InlineData("\"1 mS\"", "\"1 mS\"\nhall = \"1 S\"", "is 500")]
    public void A_sheet_that_no_mesh_resolves_is_refused(string old, string text, string fragment) =>
        AssertOnly(DeviceTexts.Disc.Replace(old, text, StringComparison.Ordinal), 4, 1, fragment);

    // One wild value once sent the search for the guard to a field of zero, and the reader out with an exception.
    [Fact]
    public void A_table_with_a_wild_value_is_refused()
    {
        string table = File.ReadAllText(Path.Combine(EndToEndTests.Repository.Root, "meshes", "bar-table.csv"));
        File.WriteAllText(Path.Combine(folder, "law.csv"), table.Replace("3000,-6000,7.52467,-5.94951", "3000,-6000,7.52467,-2147483649", StringComparison.Ordinal));
        string text = DeviceTexts.Bar.ReplaceLineEndings("\n").Replace("kind = \"ohmic\"\na = \"4 mS\"\nb = \"1 mS\"", "kind = \"table\"\nfile = \"law.csv\"", StringComparison.Ordinal);
        AssertOnly(text, 3, 1, "not positive definite");
    }

    // Each is what the parser of TOML says in its own words; all must say what would be right.
    [Theory]
    [InlineData("a = 01", "0")]
    [InlineData("a = 1_", "number")]
    [InlineData("a = \"\\q\"", "single quotes")]
    [InlineData("a = \"\\x4\"", "single quotes")]
    [InlineData("a = 0xG", "quotes")]
    [InlineData("a = 1.", "quotes")]
    [InlineData("a = 1e", "quotes")]
    [InlineData("a = \"\u0007\"", "remove it")]
    [InlineData("a.", "key = value")]
    [InlineData("a.b", "key = value")]
    [InlineData("a = {b", "key = value")]
    [InlineData("[a].b = 1", "key = value")]
    public void A_syntax_fault_says_what_would_be_right(string line, string fragment)
    {
        Fault fault = DeviceFile.Parse(DeviceTexts.Disc + "\n" + line + "\n", "d.toml", "").Faults[0];
        Assert.Equal(("d.toml", 27), (fault.File, fault.Line));
        Assert.Contains(fragment, fault.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void An_empty_outline_file_is_said_to_be_empty()
    {
        File.WriteAllText(Path.Combine(folder, "flake.geojson"), "");
        AssertOnly(Outline, 2, 20, "is empty");
    }

    [Fact]
    public void An_outline_whose_two_halves_cancel_is_said_to_cross_itself()
    {
        File.WriteAllText(
            Path.Combine(folder, "flake.geojson"), """{ "type": "Polygon", "coordinates": [[[0, 0], [8, 8], [8, 0], [0, 8], [0, 0]]] }""");
        AssertOnly(Outline, 2, 20, "crosses itself");
    }

    [Theory]
    [InlineData("[law]", "[law]\naxis = \"1e300 deg\"", 5, 8)]
    [InlineData("\"180 deg\"", "\"1e300 deg\"", 10, 15)]
    public void An_angle_of_countless_turns_is_a_slip(string old, string text, int line, int column) =>
        AssertOnly(DeviceTexts.Disc.Replace(old, text, StringComparison.Ordinal), line, column, "360000 deg");

    [Theory]
    [InlineData("\u200b")]
    [InlineData("\u202e")]
    public void A_name_with_a_character_that_cannot_be_seen_is_refused(string unseen) =>
        Assert.Contains(
            DeviceFile.Parse(DeviceTexts.Disc.Replace("name = \"p\"", $"name = \"p{unseen}\"", StringComparison.Ordinal), "d.toml", folder).Faults,
            f => f.Line == 18 && f.Message.Contains("cannot be seen", StringComparison.Ordinal));

    [Fact]
    public void A_table_of_numbers_that_would_overflow_is_refused_where_they_stand()
    {
        string rows = string.Concat(
            from a in new[] { -2, -1, 1, 2 }
            from b in new[] { -2, -1, 1, 2 }
            select FormattableString.Invariant($"{a}e300,{b}e300,{a}e300,{b}e300\n"));
        TableLawReading reading = TableLaw.Read("ea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n" + rows);
        Assert.Equal(16, reading.Faults.Count);
        Assert.All(reading.Faults, f => Assert.Contains("too large", f.Message, StringComparison.Ordinal));
        Assert.Equal((2, 1), (reading.Faults[0].Line, reading.Faults[0].Column));
    }

    private void AssertOnly(string text, int line, int column, string fragment)
    {
        Fault fault = Assert.Single(DeviceFile.Parse(text, "d.toml", folder).Faults);
        Assert.Equal(("d.toml", line, column), (fault.File, fault.Line, fault.Column));
        Assert.Contains(fragment, fault.Message, StringComparison.Ordinal);
    }
}
