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
    public void A_fault_says_where_and_what(string text, string expected) => Assert.StartsWith(expected, Bad(text), StringComparison.Ordinal);
}
