using FieldSolve.Device;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>Device files to vary in tests.</summary>
internal static class DeviceTexts
{
    /// <summary>Line 1 to 26: a sound disc; the contacts start in line 8, the wiring in line 19.</summary>
    public const string Disc = """
        title = "Disc"
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "ohmic"
        a = "4 mS"
        b = "1 mS"
        [[contact]]
        name = "w"
        edge = { at = "180 deg", width = "0.7 um" }
        [[contact]]
        name = "e"
        edge = { at = "0 deg", width = "0.7 um" }
        [[contact]]
        name = "n"
        edge = { at = "90 deg", width = "0.7 um" }
        [[point]]
        name = "p"
        at = ["1 um", "0 um"]
        [[wiring]]
        name = "0 deg"
        source = "w"
        drain = "e"
        along = ["n", "p"]
        [drive]
        current = { from = "0 uA", to = "500 uA", steps = 11 }
        """;

    /// <summary>A sound bar to which contacts can be added; it ends after line 15.</summary>
    public const string Bar = """
        [sheet]
        bar = { length = "30 um", width = "6 um" }
        [law]
        kind = "ohmic"
        a = "4 mS"
        b = "1 mS"
        [[contact]]
        name = "l"
        edge = { end = "left" }
        [[contact]]
        name = "r"
        edge = { end = "right" }
        [[wiring]]
        name = "x"
        source = "l"
        drain = "r"

        """;

    /// <summary>Law and wiring for a sheet whose contacts are called s and d.</summary>
    public const string Rest = """
        [law]
        kind = "ohmic"
        a = "1 mS"
        b = "1 mS"
        [[wiring]]
        name = "x"
        source = "s"
        drain = "d"

        """;

    public static SheetDevice Good(string text, string folder = "")
    {
        DeviceReading reading = DeviceFile.Parse(text, "device.toml", folder);
        Assert.Empty(reading.Faults);
        return reading.Device!;
    }

    public static Contact Named(this SheetDevice device, string name) => device.Contacts.Single(c => c.Name == name);
}
