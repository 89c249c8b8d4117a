using FieldSolve.Device;

namespace FieldSolve.Cli.Commands;

/// <summary>Reads a device file and shows its faults.</summary>
internal static class DeviceLoading
{
    /// <summary>The device, or null after all faults went to standard error.</summary>
    public static SheetDevice? Load(string path)
    {
        DeviceReading reading = DeviceFile.Read(path);
        foreach (Fault fault in reading.Faults)
        {
            Console.Error.WriteLine(fault);
        }

        return reading.Faults.Count > 0 ? null : reading.Device;
    }
}
