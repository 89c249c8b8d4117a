using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Quantities;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

public class VoltageTableTests
{
    private static readonly SheetDevice Device = TestDrive.Device(
        DeviceText.Disc(1e-6, DeviceText.Ohmic(1e-3, 1e-3)).Arc("e", 0, 5, 1e-6).Arc("n", 90, 5, 1e-6).Arc("w", 180, 5, 1e-6).Arc("s", 270, 5, 1e-6)
            .Wiring("0 deg", "w", "e", null, "n s", "side: w n").Drive(1e-6));

    private static MeasuredVoltages Good(string text, NoiseRule? noise = null)
    {
        (MeasuredVoltages? data, IReadOnlyList<Fault> faults) = VoltageTable.Parse(text, "data.csv", Device, noise);
        Assert.True(faults.Count == 0, string.Join('\n', faults));
        return data!;
    }

    private static string Bad(string text, NoiseRule? noise = null)
    {
        (MeasuredVoltages? data, IReadOnlyList<Fault> faults) = VoltageTable.Parse(text, "data.csv", Device, noise);
        Assert.Null(data);
        return string.Join('\n', faults);
    }

    [Fact]
    public void Reads_units_from_the_header_and_passes_over_comments()
    {
        MeasuredVoltages data = Good("# made up\nwiring,pair,current_uA,harmonic,value_uV,sigma (nV)\n\n\"0 deg\",across,20,,-3.5,40\n0 deg, side ,-20,,1,40\n");
        Assert.Equal(2, data.Data.Count);
        Assert.Equal((2e-5, null, -3.5e-6, 4e-8, 4), (data.Data[0].Current, data.Data[0].Harmonic, data.Data[0].Value, data.Data[0].Sigma, data.Data[0].Line));
        Assert.Equal(["across", "side"], data.Circuits[0].Pairs.Select(p => p.Name));
    }

    [Fact]
    public void Harmonics_take_the_root_mean_square()
    {
        MeasuredVoltages data = Good("wiring,pair,current_A,current_rms_A,harmonic,value_V,sigma_V\n0 deg,across,,1e-5,2,1e-9,1e-10\n0 deg,across,3e-5,,,1e-9,1e-10\n");
        Assert.Equal((1e-5, 2), (data.Data[0].Current, data.Data[0].Harmonic));
        Assert.Equal((3e-5, null), (data.Data[1].Current, data.Data[1].Harmonic));
    }

    [Fact]
    public void Contacts_in_columns_make_circuits_of_their_own()
    {
        MeasuredVoltages data = Good("source,drain,plus,minus,current_A,value_V,sigma_V\ne,n,s,w,1e-6,1e-4,1e-8\ne,n,w,s,1e-6,-1e-4,1e-8\nn,w,e,s,1e-6,1e-4,1e-8\n");
        Assert.Equal(["e to n", "n to w"], data.Circuits.Select(c => c.Wiring.Name));
        Assert.Equal(2, data.Circuits[0].Pairs.Count);
    }

    [Fact]
    public void A_noise_rule_stands_in_for_sigma()
    {
        Assert.True(NoiseRule.TryParse("3 uV + 4 %", Dimension.Voltage, out NoiseRule? rule, out _));
        MeasuredVoltages data = Good("wiring,pair,current_A,value_V\n0 deg,across,1e-6,1e-4\n", rule);
        Assert.Equal(5e-6, data.Data[0].Sigma, 1e-12);
    }

