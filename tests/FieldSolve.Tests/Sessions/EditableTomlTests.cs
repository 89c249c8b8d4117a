using FieldSolve.Sessions;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>A device file is changed in place: every character that was not named stays.</summary>
public class EditableTomlTests
{
    private const string Text = "\uFEFF# µ before everything\r\ntitle = 'Äß' # kept\r\n\r\n[sheet]\r\n  disc = { diameter = \"8 µm\" }   # the µ counts as one\r\n"
        + "[[contact]]\r\nname = \"n\"\r\nedge = { at = \"0 deg\" , width=\"1 um\" }\r\n# between\r\n[[contact]]\r\nname = \"m\"\r\nedge.at = \"90 deg\"\r\nedge.width = \"1 um\"\r\n\r\n"
        + "[[wiring]]\r\nalong = [ \"n\",\r\n  \"m\" ] # two\r\n[drive]\r\ncurrent = { from = \"0 uA\", to = \"1 uA\", steps = 3 }\r\nboth_signs = true";

    [Theory]
    [InlineData("title", "\"New\"", "'Äß'")]
    [InlineData("sheet.disc.diameter", "\"9 um\"", "\"8 µm\"")]
    [InlineData("contact[0].edge.width", "\"2 um\"", "\"1 um\"")]
    [InlineData("contact[1].edge.at", "\"80 deg\"", "\"90 deg\"")]
    [InlineData("wiring[0].along[1]", "\"n\"", "\"m\" ]")]
    [InlineData("drive.current.steps", "5", "3 }")]
    [InlineData("drive.both_signs", "false", "true")]
    public void A_value_is_replaced_and_nothing_else(string path, string literal, string old)
    {
        EditableToml text = new(Text), changed = text.With(path, literal);
        TomlPiece piece = text.Find(path)!;
        Assert.StartsWith(Text[piece.Start..piece.End], old, StringComparison.Ordinal);
        Assert.Equal(Text[..piece.Start] + literal + Text[piece.End..], changed.Text);
        Assert.Equal(Text, changed.With(path, Text[piece.Start..piece.End]).Text);
    }

    [Fact]
    public void A_new_key_goes_to_the_end_of_its_table_with_the_line_ends_of_the_file()
    {
        EditableToml text = new(Text);
        Assert.Contains("# the µ counts as one\r\ndead_edge = \"1 nm\"\r\n[[contact]]", text.With("sheet.dead_edge", "\"1 nm\"").Text, StringComparison.Ordinal);
        Assert.Contains("steps = 3, more = 1 }", text.With("drive.current.more", "1").Text, StringComparison.Ordinal);
        Assert.EndsWith("both_signs = true\r\n\r\n[mesh]\r\nerror = 1e-3\r\n", text.With("mesh.error", "1e-3").Text, StringComparison.Ordinal);
        Assert.Contains("edge.width = \"1 um\"\r\nedge.more = 1\r\n\r\n[[wiring]]", text.With("contact[1].edge.more", "1").Text, StringComparison.Ordinal);
        Assert.Equal("a = { b.c = 1, b.d = 2 }", new EditableToml("a = { b.c = 1 }").With("a.b.d", "2").Text);
        Assert.Throws<LayoutEditException>(() => text.With("contact[7].edge", "1"));
        Assert.Throws<LayoutEditException>(() => text.With("law.a b", "1"));
    }

    [Fact]
    public void A_table_and_a_key_are_removed_with_their_lines_alone()
    {
        EditableToml text = new(Text);
        string without = text.Without("contact[0]").Text;
        Assert.Contains("counts as one\r\n# between\r\n[[contact]]\r\nname = \"m\"", without, StringComparison.Ordinal);
        Assert.EndsWith("steps = 3 }\r\n", text.Without("drive.both_signs").Text, StringComparison.Ordinal);
        Assert.Contains("current = { from = \"0 uA\", to = \"1 uA\" }\r\n", text.Without("drive.current.steps").Text, StringComparison.Ordinal);
        Assert.Contains("edge = { width=\"1 um\" }\r\n", text.Without("contact[0].edge.at").Text, StringComparison.Ordinal);
        Assert.Contains("along = [ \"m\" ] # two", text.WithoutItem("wiring[0].along[0]").Text.Replace("\r\n  ", "", StringComparison.Ordinal), StringComparison.Ordinal);
        Assert.Contains("along = [ \"n\" ] # two", text.WithoutItem("wiring[0].along[1]").Text, StringComparison.Ordinal);
        Assert.Contains("name = \"m\"\r\n\r\n[[wiring]]", text.Without("contact[1].edge").Text, StringComparison.Ordinal);
        Assert.Equal("a = { d = 2 }", new EditableToml("a = { b.c = 1, d = 2 }").Without("a.b.c").Text);
        Assert.Throws<LayoutEditException>(() => text.Without("wiring[0].along[0]"));
        Assert.Throws<LayoutEditException>(() => text.Without("law"));
    }

    [Fact]
    public void A_place_of_a_fault_leads_to_the_value_it_is_about()
    {
        // Line 8, column 16 is the value of contact[0].edge.at.
        Assert.Equal("contact[0].edge.at", new EditableToml(Text).At(8, 16)!.Path);
        Assert.Null(new EditableToml(Text).At(1, 3));
        Assert.Null(new EditableToml(Text).At(400, 1));
    }

    [Theory]
    [InlineData("a \"b\" \\ \n \u0001")]
    [InlineData("µ ' ]")]
    public void Any_text_is_quoted_so_that_it_reads_back(string value) =>
        Assert.Equal(value, new EditableToml("x = " + EditableToml.Quoted(value)).Find("x")!.Value);

    [Theory]
    [InlineData("180 deg", Math.PI / 3, 1e-4, "60 deg")]
    [InlineData("3 rad", 0.12345, 1e-3, "0.123 rad")]
    [InlineData("-2.5um", 1.23456e-6, 1e-9, "1.235 um")]
    [InlineData("8 µm", -1e-13, 1e-9, "0 µm")]
    [InlineData("nonsense", 2e-6, 1e-9, "2 um")]
    [InlineData(null, 2e-6, 1e-9, "2 um")]
    public void A_quantity_keeps_the_unit_of_its_place(string? old, double value, double resolution, string expected) =>
        Assert.Equal(expected, QuantityText.Like(old, value, resolution, "um"));
}
