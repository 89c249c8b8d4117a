using FieldSolve.Device;
using FieldSolve.Meshing;
using FieldSolve.Quantities;

namespace FieldSolve.Runs;

/// <summary>The mesh before anything is known of the solution, within the limit of unknowns as far as the outline allows.</summary>
internal static class FirstMesh
{
    // A mesh of this size costs little and shows where the next one needs its triangles, however low the limit is.
    private const int AlwaysAllowed = 12_000;

    // An outline of very many corners has no mesh within the limit; up to here it is answered all the same (2.5 million unknowns).
    private const int MostForTheOutline = 300_000;

    private const double CoarseEnds = 0.4;

    /// <summary>Makes it.</summary>
    /// <param name="device">Sheet, contacts and limit.</param>
    /// <param name="cancel">Checked on the way.</param>
    /// <exception cref="MeshException">The device cannot be meshed, or its outline alone needs far more than the limit.</exception>
    public static TriangleMesh Make(SheetDevice device, CancellationToken cancel)
    {
        int most = Math.Max((int)(device.Mesh.MaxUnknowns / MeshRefinement.UnknownsPerCoarseTriangle), AlwaysAllowed), last = Math.Max(most, MostForTheOutline);
        if (Try(MeshSizes.First(device), most) is { } mesh)
        {
            return mesh;
        }

        // Thousands of corners or contacts, each with its own fan of small triangles: the estimate says which of them matter.
        if (Try(MeshSizes.First(device, corners: false), most) is { } ends)
        {
            return ends;
        }

        try
        {
            return Mesher.Generate(device.Domain, MeshSizes.First(device, corners: false, ends: CoarseEnds), new MeshOptions { MaxTriangles = last }, cancel);
        }
        catch (MeshException e) when (e.IsTooMany)
        {
            if (NarrowStrips.Of(device) is [var strip, ..])
            {
                throw new MeshException(strip, e);
            }

            int corners = device.Domain.Edges.Count(edge => edge.IsRim);
            throw new MeshException(
                FormattableString.Invariant(
                    $"The rim has {corners} edges, down to {SiText.Of(device.Domain.Edges.Where(edge => edge.IsRim).Min(edge => edge.Curve.Length), "m")} long; even the coarsest mesh along them has more than {(int)(last * MeshRefinement.UnknownsPerCoarseTriangle / 1e4) * 1e4:F0} unknowns. Leave out corners that do not matter, or raise [mesh] max_unknowns."),
                e);
        }

        TriangleMesh? Try(ISizeField size, int most)
        {
            try
            {
                return Mesher.Generate(device.Domain, size, new MeshOptions { MaxTriangles = most }, cancel);
            }
            catch (MeshException e) when (e.IsTooMany)
            {
                return null;
            }
        }
    }
}
