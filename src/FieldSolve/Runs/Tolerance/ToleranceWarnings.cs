using System.Globalization;
using FieldSolve.Quantities;
using FieldSolve.Readings;
using FieldSolve.Sensitivity;

namespace FieldSolve.Runs;

/// <summary>Says in words what to distrust in a tolerance.</summary>
internal static class ToleranceWarnings
{
    private const double Far = 0.1;

    public static IEnumerable<string> Of(ToleranceModel model, IReadOnlyList<SampleResult> samples, IReadOnlyList<SampleStatistics> statistics, ToleranceOptions options)
    {
        foreach (DesignState s in model.States.Where(s => s.Row.Status != RowStatus.Ok))
        {
            yield return $"Wiring '{s.Plan.Wiring.Name}' as designed is {(s.Row.Status == RowStatus.OutsideLaw ? "outside its law" : "above its wanted numerical error")} at this current; run 'drive' for the details. Its budget holds for the law as continued there.";
        }

        for (int c = 0; c < model.Causes.Count; c++)
        {
            if (model.WithoutSlope[c])
            {
                (bool noRoom, string why) = MotionScale.Obstacle(model.Device, model.Causes[c]);
                yield return noRoom
                    ? $"'{model.Causes[c].Label}' has no room for the smallest change ({why}), so it has no derivative and is left out of the budget; the samples contain it where they make a device."
                    : $"'{model.Causes[c].Label}' changes more than places at once ({why}), so it has no derivative and is left out of the budget; the samples contain it.";
            }
        }

        foreach (DesignState s in model.States.Where(s => s.AlongIsZero && s.Plan.Wiring.Across is not null))
        {
            yield return Text($"The along voltage of wiring '{s.Plan.Wiring.Name}' cannot be told from zero, so across / along is left out. Read 'along' between probes that the current passes one after the other.");
        }

        foreach (DesignState s in model.States.Where(s => options.Explain is not null && s.Plan.Wiring.Across is null))
        {
            yield return Text($"Wiring '{s.Plan.Wiring.Name}' has no across pair, so --explain has no voltage to explain there; give the wiring 'across', or explain another one.");
        }

        if (VoltageScale.Warning(model.Device, model.States.Where(s => s.Row.Of("along") is not null).Select(s => (s.Row.Current, s.Row.Of("along")!.Odd!.Value))) is { } small)
        {
            yield return small;
        }

        int none = samples.Count(s => s.Status == SampleStatus.NoDevice), failed = samples.Count(s => s.Status == SampleStatus.NotConverged);
        if (none > 0)
        {
            yield return Text($"{none} of {samples.Count} samples make no device (contacts overlap, or a width or resistance is no longer positive) and are left out; the tolerances are wide for this device.");
        }

        if (failed > 0)
        {
            yield return Text($"{failed} of {samples.Count} samples have no solution at {SiText.Of(model.Current, "A", 4)} and are left out.");
        }

        foreach (SampleStatistics s in statistics.Where(s => s.Count > 1 && s.SpreadError > Far * s.Deviation.Value))
        {
            yield return Text($"The spread of {s.Quantity.Label} of wiring '{s.Quantity.Wiring}' ({Of(s.Deviation.Value)}) is not far above its numerical error ({Of(s.SpreadError)}); lower [mesh] error.");

            string Of(double v) => s.Quantity.IsRatio ? Text($"{v:G3}") : SiText.Of(v, "V");
        }
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
