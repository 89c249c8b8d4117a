using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.RegressionTests;

/// <summary>Tables and journals that once ended a command with a stack trace; found by the mutations.</summary>
public class MutatedFilesFoundTests
{
    private const string Head = "wiring,pair,current_uA,value_mV,sigma_uV\n";

    // Their squares over- or underflowed: a fit without end, and an infinity that no JSON can hold.
    [Theory]
    [InlineData("x,source,10,40,1e-300\n", 16, "1e-300")]
    [InlineData("x,source,10,1e300,100\n", 13, "1e300")]
    [InlineData("x,source,1e-300,40,100\n", 10, "1e-300")]
    public void A_number_beyond_all_instruments_is_refused_where_it_stands(string row, int column, string text)
    {
        SheetDevice device = DeviceTexts.Good(DeviceTexts.Bar);
        (MeasuredVoltages? data, IReadOnlyList<Fault> faults) = VoltageTable.Parse(Head + row, "v.csv", device, null);
        Assert.Null(data);
        Fault fault = Assert.Single(faults);
        Assert.Equal((2, column), (fault.Line, fault.Column));
        Assert.Contains($"'{text}' is beyond anything that is measured", fault.Message, StringComparison.Ordinal);
    }

    // A number in a mesh file, and the path of a value in a change of a layout, brought a delete character and a carriage return into messages.
    [Fact]
    public void A_message_cannot_steer_a_terminal()
    {
        Fault fault = new("m.vtu", 3, 1, "'11\u007f61' is no number\r") { Column = 2 };
        Assert.Equal("m.vtu:3:2: '11\\u007F61' is no number\\u000D", fault.ToString());
        Assert.DoesNotContain((fault with { Message = "a\u2028b" }).Message, c => c is '\u2028');
    }

    // A step of six per cent of the smallest double is none, and the reader hung.
    [Theory]
    [InlineData("4.9e-324")]
    [InlineData("1e-100")]
    public void A_field_too_small_for_any_sheet_is_refused(string field)
    {
        string law = $"kind = \"saturating\"\nfield_a = \"1 kV/m\"\nfield_b = \"{field} kV/m\"\nsharpness = 2";
        Fault fault = Assert.Single(DeviceFile.Parse(DeviceTexts.Disc.Replace("kind = \"ohmic\"", law, StringComparison.Ordinal), "d.toml", "").Faults);
        Assert.Equal((7, 11), (fault.Line, fault.Column));
        Assert.Contains("beyond any sheet", fault.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("design;1;2;1e-300;1;d.toml")] // samples
    [InlineData("design;3;2;4;1;d.toml")] // shard 3 of 2
    [InlineData("design;1;2;99999999;1;d.toml")] // more samples than any run
    public void A_journal_whose_head_makes_no_sense_is_none(string head)
    {
        using var folder = new TempFolder();
        Write(folder, "# FieldSolve samples;" + head, "");
        Assert.Throws<JournalException>(() => SampleJournal.Read(folder[SampleJournal.FileName]));
    }

    [Fact]
    public void Wrong_cells_under_a_right_check_sum_make_no_sample()
    {
        using var folder = new TempFolder();
        Write(folder, "# FieldSolve samples;design;1;2;8;1;d.toml", "x,ok,1", "0,ok,1e300", "1", "2,ok,0x10", "4,ok,0.5,0.25");
        SampleResult sample = Assert.Single(SampleJournal.Read(folder[SampleJournal.FileName]).Samples).Value;
        Assert.Equal((4, 2), (sample.Index, sample.Values.Length));

        // A shard with other readings than the run has.
        Write(folder, "# FieldSolve samples;design;1;1;1;1;d.toml", "0,ok,0.5,0.25");
        GatheredSamples gathered = GatheredSamples.Read([folder.Path]);
        Assert.Contains("sample 0 has 2 values, not 3", Assert.Throws<JournalException>(() => gathered.Open("design", 3)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_journal_without_a_line_end_has_no_samples()
    {
        using var folder = new TempFolder();
        const string Line = "# FieldSolve samples;design;1;2;8;1;d.toml";
        File.WriteAllText(folder[SampleJournal.FileName], $"{Line};{SampleJournal.Check(Line)}");
        Assert.Empty(SampleJournal.Read(folder[SampleJournal.FileName]).Samples);
    }

    // growth = "1e300 nm" in [tolerance] ended the command: squares of the lengths were infinite.
    [Theory]
    [InlineData(1e291)]
    [InlineData(-1e291)]
    public void A_rim_that_moves_beyond_all_sheets_makes_no_device(double by) =>
        Assert.Throws<FieldSolve.Geometry.LayoutException>(() => new DeviceDraft(DeviceTexts.Good(DeviceTexts.Bar)).Grow(by));

    [Theory]
    [InlineData("\"1e300 nm\"")]
    [InlineData("{ half_width = \"1e-300 nm\" }")]
    public void A_tolerance_beyond_all_sheets_is_refused_where_it_stands(string size)
    {
        Fault fault = Assert.Single(DeviceFile.Parse($"{DeviceTexts.Bar}\n[tolerance]\ngrowth = {size}\n", "d.toml", ".").Faults);
        Assert.True(fault.Column >= 10 && fault.Message.Contains("beyond any sheet; check its unit", StringComparison.Ordinal), fault.ToString());
    }

    private static void Write(TempFolder folder, string head, params string[] lines) => File.WriteAllText(
        folder[SampleJournal.FileName], string.Concat(lines.Where(l => l.Length > 0).Select(l => $"{l},{SampleJournal.Check(l)}\n").Prepend($"{head};{SampleJournal.Check(head)}\n")));
}
