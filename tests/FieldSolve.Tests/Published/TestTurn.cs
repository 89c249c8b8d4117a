using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Runs a turn on the text of a device file.</summary>
internal static class TestTurn
{
    public static TurnResult Run(DeviceText text, int axisSteps = 0, params double[] ratios)
    {
        SheetDevice device = TestDrive.Device(text);
        return TurnRun.Execute(device, new TurnOptions { AxisSteps = axisSteps, Ratios = ratios, ForPictures = false }, null, default);
    }

    /// <summary>The row nearest to an angle of the current from crystal a, at the last current.</summary>
    public static CurveRow At(TurnResult result, double angle)
    {
        double last = result.Drive.Device.Drive!.Currents[^1];
        TurnRow row = result.Rows.Where(r => r.Row.Current == last).MinBy(r => Degrees.Apart(r.AngleDegrees, angle))!;
        Assert.Equal(0, Degrees.Apart(row.AngleDegrees, angle), 6);
        return row.Row;
    }

    /// <summary>Coefficient of a harmonic.</summary>
    public static (double Cos, double Sin) Harmonic(TurnResult result, string curve, int order)
    {
        (int _, Fitted cos, Fitted sin) = result.Fit!.Harmonics.Single(h => h.Curve == curve).Terms.Single(t => t.Order == order);
        return (cos.Value, sin.Value);
    }
}
