using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>A piece of a domain edge in the mesh.</summary>
/// <param name="A">Vertex at the parameter <paramref name="FromT"/>.</param>
/// <param name="B">Vertex at the parameter <paramref name="ToT"/>.</param>
/// <param name="DomainEdge">Index into <see cref="Domain.Edges"/>; A to B runs along that edge, so the sheet is on the left of a rim piece.</param>
/// <param name="FromT">Curve parameter at A.</param>
/// <param name="ToT">Curve parameter at B, larger than at A.</param>
/// <param name="LeftTriangle">Triangle to the left of A to B.</param>
/// <param name="RightTriangle">Triangle to the right; -1 for a rim piece.</param>
public readonly record struct MeshEdge(int A, int B, int DomainEdge, double FromT, double ToT, int LeftTriangle, int RightTriangle);

/// <summary>
/// Triangles of a domain. The vertices of the domain come first, in its order. Triangles are counter-clockwise; rim edges on
/// arcs are chords between points of the true arc.
/// </summary>
public sealed class TriangleMesh
{
    /// <summary>The domain that was triangulated.</summary>
    public required Domain Domain { get; init; }

    /// <summary>x of each vertex, metres.</summary>
    public required double[] X { get; init; }

    /// <summary>y of each vertex, metres.</summary>
    public required double[] Y { get; init; }

    /// <summary>Three vertex indices per triangle, counter-clockwise.</summary>
    public required int[] Corners { get; init; }

    /// <summary>Three per triangle: the triangle across the edge opposite that corner, -1 at the rim.</summary>
    public required int[] Neighbours { get; init; }

    /// <summary>Per triangle: contact index of the resistive pad over it, or -1.</summary>
    public required int[] Region { get; init; }

    /// <summary>Pieces of all domain edges.</summary>
    public required MeshEdge[] Edges { get; init; }

    /// <summary>Number of vertices.</summary>
    public int VertexCount => X.Length;

    /// <summary>Number of triangles.</summary>
    public int TriangleCount => Corners.Length / 3;
}
