using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Lockin;

namespace FieldSolve.Tests.LockinTests;

/// <summary>Bars whose potential depends on x alone, driven with AC: current enters at the right end, the drain is at the left.</summary>
internal static class AcDevices
{
    public const double Length = 30e-6, Width = 6e-6;

    public static string Bar(string law, string currents, string more = "", string sheet = "", string source = "", double error = 1e-4) => $$"""
        title = "AC bar"
        [sheet]
        bar = { length = "30 um", width = "6 um" }
        {{sheet}}
        [law]
        {{law}}
        [[contact]]
        name = "left"
        edge = { end = "left" }
        [[contact]]
        name = "right"
        edge = { end = "right" }
        {{source}}
        [[point]]
        name = "middle"
        at = ["0 um", "0 um"]
        [[wiring]]
        name = "bar"
        source = "right"
        drain = "left"
        along = ["middle", "left"]
        [drive]
        current = {{currents}}
        {{more}}
        [mesh]
        error = {{error.ToString("R", CultureInfo.InvariantCulture)}}
        """;

    public static LockinResult Run(string text)
    {
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", ".");
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults));
        return LockinRun.Execute(reading.Device!, new LockinOptions { Frames = false }, null, default);
    }

    /// <summary>RMS harmonics (x, y) 0 to 5 of a function of the phase, by a rule with far more phases than the program takes.</summary>
    public static (double X, double Y)[] Harmonics(Func<double, double> signal)
    {
        const int Many = 4096;
        var sums = new (double X, double Y)[6];
        for (int m = 0; m < Many; m++)
        {
            double theta = 2 * Math.PI * m / Many, v = signal(theta);
            for (int h = 0; h < 6; h++)
            {
                (double s, double c) = Math.SinCos(h * theta);
                double scale = h == 0 ? 1.0 / Many : Math.Sqrt(2) / Many;
                sums[h] = h == 0 ? (sums[h].X + (scale * v), 0) : (sums[h].X + (scale * s * v), sums[h].Y + (scale * c * v));
            }
        }

        return sums;
    }
}
