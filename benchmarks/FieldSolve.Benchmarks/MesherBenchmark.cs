using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Meshing;

namespace FieldSolve.Benchmarks;

/// <summary>How many triangles per second does the mesher make?</summary>
[MemoryDiagnoser]
public class MesherBenchmark
{
    private readonly SheetDevice device = Sample.Device();

    [Params(10_000, 100_000)]
    public int Triangles { get; set; }

    [GlobalSetup]
    public void Prepare() => Sample.Mesh(device, Triangles);

    [Benchmark(Description = "mesh the disc")]
    public TriangleMesh Mesh() => Mesher.Generate(device.Domain, Sample.Size(device, Triangles));

    [Benchmark(Description = "split every triangle in four")]
    public TriangleMesh Split() => UniformSplit.Split(coarse ??= Mesher.Generate(device.Domain, Sample.Size(device, Triangles)));

    private TriangleMesh? coarse;
}
