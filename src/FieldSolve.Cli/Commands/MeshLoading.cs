using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Meshing;

namespace FieldSolve.Cli.Commands;

/// <summary>Reads a saved mesh for a device and shows its fault.</summary>
internal static class MeshLoading
{
    /// <summary>Reads the mesh when one is named.</summary>
    /// <param name="path">File, or null for none.</param>
    /// <param name="device">The device it must fit.</param>
    /// <param name="mesh">The mesh; null when none was named.</param>
    /// <returns>False after a fault went to standard error.</returns>
    public static bool TryLoad(string? path, SheetDevice device, out TriangleMesh? mesh)
    {
        mesh = null;
        if (path is null)
        {
            return true;
        }

        (double[] x, double[] y, int[] corners, Fault? fault) = VtuTriangles.Read(path);
        if (fault is null)
        {
            try
            {
                mesh = SavedMesh.Fit(device.Domain, x, y, corners);
                return true;
            }
            catch (MeshException e)
            {
                fault = new(path, 1, 1, $"this is no mesh of '{device.Path}': {e.Message}; make one with 'fieldsolve mesh {device.Path} --out FILE.vtu'");
            }
        }

        Console.Error.WriteLine(fault);
        return false;
    }
}
