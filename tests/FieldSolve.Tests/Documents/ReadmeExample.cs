using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Tests.DocumentsTests;

/// <summary>The library example of the README; a test compares the text.</summary>
internal static class ReadmeExample
{
    // The README names the file where the parameter stands.
    public static CurveRow Run(string path)
    {
        // begin
        DeviceReading reading = DeviceFile.Read(path);
        if (reading.Device is not { } device)
        {
            throw new InvalidDataException(string.Join('\n', reading.Faults));
        }

        DriveResult result = DriveRun.Execute(
            device, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, progress: null, CancellationToken.None);

        CurveRow row = result.Rows.Last(r => r.Wiring == "0 deg");
        Reading across = row.Of("across")!;
        Console.WriteLine($"{row.Current} A: {across.Value} V, numerical error {across.Error} V, even part {across.Even} V, {row.Status}");

        // end
        return row;
    }
}
