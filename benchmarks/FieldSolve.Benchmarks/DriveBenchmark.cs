using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Benchmarks;

/// <summary>Where does the time of a drive go? disc-12: twelve contacts, three wirings, eleven currents, both signs, default error.</summary>
[MemoryDiagnoser]
public class DriveBenchmark
{
    private readonly SheetDevice device = Sample.Device();
    private string folder = "";
    private DriveResult? result;

    [GlobalSetup]
    public void Prepare()
    {
        folder = Directory.CreateTempSubdirectory("fieldsolve").FullName;
        result = Solve();
        foreach (StageTime stage in result.Stages)
        {
            Console.WriteLine(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"// stage {stage.Name}: {stage.Seconds:F2} s"));
        }

        Console.WriteLine(string.Create(
            System.Globalization.CultureInfo.InvariantCulture, $"// {result.Figures.Unknowns} unknowns, {result.Figures.Triangles} triangles, {result.Levels.Count} levels"));
    }

    [GlobalCleanup]
    public void CleanUp() => Directory.Delete(folder, true);

    [Benchmark(Description = "read the device file")]
    public DeviceReading Read() => DeviceFile.Read(device.Path);

    [Benchmark(Description = "mesh, refine and solve")]
    public DriveResult Solve() => DriveRun.Execute(device, new DriveOptions(), null, CancellationToken.None);

    [Benchmark(Description = "draw the pictures")]
    public IReadOnlyList<PictureFile> Draw() => DrivePictures.Write(result!, folder, CancellationToken.None);
}
