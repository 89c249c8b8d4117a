using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Triangulates a domain: constrained Delaunay triangulation of the outline, then Delaunay refinement to the size field and the
/// smallest angle.
/// </summary>
/// <remarks>
/// J. Ruppert, "A Delaunay refinement algorithm for quality 2-dimensional mesh generation", J. Algorithms 18 (1995) 548;
/// L. P. Chew, "Guaranteed-quality mesh generation for curved surfaces", 9th Symp. Comput. Geom. (1993) 274;
/// A. Üngör, "Off-centers", Comput. Geom. 42 (2009) 109 (where new points go). Cost: close to linear in the number of triangles.
/// The same input gives the same mesh bit for bit; lengths scaled by a power of two give the same connectivity.
/// </remarks>
public static class Mesher
{
    /// <summary>Meshes a domain.</summary>
    /// <param name="domain">The sheet. Its edges meet only at vertices, its vertices are distinct, and the sheet lies to the left of rim edges.</param>
    /// <param name="size">Wanted edge length. Called on this thread only. Lengths below what a double resolves at the place are raised.</param>
    /// <param name="options">Limits; null for the defaults.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <returns>About as many triangles as equilateral ones of the wanted edge length would be (a longest edge may exceed it by half), none with an angle
    /// under the limit except at sharp corners.</returns>
    /// <exception cref="MeshException">The outline is inconsistent, or more triangles are needed than allowed.</exception>
    /// <exception cref="ArgumentOutOfRangeException">The smallest angle is not in 0 to 33 degrees, or no triangles are allowed.</exception>
    /// <exception cref="OperationCanceledException">The work was stopped.</exception>
    public static TriangleMesh Generate(Domain domain, ISizeField size, MeshOptions? options = null, CancellationToken cancel = default)
    {
        ArgumentNullException.ThrowIfNull(domain);
        ArgumentNullException.ThrowIfNull(size);
        options ??= new MeshOptions();
        if (!(options.MinimumAngleDegrees is >= 0 and <= 33))
        {
            throw new ArgumentOutOfRangeException(nameof(options), options.MinimumAngleDegrees, "The smallest angle must be between 0 and 33 degrees.");
        }

        if (options.MaxTriangles < 1)
        {
            throw new ArgumentOutOfRangeException(nameof(options), options.MaxTriangles, "At least one triangle must be allowed.");
        }

        DomainGuard.Check(domain);
        size = new ResolvedSize(size, domain);
        SharpCorners sharp = new(domain);
        List<double>[] division = Division.Divide(domain, size, sharp, options.MaxTriangles, cancel);
        RefuseTooMany(division, options);
        Triangulation mesh = OutlineTriangulation.Build(domain, division, cancel);
        Sheet.Mark(mesh, domain);
        new Refiner(mesh, domain, sharp, size, options, cancel).Run();
        TriangleMesh result = MeshAssembly.Assemble(mesh, domain);
        if (result.TriangleCount > options.MaxTriangles)
        {
            throw new MeshException(string.Create(CultureInfo.InvariantCulture,
                $"The mesh has {result.TriangleCount} triangles, more than the {options.MaxTriangles} allowed. Ask for larger triangles or allow more of them."))
            { IsTooMany = true };
        }

        return result;
    }

    private static void RefuseTooMany(List<double>[] division, MeshOptions options)
    {
        long pieces = division.Sum(ts => (long)ts.Count - 1);
        if (pieces > options.MaxTriangles)
        {
            throw new MeshException(string.Create(CultureInfo.InvariantCulture,
                $"The outline alone needs {pieces} edges, more than the {options.MaxTriangles} triangles allowed. Ask for larger triangles or allow more of them."))
            { IsTooMany = true };
        }
    }
}
