using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Benchmarks;

/// <summary>The device every benchmark runs on, and meshes of it.</summary>
internal static class Sample
{
    public static string Path { get; } = Find();

    public static SheetDevice Device() => DeviceFile.Read(Path).Device ?? throw new InvalidOperationException("The sample device has faults.");

    public static LabLaw Law(SheetDevice device) => new(device.Law, device.Axis);

    /// <summary>A size field of equilateral triangles that would make about the wanted number, graded towards the contact ends.</summary>
    public static ISizeField Size(SheetDevice device, int triangles)
    {
        double edge = device.Domain.Size / Math.Sqrt(triangles);
        IEnumerable<SizePoint> ends = SingularPoints.Of(device.Domain)
            .Select(p => new SizePoint(device.Domain.Vertices[p.Vertex].X, device.Domain.Vertices[p.Vertex].Y, edge / 50, 0.5));
        return new GradedSize(edge, ends);
    }

    /// <summary>A mesh of that kind.</summary>
    public static TriangleMesh Mesh(SheetDevice device, int triangles)
    {
        TriangleMesh mesh = Mesher.Generate(device.Domain, Size(device, triangles));
        Console.WriteLine(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"// wanted about {triangles} triangles, made {mesh.TriangleCount}"));
        return mesh;
    }

    private static string Find()
    {
        for (DirectoryInfo? at = new(AppContext.BaseDirectory); at is not null; at = at.Parent)
        {
            string path = System.IO.Path.Combine(at.FullName, "meshes", "disc-12.toml");
            if (File.Exists(path))
            {
                return path;
            }
        }

        throw new InvalidOperationException("The benchmarks run outside the repository.");
    }
}
