using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Tests.PicturesTests;

namespace FieldSolve.Tests.FilesTests;

public sealed class VtuFileTests : IDisposable
{
    private static readonly DriveResult Drive = SyntheticDrive.Make(rings: 60, mapSteps: [10]);
    private readonly string folder = Directory.CreateTempSubdirectory("vtu-").FullName;

    public void Dispose() => Directory.Delete(folder, recursive: true);

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void A_map_reads_back_bit_for_bit(bool compressed)
    {
        FieldMap map = Drive.Maps[0];
        string path = Path.Combine(folder, "map.vtu");
        VtuFile.WriteMap(path, map, compressed);
        VtuReader reader = new(path);
        Assert.Equal("UnstructuredGrid", reader.Xml.Root!.Attribute("type")!.Value);
        Assert.Equal(map.Potential, reader.Doubles("potential_V"));
        Assert.Equal(map.Nodes, reader.Ints("connectivity"));
        Assert.Equal(Enumerable.Range(1, map.TriangleCount).Select(k => 6L * k), reader.Longs("offsets"));
        Assert.All(reader.Bytes("types"), t => Assert.Equal(22, t));
        Assert.Equal("3", reader.Components("E_V_per_m"));
        Assert.Equal([map.Ex[7], map.Ey[7], 0], reader.Doubles("E_V_per_m")[21..24]);
        Assert.Equal([map.Kx[7], map.Ky[7], 0], reader.Doubles("K_A_per_m")[21..24]);
        Assert.Equal([map.X[7], map.Y[7], 0], reader.Doubles("Points")[21..24]);
        Assert.Equal(map.Power(7), reader.Doubles("power_W_per_m2")[7]);
        Assert.Equal([map.Current], reader.Doubles("current_A"));
    }

    [Fact]
    public void A_mesh_carries_region_and_smallest_angle()
    {
        // The middle of the structured disc is six equilateral triangles.
        TriangleMesh mesh = SyntheticDrive.Make(rings: 1).Mesh;
        string path = Path.Combine(folder, "mesh.vtu");
        VtuFile.WriteMesh(path, mesh);
        VtuReader reader = new(path);
        Assert.Equal(mesh.Corners, reader.Ints("connectivity"));
        Assert.All(reader.Bytes("types"), t => Assert.Equal(5, t));
        Assert.Equal(mesh.Region, reader.Ints("region"));
        Assert.All(reader.Doubles("minimum_angle_deg"), a => Assert.Equal(60, a, 1e-9));
    }

    [MeshioTheory]
    [InlineData(false)]
    [InlineData(true)]
    public void An_independent_reader_agrees(bool compressed)
    {
        const string Script =
            "import sys, numpy as np, meshio\n" +
            "m = meshio.read(sys.argv[1])\n" +
            "c = m.cells_dict['triangle6']\n" +
            "e = m.point_data['E_V_per_m']\n" +
            "print(len(m.points), c.shape[0], c.shape[1], e.shape[1], repr(float(m.point_data['potential_V'].sum())), repr(float(e[5][1])), int(c[3][4]))\n";
        string path = Path.Combine(folder, "map.vtu");
        FieldMap map = Drive.Maps[0];
        VtuFile.WriteMap(path, map, compressed);
        string[] words = Meshio.Run(Script, path).Split(' ', StringSplitOptions.TrimEntries);
        Assert.Equal([$"{map.X.Length}", $"{map.TriangleCount}", "6", "3"], words[..4]);
        Assert.Equal(map.Potential.Sum(), double.Parse(words[4], System.Globalization.CultureInfo.InvariantCulture), 1e-9);
        Assert.Equal(map.Ey[5], double.Parse(words[5], System.Globalization.CultureInfo.InvariantCulture));
        Assert.Equal($"{map.Nodes[(6 * 3) + 4]}", words[6]);
    }
}
