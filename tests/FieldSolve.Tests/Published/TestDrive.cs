using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Runs the whole main job on the text of a device file.</summary>
internal static class TestDrive
{
    private static readonly DriveOptions NoMaps = new() { Maps = MapChoice.None, ForPictures = false };

    public static SheetDevice Device(DeviceText text, string folder = ".")
    {
        DeviceReading reading = DeviceFile.Parse(text.ToString(), "test.toml", folder);
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults) + "\n" + text);
        return reading.Device!;
    }

    public static DriveResult Run(DeviceText text, string folder = ".") => DriveRun.Execute(Device(text, folder), NoMaps, null, default);

    /// <summary>Straight line through (x, y): slope and share of the variance it explains.</summary>
    public static (double Slope, double RSquared) Line(IReadOnlyList<(double X, double Y)> points)
    {
        double mx = points.Average(p => p.X), my = points.Average(p => p.Y);
        double sxx = points.Sum(p => (p.X - mx) * (p.X - mx)), syy = points.Sum(p => (p.Y - my) * (p.Y - my));
        double sxy = points.Sum(p => (p.X - mx) * (p.Y - my));
        return (sxy / sxx, sxy * sxy / (sxx * syy));
    }
}
