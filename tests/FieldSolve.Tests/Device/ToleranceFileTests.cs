using FieldSolve.Device;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>[tolerance] in a device file.</summary>
public class ToleranceFileTests
{
    private static IReadOnlyList<SheetCause> Causes(string tolerance)
    {
        DeviceReading r = DeviceFile.Parse(DeviceTexts.Disc + "\n[tolerance]\n" + tolerance, "device.toml", "");
        Assert.True(r.Faults.Count == 0, string.Join('\n', r.Faults));
        return r.Device!.Tolerance!.Causes;
    }

    private static string Fault(string tolerance) =>
        Assert.Single(DeviceFile.Parse(DeviceTexts.Disc + "\n[tolerance]\n" + tolerance, "device.toml", "").Faults).ToString();

    [Fact]
    public void Sizes_units_and_shapes()
    {
        IReadOnlyList<SheetCause> causes = Causes("""
            axis = "2 deg"
            a = { sigma = "0.1 mS", shape = "uniform" }
            growth = { half_width = "30 nm" }
            [tolerance.contacts]
            position = "50 nm"
            [[tolerance.contact]]
            name = "n"
            position = "10 nm"
            width = "5 nm"
            [[tolerance.layer]]
            name = "gold"
            contacts = ["w", "e"]
            rotation = "0.1 deg"
            about = ["1 um", "0 um"]
            """);
        Assert.Equal(
            ["position of w", "position of e", "position of n", "width of n", "axis", "a", "growth", "layer_rotation of gold"],
            causes.OrderBy(c => c.Kind.Scope switch { CauseScope.Contact => 0, CauseScope.Sheet => 1, _ => 2 }).ThenBy(c => c.Label is "growth" ? 1 : 0).Select(c => c.Label));
        SheetCause One(string label) => causes.Single(c => c.Label == label);
        Assert.Equal(50e-9, One("position of w").Sigma, 1e-20);
        Assert.Equal(10e-9, One("position of n").Sigma, 1e-20);
        Assert.Equal((2 * Math.PI / 180, "deg"), (One("axis").Sigma, One("axis").Unit));
        Assert.Equal((1e-4, CauseShape.Uniform), (One("a").Sigma, One("a").Shape));
        Assert.Equal(30e-9 / Math.Sqrt(3), One("growth").Sigma, 1e-20);
        Assert.Equal([0, 1], One("layer_rotation of gold").Target.Contacts);
        Assert.Equal(1e-6, One("layer_rotation of gold").Target.About.X);
    }

    [Theory]
    [InlineData("axsi = \"1 deg\"", "did you mean 'axis'?")]
    [InlineData("axis = \"1 nm\"", "is a length; an angle is wanted")]
    [InlineData("axis = \"-1 deg\"", "zero or greater")]
    [InlineData("d11 = \"1e-11 A m/V^2\"", "'d11' is no parameter with a value of the law 'ohmic'; it has a, b, hall")]
    [InlineData("[tolerance.contacts]\nposition = { sigma = \"1 nm\", half_width = \"2 nm\" }", "one of them")]
    [InlineData("[tolerance.contacts]\nposition = { sigma = \"1 nm\", shape = \"square\" }", "it must be normal or uniform")]
    [InlineData("[[tolerance.contact]]\nname = \"x\"\nwidth = \"1 nm\"", "there is no contact 'x'")]
    [InlineData("[[tolerance.contact]]\nname = \"n\"\nresistance = \"1 ohm um\"", "contact 'n' is ideal; give the contact a 'resistance'")]
    [InlineData("[[tolerance.contact]]\nname = \"n\"\nx = \"1 nm\"", "contact 'n' is an edge contact; give it 'position' or 'width'")]
    [InlineData("[[tolerance.layer]]\nname = \"gold\"\ncontacts = [\"w\", \"w\"]\nx = \"1 nm\"", "contact 'w' stands twice")]
    [InlineData("axis = { shape = \"uniform\" }", "needs 'sigma' or 'half_width', one of them")]
    [InlineData("axis = { half_width = \"1 deg\", shape = \"normal\" }", "a normal distribution has no half width; give 'sigma'")]
    [InlineData("axis = { half_width = \"1 deg\", shape = \"square\" }", "it must be normal or uniform")]
    [InlineData("[[tolerance.contact]]\nname = \"n\"\nwidth = \"1 nm\"\n[[tolerance.contact]]\nname = \"n\"\nposition = \"1 nm\"", "contact 'n' already has its [[tolerance.contact]]; write its causes together")]
    [InlineData("[[tolerance.layer]]\nname = \"gold\"\nx = \"1 nm\"\n[[tolerance.layer]]\nname = \"gold\"\ny = \"1 nm\"", "there is a layer 'gold' already")]
    [InlineData("[[tolerance.layer]]\nname = \"gold\"\ncontacts = []\nx = \"1 nm\"", "lists the names of the layer's contacts")]
    [InlineData("[[tolerance.layer]]\nname = \"gold\"\ncontacts = [\"q\"]\nx = \"1 nm\"", "there is no contact 'q'")]
    [InlineData("[[tolerance.layer]]\nx = \"1 nm\"", "'name'")]
    [InlineData("[[tolerance.layer]]\nname = \"gold\"\nabout = \"here\"\nx = \"1 nm\"", "'about'")]
    [InlineData("sharpness = \"two\"", "'sharpness'")]
    [InlineData("sharpness = 0.1", "'sharpness' is no parameter with a value of the law 'ohmic'")]
    [InlineData("contacts = 3", "contacts")]
    public void Faults_say_what_would_be_right(string tolerance, string message)
    {
        string fault = Fault(tolerance);
        Assert.Matches(@"^device\.toml:\d+:\d+: ", fault);
        Assert.Contains(message, fault, StringComparison.Ordinal);
        Assert.True(int.Parse(fault.Split(':')[1], System.Globalization.CultureInfo.InvariantCulture) > 26);
    }

