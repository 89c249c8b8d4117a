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

    [Fact]
    public void A_key_before_the_first_header_goes_to_the_front_where_there_is_none_yet()
    {
        EditableToml text = new("# a device\n[sheet]\n");
        Assert.Equal("title = \"x\"\n# a device\n[sheet]\n", text.With("title", "\"x\"").Text);
        Assert.Equal("# a device\n[sheet]\nthickness = \"1 nm\"\n", text.With("sheet.thickness", "\"1 nm\"").Text);
        Assert.Equal("a = 1\nb = 2 # end\nc = 3\n", new EditableToml("a = 1\nb = 2 # end\n").With("c", "3").Text);
    }

    [Theory]
    [InlineData("sheet.")]
    [InlineData("")]
    [InlineData("law.µ")]
    [InlineData("tolerance.contacts.position")]
    [InlineData("contact[0].position")]
    public void A_path_that_names_no_place_is_refused(string path) =>
        Assert.Equal($"'{path}' names no value of the device file", Assert.Throws<LayoutEditException>(() => new EditableToml("[sheet]\n").With(path, "1")).Message);

    [Theory]
    [InlineData("p = {}", "p = { k = 1 }")]
    [InlineData("p = { }", "p = { k = 1 }")]
    [InlineData("p = {a = 2}", "p = {a = 2, k = 1 }")]
    [InlineData("p = { a = 2, } # last", "p = { a = 2, k = 1 } # last")]
    [InlineData("p = { a = { b = 1 } }", "p = { a = { b = 1 }, k = 1 }")]
    public void A_key_goes_into_braces_with_the_comma_that_is_missing(string text, string expected) => Assert.Equal(expected, new EditableToml(text).With("p.k", "1").Text);

    [Theory]
    [InlineData("p = { a = 1, b = 2, c = 3 }", "p.a", "p = { b = 2, c = 3 }")]
    [InlineData("p = { a = 1, b = 2, c = 3 }", "p.b", "p = { a = 1, c = 3 }")]
    [InlineData("p = { a = 1 , b = 2,  c = 3 }", "p.a", "p = { b = 2,  c = 3 }")]
    [InlineData("p = { a = 1, b = 2 , c = 3 }", "p.c", "p = { a = 1, b = 2  }")]
    [InlineData("p = { a = 1 }", "p.a", "p = {  }")]
    [InlineData("p = {a=1}", "p.a", "p = {}")]
    [InlineData("a = 1\nb = 2", "b", "a = 1\n")]
    [InlineData("[a]\nx = 1\n\n  \n\t\n[b]\ny = 2\n", "a", "[b]\ny = 2\n")]
    [InlineData("[a]\nx = 1\n[b]\ny = 2", "b", "[a]\nx = 1\n")]
    [InlineData("[a]\r\nx = 1\r\n\r\n[b]\r\n", "a", "[b]\r\n")]
    public void A_key_leaves_with_its_comma_or_its_line(string text, string path, string expected)
    {
        EditableToml without = new EditableToml(text).Without(path);
        Assert.Equal(expected, without.Text);
        Assert.Null(without.Find(path));
    }

    [Fact]
    public void A_key_inside_a_list_is_left_to_the_hand()
    {
        EditableToml text = new("list = [ { a = [1, 2] } ]\n");
        Assert.Equal("list = [ {  } ]\n", text.Without("list[0].a").Text);
        Assert.Contains("is written inside a list", Assert.Throws<LayoutEditException>(() => text.Without("list[0]")).Message, StringComparison.Ordinal);
        Assert.Contains("has no 'gone'", Assert.Throws<LayoutEditException>(() => text.Without("gone")).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Items_come_and_go_with_their_commas()
    {
        EditableToml text = new("l = [1,  2, 3] # three\n");
        Assert.Equal("l = [0, 1,  2, 3] # three\n", text.ItemBefore("l[0]", "0").Text);
        Assert.Equal("l = [1,  2, 3, 4] # three\n", text.ItemAfter("l[2]", "4").Text);
        Assert.Equal("l = [2, 3] # three\n", text.WithoutItem("l[0]").Text);
        Assert.Equal("l = [1,  3] # three\n", text.WithoutItem("l[1]").Text);
        Assert.Equal("l = [1,  2] # three\n", text.WithoutItem("l[2]").Text);
        Assert.Equal("l = [] # three\n", text.WithoutItem("l[2]").WithoutItem("l[1]").WithoutItem("l[0]").Text);
        foreach (string path in new[] { "l[3]", "l", "m[0]", "l[0]x" })
        {
            Assert.Equal($"the device file has no item '{path}'", Assert.Throws<LayoutEditException>(() => text.WithoutItem(path)).Message);
            Assert.Throws<LayoutEditException>(() => text.ItemBefore(path, "0"));
            Assert.Throws<LayoutEditException>(() => text.ItemAfter(path, "0"));
        }
    }

    [Theory]
    [InlineData("", null, "\n[b]\ny = 2\n")]
    [InlineData("x = 1", null, "x = 1\n\n[b]\ny = 2\n")]
    [InlineData("[a]\nx = 1", "a", "[a]\nx = 1\n\n[b]\ny = 2\n")]
    [InlineData("[a]\nx = 1\n[c]\n", "a", "[a]\nx = 1\n\n[b]\ny = 2\n[c]\n")]
    [InlineData("[a]\n", "z", "[a]\n\n[b]\ny = 2\n")]
    [InlineData("[a]\r\n", null, "[a]\r\n\r\n[b]\r\ny = 2\r\n")]
    public void A_table_is_added_behind_another_or_at_the_end(string text, string? after, string expected) =>
        Assert.Equal(expected, new EditableToml(text).Appended("[b]\ny = 2", after).Text);

    [Fact]
    public void A_table_is_replaced_with_what_stands_between_its_keys()
    {
        EditableToml text = new("[a]\r\nx = 1\r\n# inside\r\nz = 2 # end\r\n# below\r\n[b]\r\n");
        Assert.Equal("[c]\r\nq = 1\r\n# below\r\n[b]\r\n", text.Replaced("a", "[c]\nq = 1").Text);
        Assert.Equal("the device file has no table 'c'", Assert.Throws<LayoutEditException>(() => text.Replaced("c", "")).Message);
    }

    [Fact]
    public void Every_kind_of_value_and_key_is_found()
    {
        EditableToml text = new("day = 2026-12-02\non = true\nx = 1.5e3\nn = -3\n'a b' = 1\n\"c.d\" = 2\nl = [[1, 2], { k = 'v' }]\n[t.\"u v\"]\ns = 1\nw.\"x y\".z = 2\n[[r]]\n[[r]]\ns = 2\n");
        (string Path, string Kind, string Value)[] expected =
        [
            ("day", "other", "2026-12-02"), ("on", "flag", "true"), ("x", "number", "1.5e3"), ("n", "number", "-3"), ("a b", "number", "1"), ("c.d", "number", "2"), ("l", "list", ""),
            ("l[0]", "list", ""), ("l[0][0]", "number", "1"), ("l[0][1]", "number", "2"), ("l[1]", "table", ""), ("l[1].k", "text", "v"), ("t.u v.s", "number", "1"), ("t.u v.w.x y.z", "number", "2"),
            ("r[1].s", "number", "2"),
        ];
        Assert.Equal(expected, text.Pieces.Select(p => (p.Path, p.Kind, p.Value)));
        Assert.Equal(["", "t.u v", "r[0]", "r[1]"], text.Blocks.Select(b => b.Path));

        // The second of two keys of one name is the reader's fault to tell; the first is found.
        Assert.Equal("1", new EditableToml("k = 1\nk = 2\n").Find("k")!.Value);
        Assert.DoesNotContain(new EditableToml("= 3\n").Pieces, p => p.Path.Length > 0);
    }

    [Fact]
    public void A_place_leads_to_the_innermost_value()
    {
        EditableToml text = new("l = [[1, 2], 3]\n\nx = 1");
        Assert.Equal("l[0][1]", text.At(1, 10)!.Path);
        Assert.Equal("l[0]", text.At(1, 9)!.Path);
        Assert.Equal("l", text.At(1, 1)!.Path);
        Assert.Null(text.At(2, 1));
        Assert.Equal("x", text.At(3, 5)!.Path);
        Assert.Null(text.At(3, 6));
        Assert.Null(text.At(4, 1));
    }

    [Theory]
    [InlineData("a \"b\" \\ \n \u0001")]
    [InlineData("\r\t\u007f\0")]
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
