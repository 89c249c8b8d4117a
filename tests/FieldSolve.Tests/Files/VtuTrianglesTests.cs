using FieldSolve.Files;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.FilesTests;

/// <summary>Meshes of other programs in the VTK XML format (The VTK User's Guide, "XML file formats"): what is read, and how the rest is refused.</summary>
public class VtuTrianglesTests
{
    private const string Ascii = """
        <?xml version="1.0"?>
        <VTKFile type="UnstructuredGrid" version="1.0" byte_order="LittleEndian" header_type="UInt32">
        <UnstructuredGrid><Piece NumberOfPoints="3" NumberOfCells="1">
        <Points><DataArray type="Float64" NumberOfComponents="3" format="ascii">0 0 0 1e-6 0 0 0 2e-6 0</DataArray></Points>
        <Cells>
        <DataArray type="Int64" Name="connectivity" format="ascii">0 1 2</DataArray>
        <DataArray type="Int64" Name="offsets" format="ascii">3</DataArray>
        <DataArray type="UInt8" Name="types" format="ascii">5</DataArray>
        </Cells></Piece></UnstructuredGrid>
        </VTKFile>
        """;

    private static (double[] X, double[] Y, int[] Corners, Device.Fault? Fault) Read(string text)
    {
        using var folder = new TempFolder();
        return VtuTriangles.Read(folder.Write("m.vtu", text));
    }

    [Fact]
    public void Arrays_as_text_are_read()
    {
        (double[] x, double[] y, int[] corners, Device.Fault? fault) = Read(Ascii);
        Assert.Null(fault);
        Assert.Equal([0, 1e-6, 0], x);
        Assert.Equal([0, 0, 2e-6], y);
        Assert.Equal([0, 1, 2], corners);
    }

    [Theory]
    [InlineData("type=\"UnstructuredGrid\"", "type=\"PolyData\"", 2, "is not a VTK file of an unstructured grid")]
    [InlineData("LittleEndian", "BigEndian", 2, "the byte order is big-endian")]
    [InlineData("header_type=\"UInt32\"", "compressor=\"vtkLZ4DataCompressor\"", 2, "the compressor 'vtkLZ4DataCompressor' is not known")]
    [InlineData("Piece", "Part", 2, "the file has no <Piece>")]
    [InlineData("NumberOfPoints=\"3\"", "NumberOfPoints=\"-3\"", 3, "NumberOfPoints = '-3' is not a whole number from 1")]
    [InlineData("NumberOfPoints=\"3\"", "NumberOfPoints=\"4\"", 4, "has 9 numbers; 12 are needed")]
    [InlineData("Points>", "Places>", 3, "the piece has no <Points> with a <DataArray>")]
    [InlineData("\"types\"", "\"kinds\"", 3, "the piece has no <Cells> with a <DataArray> named 'types'")]
    [InlineData(">5<", ">22<", 8, "the grid has cells that are not triangles (type 5)")]
    [InlineData("0 1 2", "0 1 two", 6, "'two' in the array 'connectivity' is not a number")]
    [InlineData("format=\"ascii\">0 1 2", "format=\"binary\">0 1 2", 6, "the format 'binary' is not known here")]
    [InlineData("format=\"ascii\">0 1 2", "format=\"appended\">", 6, "the array 'connectivity' has no offset into an appended section")]
    [InlineData("</VTKFile>", "", 10, "this is not well-formed XML")]
    public void What_is_no_such_mesh_is_refused_with_its_place(string from, string to, int line, string expected)
    {
        string text = Ascii.ReplaceLineEndings("\n");
        Assert.Contains(from, text, StringComparison.Ordinal);
        Device.Fault fault = Read(text.Replace(from, to, StringComparison.Ordinal)).Fault!;
        Assert.Contains(expected, fault.Message, StringComparison.Ordinal);
        Assert.Equal(line, fault.Line);
    }

    [Theory]
    [InlineData("Float64", 0, 0, "ends within the array")]
    [InlineData("Float16", 0, 24, "the type 'Float16' is not known here")]
    [InlineData("Float64", 9999, 24, "ends within the array")]
    [InlineData("Float64", 0, 24, "has 3 numbers; 9 are needed")]
    public void Appended_arrays_that_do_not_fit_are_refused(string type, int offset, int length, string expected)
    {
        string head = Ascii.ReplaceLineEndings("\n").Replace(
            "type=\"Float64\" NumberOfComponents=\"3\" format=\"ascii\">0 0 0 1e-6 0 0 0 2e-6 0", $"type=\"{type}\" format=\"appended\" offset=\"{offset}\">", StringComparison.Ordinal)
            .Replace("</VTKFile>", "<AppendedData encoding=\"raw\">_", StringComparison.Ordinal);
        using var folder = new TempFolder();
        File.WriteAllBytes(folder["m.vtu"], [.. System.Text.Encoding.UTF8.GetBytes(head), .. BitConverter.GetBytes(24), .. new byte[length]]);
        Assert.Contains(expected, VtuTriangles.Read(folder["m.vtu"]).Fault!.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_file_that_is_not_there_is_said() => Assert.Contains("the mesh file cannot be read", VtuTriangles.Read("no such.vtu").Fault!.Message, StringComparison.Ordinal);
}