    [Theory]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 dg,across,1,1,1\n", "data.csv:2:1: there is no wiring '0 dg'; did you mean '0 deg'?")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,acros,1,1,1\n", "data.csv:2:7: wiring '0 deg' has no pair 'acros'; did you mean 'across'?")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1,x,1\n", "data.csv:2:16: 'x' is no finite number ('value'); the unit stands in the header")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1,1,0\n", "data.csv:2:18: 'sigma' is 0; a standard deviation is greater than zero")]
    [InlineData("wiring,pair,current_A,value,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:23: 'value' does not say its unit; write for example value_V")]
    [InlineData("wiring,pair,current_A,value_A,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:23: 'value_A': 'A' is the unit of a current; a voltage is wanted, for example value_V")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1,1\n", "data.csv:2:16: this row has 4 cells; the header in line 1 has 5")]
    [InlineData("wiring,pair,current_A,value_V\n0 deg,across,1,1\n", "data.csv:1:1: the table has no column sigma_V; add one, or give the noise on the command line: --noise \"20 nV + 0.1 %\"")]
    [InlineData("wiring,pair,current_A,harmonic,value_V,sigma_V\n0 deg,across,1,2,1,1\n", "data.csv:2:16: a harmonic needs its current in the column current_rms_A")]
    [InlineData("source,drain,plus,minus,current_A,value_V,sigma_V\ne,q,s,w,1,1,1\n", "data.csv:2:3: 'drain': there is no contact 'q'; there are 'e', 'n', 'w' and 's'")]
    [InlineData("", "data.csv:1:1: the table is empty; it begins with a header such as")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n", "data.csv:1:1: there are no rows below the header")]
    [InlineData("wiring,pair,current_A,sigma_V\n0 deg,across,1,1\n", "data.csv:1:1: the table needs the column 'value' with its unit")]
    [InlineData("wiring,pair,value_V,sigma_V\n0 deg,across,1,1\n", "data.csv:1:1: the table needs the column current_A (DC) or current_rms_A (harmonics)")]
    [InlineData("wiring,pair,current_rms_A,value_V,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:1: a current_rms needs the column 'harmonic'")]
    [InlineData("pair,current_A,value_V,sigma_V\nacross,1,1,1\n", "data.csv:1:1: the table needs the column 'wiring', or the columns source and drain")]
    [InlineData("wiring,current_A,value_V,sigma_V\n0 deg,1,1,1\n", "data.csv:1:1: the table needs the column 'pair', or the columns plus and minus")]
    [InlineData("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n0 deg,across,1,1.5,1,1\n", "data.csv:2:16: 'harmonic' is '1.5'; write a whole number from 0 to 20")]
    [InlineData("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n0 deg,across,1,21,1,1\n", "data.csv:2:16: 'harmonic' is '21'")]
    [InlineData("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n0 deg,across,-1,1,1,1\n", "data.csv:2:14: a root mean square is zero or greater")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,,1,1\n", "data.csv:2:14: a DC voltage (blank 'harmonic') needs its current in the column current_A")]
    [InlineData("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n0 deg,across,1,,1,1\n", "data.csv:2:14: a DC voltage (blank 'harmonic') needs its current in the column current_A")]
    [InlineData("source,drain,plus,minus,current_A,value_V,sigma_V\ne,e,s,w,1,1,1\n", "data.csv:2:3: 'source' and 'drain' are the same contact; a current needs two")]
    [InlineData("source,drain,plus,minus,current_A,value_V,sigma_V\ne,n,s,s,1,1,1\n", "data.csv:2:7: 'plus' and 'minus' are the same; a voltage is read between two")]
    [InlineData("source,drain,plus,minus,current_A,value_V,sigma_V\ne,n,x,s,1,1,1\n", "data.csv:2:5: 'plus': there is no contact or point 'x'")]
    [InlineData("source,drain,pair,plus,minus,current_A,value_V,sigma_V\ne,n,p,s,w,1,1,1\ne,n,p,w,s,1,1,1\n", "data.csv:3:5: the pair 'p' already stands for other probes")]
    [InlineData("wiring,pair,plus,minus,current_A,value_V,sigma_V\n0 deg,source,n,s,1,1,1\n", "data.csv:2:7: the pair 'source' already stands for other probes")]
    [InlineData("wiring,pair,plus,minus,current_A,value_V,sigma_V\n0 deg,across,w,n,1,1,1\n0 deg,across,,,1,1,1\n", "data.csv:2:7: the pair 'across' already stands for other probes")]
    [InlineData("source,drain,pair,current_A,value_V,sigma_V\ne,n,side,1,1,1\n", "data.csv:2:5: 'side': a circuit that is not in the device file names its probes in the columns plus and minus")]
    [InlineData("wiring,source,drain,pair,current_A,value_V,sigma_V\n0 deg,n,s,across,1,1,1\n", "data.csv:2:1: wiring '0 deg' of the device file has another source or drain; leave one of the two out")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n,across,1,1,1\n", "data.csv:2:1: neither a wiring nor source and drain are named")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1,,1\n", "data.csv:2:16: 'value' is blank; a number is wanted")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1,1e999,1\n", "data.csv:2:16: '1e999' is no finite number ('value')")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n\"0 deg,across,1,1,1\n", "data.csv:2:1: the quote that opens this cell is not closed in its line")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n\"0 deg\" x,across,1,1,1\n", "data.csv:2:1: something follows the closing quote of this cell")]
    [InlineData("wiring,pair,current_A,value_V,sigma_V\n\"a \"\"b\"\"\",across,1,1,1\n", "data.csv:2:1: there is no wiring 'a \"b\"'")]
    [InlineData("wiring,pair,current_A,value_V,value_mV,sigma_V\n0 deg,across,1,1,1,1\n", "data.csv:1:31: there is a column 'value' already")]
    [InlineData("wirring,pair,current_A,value_V,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:1: unknown column 'wirring'; did you mean 'wiring'?")]
    [InlineData("qqqqqqqq,pair,current_A,value_V,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:1: unknown column 'qqqqqqqq'; allowed are")]
    [InlineData("wiring,pair,current_A,harmonic_V,value_V,sigma_V\n0 deg,across,1,,1,1\n", "data.csv:1:23: 'harmonic' has no unit; write harmonic")]
    [InlineData("wiring,pair,current_A,value_Vv,sigma_V\n0 deg,across,1,1,1\n", "data.csv:1:23: 'value_Vv': unknown unit 'Vv'")]
    public void A_fault_says_where_and_what(string text, string expected) => Assert.StartsWith(expected, Bad(text), StringComparison.Ordinal);

    [Fact]
    public void The_pair_source_is_the_two_terminal_voltage_of_any_circuit()
    {
        MeasuredVoltages data = Good("wiring,source,drain,pair,current_A,value_V,sigma_V\n0 deg,,,source,1e-6,1e-3,1e-6\n,e,n,source,1e-6,1e-3,1e-6\n0 deg,w,e,across,1e-6,1e-3,1e-6\n");
        Assert.Equal(["0 deg", "e to n"], data.Circuits.Select(c => c.Wiring.Name));
        Assert.Equal(["source", "across"], data.Circuits[0].Pairs.Select(p => p.Name));
        Assert.Equal((false, 0), (data.Circuits[1].Pairs[0].Plus.IsTip, data.Circuits[1].Pairs[0].Plus.Index));
    }

    [Fact]
    public void A_share_alone_gives_a_voltage_of_zero_no_standard_deviation()
    {
        Assert.True(NoiseRule.TryParse("4 %", Dimension.Voltage, out NoiseRule? rule, out _));
        Assert.StartsWith("data.csv:2:19: the noise rule gives this value no standard deviation", Bad("wiring,pair,current_A,value_V\n0 deg,across,1e-6,0\n", rule), StringComparison.Ordinal);

        // A blank sigma takes the rule, one that is given stands.
        MeasuredVoltages data = Good("wiring,pair,current_A,value_V,sigma_V\n0 deg,across,1e-6,1,\n0 deg,across,1e-6,1,3\n", rule);
        Assert.Equal([0.04, 3], data.Data.Select(d => d.Sigma));
    }

    [Theory]
    [InlineData("1 % + 2 %", "'2 %' is no share of the value")]
    [InlineData("x %", "'x %' is no share of the value")]
    [InlineData("-1 %", "'-1 %' is no share of the value")]
    [InlineData("1 uV + 1 uV", "'1 uV': a voltage greater than zero is wanted")]
    [InlineData("1 A", "'1 A': a voltage greater than zero is wanted")]
    [InlineData("-1 uV", "'-1 uV': a voltage greater than zero is wanted")]
    [InlineData("1 uU", "'1 uU': unknown unit 'uU'")]
    public void A_noise_rule_that_is_none_is_refused(string text, string expected)
    {
        Assert.False(NoiseRule.TryParse(text, Dimension.Voltage, out NoiseRule? rule, out string? error));
        Assert.Null(rule);
        Assert.StartsWith(expected, error, StringComparison.Ordinal);
    }

    [Fact]
    public void A_file_that_cannot_be_a_table_is_refused()
    {
        using var folder = new EndToEndTests.TempFolder();
        string Fault(string path) => Assert.Single(VoltageTable.Read(path, Device, null).Faults).Message;
        File.WriteAllBytes(folder["bytes.csv"], [0xC3, 0x28]);
        Assert.Equal("the file is not UTF-8 text", Fault(folder["bytes.csv"]));
        Assert.Equal("this is a directory; name a table (CSV)", Fault(folder.Path));
        Assert.Equal("the file does not exist", Fault(folder["none.csv"]));
        using (FileStream big = File.Create(folder["big.csv"]))
        {
            big.SetLength(64_000_001); // a hole, no bytes on the disk
        }

        Assert.Equal("the file is larger than 64 MB; was another file meant?", Fault(folder["big.csv"]));
    }
}
