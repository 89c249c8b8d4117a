namespace FieldSolve.Tests.SensitivityTests;

/// <summary>Parts of device files that tests of derivatives and of budgets share: a bar with a resistive edge contact and a pad that hangs over the end.</summary>
internal static class ContactedBar
{
    public const string Sheet = """
        [sheet]
        bar = { length = "10 um", width = "6 um" }

        """;

    /// <summary>Ends within the pad's contact, so that a resistivity may follow.</summary>
    public const string Ends = """
        [[contact]]
        name = "s"
        edge = { from = ["-5 um", "-1 um"], to = ["-5 um", "2 um"] }
        resistance = "200 ohm um"
        [[contact]]
        name = "d"
        pad = [["4 um", "-2.5 um"], ["6 um", "-2 um"], ["6 um", "2 um"], ["4.2 um", "2 um"]]

        """;

    /// <summary>From s to d.</summary>
    public const string Wiring = """
        [[wiring]]
        name = "one"
        source = "s"
        drain = "d"
        along = ["s", "p"]
        across = ["p", "q"]

        """;
}
