namespace FieldSolve.Tests.EndToEndTests;

/// <summary>A device that is solved in a moment: a bar with two ends and three voltage contacts, coarse accuracy.</summary>
internal static class SmallDevice
{
    public const string Text = """
        title = "Small bar"

        [sheet]
        bar = { length = "12 um", width = "4 um" }

        [law]
        kind = "ohmic"
        axis = "0 deg"
        a = "1 mS"
        b = "1 mS"
        hall = "0.3 mS"

        [[contact]]
        name = "left"
        edge = { end = "left" }

        [[contact]]
        name = "right"
        edge = { end = "right" }

        [[contact]]
        name = "top 1"
        edge = { from = ["-2.3 um", "2 um"], to = ["-1.7 um", "2 um"] }

        [[contact]]
        name = "top 2"
        edge = { from = ["1.7 um", "2 um"], to = ["2.3 um", "2 um"] }

        [[contact]]
        name = "bottom 1"
        edge = { from = ["-2.3 um", "-2 um"], to = ["-1.7 um", "-2 um"] }

        [[point]]
        name = "tip"
        at = ["0 um", "0 um"]

        [[wiring]]
        name = "bar"
        source = "left"
        drain = "right"
        along = ["top 1", "top 2"]
        across = ["top 1", "bottom 1"]
        pairs = { half = ["tip", "right"] }

        [drive]
        current = { from = "0 uA", to = "30 uA", steps = 4 }
        both_signs = true

        [mesh]
        error = 1e-2
        even_error = 0.1
        """;

    public const string Law = """
        kind = "ohmic"
        axis = "0 deg"
        a = "1 mS"
        b = "1 mS"
        hall = "0.3 mS"
        """;
}