    [Fact]
    public void What_some_contacts_cannot_have_is_left_out_with_a_note()
    {
        DeviceReading r = DeviceFile.Parse(DeviceTexts.Bar + "\n[tolerance.contacts]\nposition = \"1 nm\"\nx = \"1 nm\"", "device.toml", "");
        Assert.Empty(r.Device!.Tolerance!.Causes);
        Assert.Contains(r.Device.Tolerance.Notes, n => n.StartsWith("'position' of contacts 'l', 'r' left out: the contact ends at a corner", StringComparison.Ordinal));
        Assert.Contains(r.Device.Tolerance.Notes, n => n.Contains("'x' befalls no contact", StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("n", "write NAME=VALUE")]
    [InlineData("m=1nm", "there is no contact and no cause 'm'")]
    [InlineData("n=1deg", "is an angle; a length is wanted")]
    [InlineData("n.colour=1nm", "a contact has no 'colour'")]
    [InlineData("n.width=-1um", "nothing is left of contact 'n'")]
    [InlineData("n=6um", "contact")]
    [InlineData("a=-5mS", "'a'")]
    public void Changes_by_hand_that_cannot_be(string change, string message)
    {
        (SheetDevice? device, string? error) = CauseText.Apply(DeviceFile.Parse(DeviceTexts.Disc, "device.toml", "").Device!, [change]);
        Assert.Null(device);
        Assert.Contains(message, error, StringComparison.Ordinal);
    }

    [Fact]
    public void A_contact_shifted_by_hand_is_one_with_a_shift()
    {
        SheetDevice Read(string text) => DeviceFile.Parse(text, "device.toml", "").Device!;
        SheetDevice hand = CauseText.Apply(Read(DeviceTexts.Disc), ["n=50nm"]).Device!;
        SheetDevice file = Read(DeviceTexts.Disc.Replace("edge = { at = \"90 deg\", width = \"0.7 um\" }", "edge = { at = \"90 deg\", width = \"0.7 um\" }\nshift = \"50 nm\"", StringComparison.Ordinal));
        Assert.Equal(file.Domain.Vertices, hand.Domain.Vertices);
        Assert.Equal(file.Domain.Edges, hand.Domain.Edges);
        SheetDevice wide = CauseText.Apply(Read(DeviceTexts.Disc), ["n.width=20nm", "axis=3deg", "a=1mS", "growth=-50nm"]).Device!;
        Assert.Equal((0.72e-6, 5e-3), (wide.Contacts[2].Width, wide.Law.AtZeroField.Aa));
        Assert.Equal(3 * Math.PI / 180, wide.Axis, 1e-15);
        Assert.Equal(3.95e-6, wide.Contacts[2].Middle.Y, 1e-18);
    }

    [Fact]
    public void A_cause_that_befalls_no_contact_is_said()
    {
        DeviceReading r = DeviceFile.Parse(DeviceTexts.Disc + "\n[tolerance.contacts]\nresistivity = \"1e-12 ohm m^2\"\nposition = \"0 nm\"\n", "device.toml", "");
        Assert.Empty(r.Faults);
        Assert.Equal("'resistivity' befalls no contact of this device.", Assert.Single(r.Device!.Tolerance!.Notes));
        Assert.Empty(r.Device.Tolerance.Causes);
    }
}
