using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.MeshingTests;

/// <summary>A mesh that was written and read again is the same mesh, whatever the order of its vertices and the sense of its triangles.</summary>
public class SavedMeshTests
{
    private const string Disc = "[sheet]\ndisc = { diameter = \"8 um\" }\n[law]\nkind = \"ohmic\"\na = \"2 mS\"\nb = \"1 mS\"\n";
    private const string Wired = "[[wiring]]\nname = \"w\"\nsource = \"s\"\ndrain = \"d\"\nacross = [\"p\", \"q\"]\n"
        + "[[point]]\nname = \"p\"\nat = [\"0.3 um\", \"1 um\"]\n[[point]]\nname = \"q\"\nat = [\"0 um\", \"-1.4 um\"]\n"
        + "[drive]\ncurrent = { from = \"1 mA\", to = \"1 mA\", steps = 1 }\n";

    private static readonly Dictionary<string, string> Devices = new()
    {
        ["arcs"] = Disc + "[[contact]]\nname = \"s\"\nedge = { at = \"180 deg\", width = \"1 um\" }\n[[contact]]\nname = \"d\"\nedge = { at = \"10 deg\", width = \"1 um\" }\n" + Wired,
        ["pads"] = Disc + "[[contact]]\nname = \"s\"\npad = [[\"-3 um\", \"-1 um\"], [\"-2 um\", \"-1 um\"], [\"-2 um\", \"0.5 um\"]]\nresistivity = \"1e-7 ohm cm^2\"\n"
            + "[[contact]]\nname = \"d\"\npad = [[\"2 um\", \"-1 um\"], [\"3 um\", \"-1 um\"], [\"2.5 um\", \"0.5 um\"]]\n" + Wired,
        ["ring"] = "[sheet]\nring = { inner = \"0.5 um\", outer = \"4 um\" }\n[law]\nkind = \"ohmic\"\na = \"2 mS\"\nb = \"1 mS\"\n"
            + "[[contact]]\nname = \"s\"\nedge = { rim = \"inner\" }\n[[contact]]\nname = \"d\"\nedge = { at = \"40 deg\", width = \"1 um\" }\n" + Wired,
    };

    [Theory]
    [InlineData("arcs", false)]
    [InlineData("pads", true)]
    [InlineData("ring", false)]
    public void Written_and_read_again(string name, bool compressed)
    {
        using var folder = new TempFolder();
        SheetDevice device = Read(Devices[name]);
        TriangleMesh mesh = MeshRun.Make(device, null, default).Mesh;
        VtuFile.WriteMesh(folder["m.vtu"], mesh, compressed);
        (double[] x, double[] y, int[] corners, Fault? fault) = VtuTriangles.Read(folder["m.vtu"]);
        Assert.Null(fault);

        // Same numbers in another order, some triangles the other way round.
        int n = x.Length, step = Enumerable.Range(n / 3, n).First(s => Gcd(s, n) == 1);
        double[] px = new double[n], py = new double[n];
        int To(int v) => (int)((long)v * step % n);
        for (int v = 0; v < n; v++)
        {
            (px[To(v)], py[To(v)]) = (x[v], y[v]);
        }

        int[] turned = [.. corners.Select(To)];
        for (int t = 0; t < turned.Length; t += 9)
        {
            (turned[t], turned[t + 1]) = (turned[t + 1], turned[t]);
        }

        TriangleMesh again = SavedMesh.Fit(device.Domain, px, py, turned);
        Assert.Equal((mesh.TriangleCount, mesh.VertexCount, mesh.Edges.Length), (again.TriangleCount, again.VertexCount, again.Edges.Length));
        Assert.Equal(mesh.Region, again.Region);
        Assert.Empty(MeshChecker.Check(again));

        DriveResult own = Drive(device, mesh), read = Drive(device, again);
        foreach (Reading r in own.Rows[0].Readings)
        {
            Assert.Equal(r.Value, read.Rows[0].Of(r.Pair)!.Value, 1e-10 * own.Rows[0].Of("source")!.Value);
        }
    }

    [Fact]
    public void A_mesh_of_another_sheet_is_refused()
    {
        TriangleMesh mesh = MeshRun.Make(Read(Devices["arcs"]), null, default).Mesh;
        SheetDevice other = Read(Devices["ring"]);
        MeshException e = Assert.Throws<MeshException>(() => SavedMesh.Fit(other.Domain, mesh.X, mesh.Y, mesh.Corners));
        Assert.Contains("no vertex lies at", e.Message, StringComparison.Ordinal);

        // A hole: one triangle inside is missing.
        int inner = Enumerable.Range(0, mesh.TriangleCount).First(t => Enumerable.Range(3 * t, 3).All(k => mesh.Neighbours[k] >= 0));
        Assert.Throws<MeshException>(() => SavedMesh.Fit(mesh.Domain, mesh.X, mesh.Y, [.. mesh.Corners.Where((_, k) => k / 3 != inner)]));
    }

    [Fact]
    public void The_command_writes_a_mesh_that_drive_uses()
    {
        using var folder = new TempFolder();
        string device = folder.Write("disc.toml", Devices["arcs"] + "[mesh]\nerror = 1e-3\n"), file = folder["disc.vtu"];
        CommandResult made = Command.Run("mesh", device, "--out", file);
        Assert.Equal((0, ""), (made.Exit, made.Error));
        Assert.Contains("smallest", made.Out, StringComparison.Ordinal);
        CommandResult drive = Command.Run("drive", device, "--mesh", file, "--out", folder["out"], "--no-pictures", "--maps", "none");
        Assert.Equal(0, drive.Exit);
        Assert.Single(System.Text.Json.JsonDocument.Parse(File.ReadAllText(folder["out/run.json"])).RootElement.GetProperty("levels").EnumerateArray());
    }

    [Theory]
    [InlineData("", "m.vtu:1:1: ", "is empty")]
    [InlineData("<VTKFile", "m.vtu:1:", "XML")]
    [InlineData("<VTKFile type=\"ImageData\"/>", "m.vtu:1:2: ", "unstructured grid")]
    [InlineData("<VTKFile type=\"UnstructuredGrid\">\n<Piece NumberOfPoints=\"-1\" NumberOfCells=\"1\"/></VTKFile>", "m.vtu:2:2: ", "NumberOfPoints")]
    [InlineData("<VTKFile type=\"UnstructuredGrid\"><Piece NumberOfPoints=\"3\" NumberOfCells=\"1\"><Points><DataArray type=\"Float64\" Name=\"Points\" format=\"ascii\">\n0 0 x</DataArray></Points></Piece></VTKFile>", "m.vtu:1:", "is not a number")]
    public void A_file_that_is_no_mesh_is_named_with_its_place(string text, string start, string says)
    {
        using var folder = new TempFolder();
        folder.Write("m.vtu", text);
        CommandResult result = Command.Run("drive", folder.Write("disc.toml", Devices["arcs"]), "--mesh", folder["m.vtu"], "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.Contains(start, result.ErrorLines[0], StringComparison.Ordinal);
        Assert.Contains(says, result.ErrorLines[0], StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }

    private static int Gcd(int a, int b) => b == 0 ? a : Gcd(b, a % b);

    private static DriveResult Drive(SheetDevice device, TriangleMesh mesh) =>
        DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false, Mesh = mesh }, null, default);

    private static SheetDevice Read(string text)
    {
        DeviceReading read = DeviceFile.Parse(text, "test.toml", ".");
        Assert.True(read.Faults.Count == 0, string.Join('\n', read.Faults));
        return read.Device!;
    }
}
