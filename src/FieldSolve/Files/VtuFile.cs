using FieldSolve.Fields;
using FieldSolve.Meshing;

namespace FieldSolve.Files;

/// <summary>
/// Maps and meshes in the open VTK XML format for unstructured grids (.vtu, version 1.0, little endian, 64-bit lengths,
/// appended raw data, optionally in zlib blocks). Layout after the format's description in "The VTK User's Guide", Kitware, 11th ed.,
/// section "XML File Formats".
/// </summary>
public static class VtuFile
{
    private const byte LinearTriangle = 5, QuadraticTriangle = 22;

    /// <summary>
    /// Writes a map: quadratic triangles (cell type 22) with the point data potential_V, E_V_per_m, K_A_per_m (three
    /// components, the third 0) and power_W_per_m2, and the field data current_A.
    /// </summary>
    /// <param name="path">Target file.</param>
    /// <param name="map">The map; coordinates in metres.</param>
    /// <param name="compressed">True: zlib blocks, smaller and slower; every reader of the format knows them.</param>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void WriteMap(string path, FieldMap map, bool compressed = false)
    {
        ArgumentNullException.ThrowIfNull(map);
        VtuDocument document = new(map.X.Length, map.TriangleCount);
        document.Field("current_A", [map.Current]);
        document.PointData("potential_V", 1, map.Potential);
        document.PointData("E_V_per_m", 3, Vectors(map.Ex, map.Ey));
        document.PointData("K_A_per_m", 3, Vectors(map.Kx, map.Ky));
        document.PointData("power_W_per_m2", 1, [.. Enumerable.Range(0, map.X.Length).Select(map.Power)]);
        document.Points(Vectors(map.X, map.Y));
        document.Cells(map.Nodes, nodesPerCell: 6, QuadraticTriangle);
        WholeFile.Write(path, stream => document.Save(stream, compressed));
    }

    /// <summary>
    /// Writes a mesh: straight triangles (cell type 5) with the cell data region (contact index of the resistive pad over
    /// the triangle, or -1) and minimum_angle_deg (smallest angle of the triangle).
    /// </summary>
    /// <param name="path">Target file.</param>
    /// <param name="mesh">The mesh; coordinates in metres.</param>
    /// <param name="compressed">True: zlib blocks.</param>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public static void WriteMesh(string path, TriangleMesh mesh, bool compressed = false)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        VtuDocument document = new(mesh.VertexCount, mesh.TriangleCount);
        document.CellData("region", mesh.Region);
        document.CellData("minimum_angle_deg", [.. Enumerable.Range(0, mesh.TriangleCount).Select(t => MinimumAngle(mesh, t))]);
        document.Points(Vectors(mesh.X, mesh.Y));
        document.Cells(mesh.Corners, nodesPerCell: 3, LinearTriangle);
        WholeFile.Write(path, stream => document.Save(stream, compressed));
    }

    private static double[] Vectors(double[] x, double[] y)
    {
        double[] result = new double[3 * x.Length];
        for (int i = 0; i < x.Length; i++)
        {
            result[3 * i] = x[i];
            result[(3 * i) + 1] = y[i];
        }

        return result;
    }

    private static double MinimumAngle(TriangleMesh mesh, int triangle)
    {
        double smallest = double.PositiveInfinity;
        for (int k = 0; k < 3; k++)
        {
            int a = mesh.Corners[(3 * triangle) + k];
            int b = mesh.Corners[(3 * triangle) + ((k + 1) % 3)];
            int c = mesh.Corners[(3 * triangle) + ((k + 2) % 3)];
            double ux = mesh.X[b] - mesh.X[a], uy = mesh.Y[b] - mesh.Y[a];
            double vx = mesh.X[c] - mesh.X[a], vy = mesh.Y[c] - mesh.Y[a];
            smallest = Math.Min(smallest, Math.Abs(Math.Atan2((ux * vy) - (uy * vx), (ux * vx) + (uy * vy))));
        }

        return smallest * 180 / Math.PI;
    }
}
