using FieldSolve.Device;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>Each file has one thing wrong; that, and nothing that follows from it, must be reported.</summary>
public class BadFileTests
{
    /// <summary>What stands in the disc's file, what to put there instead, where the fault is and a part of its message.</summary>
    public static TheoryData<string, string, int, int, string> OnDisc => new()
    {
        { "diameter = \"8 um\"", "diametre = \"8 um\"", 3, 10, "did you mean 'diameter'" },
        { "disc = {", "dics = {", 3, 1, "did you mean 'disc'" },
        { "[law]", "[laws]", 4, 1, "did you mean 'law'" },
        { "[drive]", "[drvie]", 25, 1, "did you mean 'drive'" },
        { "[[wiring]]", "[[wirings]]", 20, 1, "did you mean 'wiring'" },
        { "kind = \"ohmic\"", "kind = \"ohmig\"", 5, 8, "did you mean 'ohmic'" },
        { "kind = \"ohmic\"\n", "", 4, 1, "needs 'kind'" },
        { "a = \"4 mS\"\n", "", 4, 1, "needs 'a'" },
        { "\"4 mS\"", "\"4 mA\"", 6, 5, "\"4 mA\" is a current; a sheet conductance is wanted" },
        { "\"4 mS\"", "\"250 ohm\"", 6, 5, "a sheet conductance is wanted, for example \"4 mS\"; 1 over this is \"4 mS\"" },
        { "[[contact]]\nname = \"w\"", "[[contacts]]\nname = \"w\"", 8, 1, "one contact is written [[contact]], without the s" },
        { "[[point]]", "[[contact]]\nring = 3\nwidth = \"1 nm\"\nprefix = \"c\"\n[[point]]", 17, 1, "is written [[contacts]], with an s" },
        { "title = \"Disc\"", "title = True", 1, 9, "'True' is no value; write true or false, in small letters" },
        { "\"4 mS\"", "4e-3", 6, 5, "4e-3 has no unit; a sheet conductance is wanted, for example \"4 mS\"" },
        { "\"4 mS\"", "\"4\"", 6, 5, "\"4\" has no unit" },
        { "\"4 mS\"", "\"0 mS\"", 6, 5, "greater than zero" },
        { "\"4 mS\"", "\"-4 mS\"", 6, 5, "greater than zero" },
        { "\"4 mS\"", "\"nan mS\"", 6, 5, "finite" },
        { "\"4 mS\"", "inf", 6, 5, "no unit" },
        { "\"4 mS\"", "\"4 furlong\"", 6, 5, "unknown unit 'furlong'" },
        { "\"4 mS\"", "4 mS", 6, 7, "quotes" },
        { "\"4 mS\"", "\"4 mS", 6, 9, "closing quote" },
        { "a = \"4 mS\"", "a = \"4 mS\\", 6, 1, "a backslash ends the text" },
        { "a = \"4 mS\"", "a \"4 mS\"", 6, 3, "'=' is missing" },
        { "[law]", "[law", 4, 5, "closing ']'" },
        { "title = \"Disc\"", "title = 5", 1, 9, "'title' is a number" },
        { "title = \"Disc\"", "title = \"Disc\"\ntitle = \"Again\"", 2, 1, "'title' is set twice" },
        { "\"8 um\"", "\"0 um\"", 3, 21, "greater than zero" },
        { "\"8 um\"", "\"8 km\"", 3, 21, "greater than zero (1 fm to 1 km)" },
        { "\"8 um\"", "\"8,5 um\"", 3, 21, "decimal point" },
        { "\"8 um\" }", "\"8 um\" }\nring = { inner = \"1 um\", outer = \"4 um\" }", 4, 1, "one shape" },
        { "\"8 um\" }", "\"8 um\" }\ndead_edge = \"4 um\"", 4, 13, "leaves nothing of the sheet" },
        { "disc = { diameter = \"8 um\" }", "ring = { inner = \"4 um\", outer = \"4 um\" }", 3, 34, "larger than the inner" },
        { "disc = { diameter = \"8 um\" }", "disc = \"8 um\"", 3, 8, "'disc' is text; write disc = {" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"175 deg\", width = \"0.7 um\" }", 13, 8, "'e' overlaps 'w'" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"0 deg\", width = \"26 um\" }", 13, 8, "more than the 25.1327 um of its rim" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"0 deg\", width = \"0 um\" }", 13, 32, "greater than zero" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"0 deg\" }", 13, 8, "needs 'width'" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"0 deg\", widht = \"0.7 um\" }", 13, 24, "did you mean 'width'" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = 0, width = \"0.7 um\" }", 13, 15, "0 has no unit; an angle is wanted" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ end = \"left\" }", 13, 10, "a disc has no ends" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ rim = \"inner\" }", 13, 10, "for a ring" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ at = \"0 deg\", width = \"1 um\", end = \"left\" }", 13, 40, "cannot stand together" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ }", 13, 8, "'edge' needs { at, width } or { from, to }" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ from = [\"4 um\", \"0 um\"], to = [\"2 um\", \"1 um\"] }", 13, 40, "off the edge" },
        { "{ at = \"0 deg\", width = \"0.7 um\" }", "{ from = [\"4 um\", \"0 um\"], to = [\"4 um\", \"0 um\"] }", 13, 40, "the same place" },
        { "edge = { at = \"0 deg\", width = \"0.7 um\" }\n", "", 11, 1, "needs 'edge' or 'pad'" },
        { "name = \"e\"", "name = \"w\"", 12, 8, "the name 'w' is already taken in line 9" },
        { "name = \"p\"", "name = \"n\"", 18, 8, "the name 'n' is already taken in line 15" },
        { "name = \"n\"", "name = \"\"", 15, 8, "'name' is empty" },
        { "name = \"n\"", "name = \"a\\tb\"", 15, 8, "control character" },
        { "at = [\"1 um\", \"0 um\"]", "at = [\"1 um\"]", 19, 6, "two lengths x and y" },
        { "at = [\"1 um\", \"0 um\"]", "at = [\"9 um\", \"0 um\"]", 19, 6, "lies off the sheet" },
        { "source = \"w\"", "source = \"e\"", 23, 9, "same contact" },
        { "source = \"w\"", "source = \"p\"", 22, 10, "is a point" },
        { "source = \"w\"", "source = \"west\"", 22, 10, "unknown contact 'west'; there are 'w', 'e' and 'n'" },
        { "source = \"w\"\n", "", 20, 1, "needs 'source'" },
        { "along = [\"n\", \"p\"]", "along = [\"n\", \"n\"]", 24, 15, "names 'n' twice" },
        { "along = [\"n\", \"p\"]", "along = [\"n\", \"q\"]", 24, 15, "unknown contact or point 'q'" },
        { "along = [\"n\", \"p\"]", "along = [\"n\"]", 24, 9, "two names" },
        { "along = [\"n\", \"p\"]", "pairs = { across = [\"n\", \"p\"] }", 24, 11, "meaning of its own" },
        { "steps = 11", "steps = 0", 26, 51, "it must be from 1 to 10000" },
        { "steps = 11", "steps = 2.5", 26, 51, "whole number" },
        { "steps = 11", "steps = 1", 26, 51, "counts both ends" },
        { "steps = 11", "step = 11", 26, 43, "did you mean 'steps'" },
        { "to = \"500 uA\"", "to = \"500 uV\"", 26, 33, "\"500 uV\" is a voltage; a current is wanted" },
        { "steps = 11 }", "steps = 11 }\nfrequency = []", 27, 13, "empty list" },
        { "steps = 11 }", "steps = 11 }\nfrequency = [\"1 Hz\", \"0 Hz\"]", 27, 22, "greater than zero" },
        { "steps = 11 }", "steps = 11 }\nboth_signs = \"yes\"", 27, 14, "true or false" },
        { "steps = 11 }", "steps = 11 }\n[turn]\naround = \"c\"", 28, 10, "no ring" },
        { "steps = 11 }", "steps = 11 }\n[mesh]\nerror = \"1e-4\"", 28, 9, "without unit and quotes" },
        { "steps = 11 }", "steps = 11 }\n[mesh]\nerror = 0", 28, 9, "between 1e-12 and 0.5" },
        { "steps = 11 }", "steps = 11 }\n[caution]\npower_density = \"1 W\"", 28, 17, "\"1 W\" is a power; a power density is wanted" },
        { "[[contact]]\nname = \"n\"", "[[contact]]\nresistivity = \"1e-7 ohm cm^2\"\nname = \"n\"", 15, 1, "is for a pad" },
        { "edge = { at = \"90 deg\", width = \"0.7 um\" }", "edge = { at = \"90 deg\", width = \"0.7 um\" }\npad = []", 17, 1, "remove one" },
        { "edge = { at = \"90 deg\", width = \"0.7 um\" }", "pad = [[\"0 um\", \"0 um\"], [\"1 um\", \"0 um\"]]", 16, 7, "at least three corners" },
        {
            "edge = { at = \"90 deg\", width = \"0.7 um\" }",
            "pad = [[\"9 um\", \"0 um\"], [\"10 um\", \"0 um\"], [\"9 um\", \"1 um\"]]", 16, 7, "outside the sheet"
        },
        {
            "edge = { at = \"90 deg\", width = \"0.7 um\" }",
            "pad = [[\"-2 um\", \"0 um\"], [\"-1 um\", \"1 um\"], [\"-1 um\", \"0 um\"], [\"-2 um\", \"1 um\"]]", 16, 7, "crosses itself"
        },
        {
            "edge = { at = \"90 deg\", width = \"0.7 um\" }",
            "pad = [[\"-2 um\", \"0 um\"], [\"-1 um\", \"0 um\"], [\"-1 um\", \"1 um\"]]\nresistance = \"0 ohm um\"", 17, 1, "is for an edge contact"
        },
        { "edge = { at = \"90 deg\", width = \"0.7 um\" }", "pad = { file = \"absent.geojson\", name = \"n\", unit = \"um\" }", 16, 16, "does not exist" },
        { "[[contact]]\nname = \"n\"", "[contact]\nname = \"n\"", 14, 1, "'contact' is set twice" },
        { "[[point]]", "[[contacts]]\nring = 12\nwidth = \"3 um\"\nprefix = \"c\"\n[[point]]", 18, 8, "do not fit" },
        { "[[point]]", "[[contacts]]\nring = 0\nwidth = \"1 nm\"\nprefix = \"c\"\n[[point]]", 18, 8, "must be from 1 to 1000" },
        { "[[point]]", "[[contacts]]\nring = 3\nwidth = \"1 nm\"\nfirst = \"45 deg\"\nprefix = \"\"\n[[point]]", 21, 10, "'prefix' is empty" },
    };

    [Theory]
    [MemberData(nameof(OnDisc))]
    public void One_fault_is_reported_once_at_its_place(string good, string bad, int line, int column, string fragment)
    {
        Assert.Contains(good, DeviceTexts.Disc, StringComparison.Ordinal);
        int at = DeviceTexts.Disc.IndexOf(good, StringComparison.Ordinal);
        AssertOnly(string.Concat(DeviceTexts.Disc.AsSpan(0, at), bad, DeviceTexts.Disc.AsSpan(at + good.Length)), line, column, fragment);
    }

    public static TheoryData<string, int, int, string> AfterBar => new()
    {
        { "[[contact]]\nname = \"x\"\nedge = { at = \"1 deg\", width = \"1 um\" }", 19, 10, "takes { end } or { from, to }" },
        { "[[contact]]\nname = \"x\"\nedge = { end = \"rigth\" }", 19, 16, "must be 'left' or 'right'" },
        { "[[contact]]\nname = \"x\"\nedge = { arm = 1, side = \"top\" }", 19, 10, "a bar has no arms" },
        { "[[contact]]\nname = \"x\"\nedge = { from = [\"0 um\", \"3.5 um\"], to = [\"1 um\", \"3 um\"] }", 19, 17, "[\"0 um\", \"3 um\"]" },
        { "[[contact]]\nname = \"x\"\nedge = { from = [\"14 um\", \"3 um\"], to = [\"15 um\", \"3 um\"] }", 19, 8, "'x' touches 'r'" },
        { "[[contacts]]\nring = 3\nwidth = \"1 um\"\nprefix = \"c\"", 18, 1, "needs a disc or a ring" },
        { "[[contact]]\nname = \"x\"\npad = { file = \"a\" , name = \"b\" }", 19, 16, "does not exist" },
        { "[sheet]\nthickness = \"1 nm\"", 17, 1, "'sheet' is set twice" },
    };

    [Theory]
    [MemberData(nameof(AfterBar))]
    public void Faults_on_a_bar(string more, int line, int column, string fragment)
    {
        DeviceReading reading = DeviceFile.Parse(DeviceTexts.Bar + more, "d.toml", "");
        Assert.Null(reading.Device);
        Assert.Contains(reading.Faults, f => f.Line == line && f.Column == column && f.Message.Contains(fragment, StringComparison.Ordinal));
        Assert.True(reading.Faults.Count == 1 || more.Contains("file = ", StringComparison.Ordinal), string.Join('\n', reading.Faults));
    }

    [Theory]
    [InlineData("[\"-8 um\", \"-7.5 um\"]", 108, "arm 2 overlaps arm 1")]
    [InlineData("[\"-8 um\", \"14.8 um\"]", 108, "beyond the end of the bar")]
    [InlineData("[]", 98, "must list")]
    [InlineData("[\"1 deg\"]", 99, "is an angle; a length is wanted")]
    public void Arms_must_fit(string arms, int column, string fragment) => AssertOnly(
        $"[sheet]\nhall_bar = {{length = \"30 um\", width = \"6 um\", arm_width = \"1 um\", arm_length = \"3 um\", arms_at = {arms}}}\n" + DeviceTexts.Rest
        + "[[contact]]\nname = \"s\"\nedge = { end = \"left\" }\n[[contact]]\nname = \"d\"\nedge = { arm = 1, side = \"top\" }\n",
        2, column, fragment);

    [Fact]
    public void Independent_faults_are_reported_together_in_the_order_of_their_places()
    {
        string text = DeviceTexts.Disc
            .Replace("8 um", "8 uA", StringComparison.Ordinal)
            .Replace("b = \"1 mS\"", "b = \"1 mS", StringComparison.Ordinal)
            .Replace("name = \"e\"", "nam = \"e\"", StringComparison.Ordinal)
            .Replace("steps = 11", "steps = -1", StringComparison.Ordinal);
        IReadOnlyList<Fault> faults = DeviceFile.Parse(text, "d.toml", "").Faults;
        Assert.Equal([3, 7, 12, 26], faults.Select(f => f.Line));
        Assert.Equal("d.toml:12:1: unknown key 'nam' in [[contact]]; did you mean 'name'?", faults[2].ToString());
    }

    [Fact]
    public void Statements_after_a_broken_one_are_still_read()
    {
        const string Text = "[sheet]\nbar = { length = \"30 um\" width = \"6 um\" }\n[law]\nkind = \"ohmic\"\na = [1,\nb = \"1 mA\"\n[[contact]\nname = \"l\"\n";
        IReadOnlyList<Fault> faults = DeviceFile.Parse(Text, "d.toml", "").Faults;
        Assert.Equal([(2, 26), (5, 1), (6, 5), (7, 10)], faults.Select(f => (f.Line, f.Column)));
    }

    [Fact]
    public void A_file_without_contacts_says_so_once_instead_of_calling_every_name_unknown() => AssertOnly(
        "[sheet]\nbar = { length = \"30 um\", width = \"6 um\" }\n" + DeviceTexts.Rest, 1, 1, "no contact");

    [Theory]
    [InlineData("")]
    [InlineData(" \n\t\n")]
    [InlineData("\uFEFF")]
    public void An_empty_file(string text) => AssertOnly(text, 1, 1, "empty");

    [Fact]
    public void Far_too_many_faults_are_counted()
    {
        string text = string.Concat(Enumerable.Range(0, 500).Select(i => $"k{i} = {i}\n"));
        IReadOnlyList<Fault> faults = DeviceFile.Parse(text, "d.toml", "").Faults;
        Assert.Equal(21, faults.Count);
        Assert.Contains("more faults", faults[^1].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Messages_stay_on_one_line_whatever_the_file_holds()
    {
        IReadOnlyList<Fault> faults = DeviceFile.Parse("\"a\\nb\\u001b[31m\" = 1\n" + DeviceTexts.Disc, "d.toml", "").Faults;
        Assert.Contains("a\\u000Ab\\u001B[31m", Assert.Single(faults).Message, StringComparison.Ordinal);
    }

    private static void AssertOnly(string text, int line, int column, string fragment)
    {
        DeviceReading reading = DeviceFile.Parse(text, "d.toml", "");
        Assert.Null(reading.Device);
        Assert.True(reading.Faults.Count == 1, string.Join('\n', reading.Faults));
        Fault fault = reading.Faults[0];
        Assert.True(
            fault.File == "d.toml" && fault.Line == line && fault.Column == column && fault.Message.Contains(fragment, StringComparison.Ordinal),
            $"{fault}\nwanted {line}:{column} with: {fragment}");
    }
}
