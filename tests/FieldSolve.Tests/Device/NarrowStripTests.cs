using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>Pads whose side runs along the edge of the sheet at next to no distance.</summary>
public class NarrowStripTests
{
    private const double Top = 3e-6;

    // A bar of 10 um by 6 um with a pad of 3 um whose upper side lies so far below the upper edge; above it for less than zero.
    private static DeviceReading Read(double below, double resistivity = 0) => DeviceFile.Parse(
        DeviceText.Bar(10e-6, 6e-6, DeviceText.Ohmic(4e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right")
            .Pad("p", -1e-6, 1e-6, 2e-6, Top - below, resistivity).Wiring("x", "l", "r").Drive(1e-4).ToString(), "d.toml", "");

    private static IReadOnlyList<string> Words(double below, double resistivity = 0) => NarrowStrips.Of(Read(below, resistivity).Device!);

    [Fact]
    public void A_side_close_to_the_edge_is_named_with_its_distance()
    {
        // 3 um over 30 pm are 1e5 squares of strip.
        string words = Assert.Single(Words(30e-12));
        Assert.StartsWith("A side of the pad of 'p' runs along the edge of the sheet at a distance of only 30 pm near (", words, StringComparison.Ordinal);
        Assert.EndsWith("that strip alone takes some 1000000 unknowns. Move the side well off the edge, or let the pad reach across it.", words, StringComparison.Ordinal);
        Assert.Contains(words, Cli.Output.DeviceText.Plain(Read(30e-12).Device!), StringComparison.Ordinal);
    }

    // 1e-8 of the sheet. Below the tolerance of a billionth of the sheet the side counts as lying on the edge, which is sound.
    [Fact]
    public void A_strip_too_thin_for_any_mesh_is_refused_at_the_pad()
    {
        Fault fault = Assert.Single(Read(1e-13).Faults);
        Assert.StartsWith("a side of the pad of 'p' runs along the edge of the sheet at a distance of only 100 fm near (", fault.Message, StringComparison.Ordinal);
        Assert.EndsWith("too thin a strip for any mesh; move the side well off the edge, or let the pad reach across it", fault.Message, StringComparison.Ordinal);
        Assert.True(fault.Line > 10, fault.ToString());
    }

    [Theory]
    [InlineData(0.1e-6)]
    [InlineData(1e-9)]
    [InlineData(0)]
    [InlineData(1e-16)]
    [InlineData(-30e-12)]
    [InlineData(-1e-6)]
    public void A_side_well_off_on_or_beyond_the_edge_is_no_trouble(double below)
    {
        DeviceReading read = Read(below);
        Assert.Empty(read.Faults);
        Assert.Empty(NarrowStrips.Of(read.Device!));
    }

    // The upper side hangs over the edge, the lower one lies just inside. An ideal pad is cut out of the sheet, under a resistive one the sheet goes on; the strip above
    // the lower side is metal or none of the problem.
    [Theory]
    [InlineData(0, false)]
    [InlineData(1e-11, true)]
    public void A_strip_under_the_pad_counts_where_the_sheet_goes_on_there(double resistivity, bool named)
    {
        DeviceReading read = DeviceFile.Parse(
            DeviceText.Bar(10e-6, 6e-6, DeviceText.Ohmic(4e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right")
                .Pad("p", -1e-6, Top - 30e-12, 2e-6, Top + 1e-6, resistivity).Wiring("x", "l", "r").Drive(1e-4).ToString(), "d.toml", "");
        Assert.Equal(named ? 1 : 0, NarrowStrips.Of(read.Device!).Count);
    }

    // Corners that cross the edge, or come near it, at an angle.
    [Theory]
    [InlineData(3.2)]
    [InlineData(3.0)]
    [InlineData(2.9999999)]
    public void A_corner_at_the_edge_is_no_strip(double y)
    {
        string corner = string.Create(CultureInfo.InvariantCulture, $"pad = [[\"-1 um\", \"1 um\"], [\"1 um\", \"1 um\"], [\"0 um\", \"{y:R} um\"]]");
        DeviceReading read = DeviceFile.Parse(
            DeviceText.Bar(10e-6, 6e-6, DeviceText.Ohmic(4e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right").Contact("p", corner).Wiring("x", "l", "r").Drive(1e-4).ToString(), "d.toml", "");
        Assert.Empty(read.Faults);
        Assert.Empty(NarrowStrips.Of(read.Device!));
    }

    [Fact]
    public void No_sample_has_a_strip() => Assert.All(
        Directory.GetFiles(Repository.Sample(""), "*.toml"),
        f => Assert.Empty(NarrowStrips.Of(DeviceFile.Read(f).Device!)));
}
