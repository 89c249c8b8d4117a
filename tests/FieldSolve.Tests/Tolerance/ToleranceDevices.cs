using FieldSolve.Device;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>Devices with causes of error, and their budgets and samples.</summary>
internal static class ToleranceDevices
{
    public static SheetDevice Read(string text)
    {
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", "");
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults));
        return reading.Device!;
    }

    public static SheetDevice Read(DeviceText text, string tolerance) => Read($"{text}\n[tolerance]\n{tolerance}\n");

    public static ToleranceResult Budget(SheetDevice device) => ToleranceRun.Execute(device, new ToleranceOptions { Samples = 0 }, null, null, default);

    public static BudgetEntry Of(this ToleranceResult result, string pair, ReadingPart part, string cause, string target = "") =>
        result.Budget.Single(e => e.Quantity.Pair == pair && e.Quantity.Part == part && e.Cause.Kind.Key == cause && e.Cause.Target.Name == target);
}
