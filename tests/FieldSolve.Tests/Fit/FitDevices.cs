using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>Devices with a [fit] and made-up measurements.</summary>
internal static class FitDevices
{
    public static SheetDevice Read(DeviceText text, string fit, string folder = "")
    {
        DeviceReading reading = DeviceFile.Parse($"{text}\n[fit]\n{fit}\n", "test.toml", folder);
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults));
        return reading.Device!;
    }

    /// <summary>Rows "source,drain,plus,minus,current_A,value_V,sigma_V".</summary>
    public static MeasuredVoltages Resistances(SheetDevice device, double current, double sigma, params (string Four, double Ohm)[] rows)
    {
        var text = new StringBuilder("source,drain,plus,minus,current_A,value_V,sigma_V\n");
        foreach ((string four, double ohm) in rows)
        {
            text.Append(CultureInfo.InvariantCulture, $"{four.Replace(' ', ',')},{current:R},{ohm * current:R},{sigma:R}\n");
        }

        return Table(device, text.ToString());
    }

    public static MeasuredVoltages Table(SheetDevice device, string text)
    {
        (MeasuredVoltages? data, IReadOnlyList<Fault> faults) = VoltageTable.Parse(text, "data.csv", device, null);
        Assert.True(faults.Count == 0, string.Join('\n', faults));
        return data!;
    }

    public static FitResult Fit(SheetDevice device, MeasuredVoltages data, FitOptions? options = null) => FitRun.Execute(device, data, options ?? new FitOptions { Starts = 1 }, null, default);

    public static FittedParameter Of(this FitResult result, string key) => result.Parameters.Single(p => p.Parameter.Key == key);

    /// <summary>A disc with six contacts, three wirings; every second contact takes part in the next wiring.</summary>
    public static DeviceText SixArms(string law, double radius = 4e-6)
    {
        DeviceText text = DeviceText.Disc(radius, law);
        for (int k = 0; k < 6; k++)
        {
            text.Arc($"c{k + 1}", 60 * k, 5, radius);
        }

        return text.Wiring("0 deg", "c4", "c1", "c3 c2", "c3 c5").Wiring("60 deg", "c5", "c2", "c4 c3", "c4 c6").Wiring("120 deg", "c6", "c3", "c5 c4", "c5 c1").Drive(1e-4);
    }
}
