namespace FieldSolve.Meshing.SizeFields;

/// <summary>
/// Edge length wanted in the triangles of an earlier mesh and at its vertices: at a point, the least of the triangle's length and of each corner's length
/// plus the growth times the distance to it. A tiny length at a corner thus stays at that corner, even where two such corners share an edge.
/// </summary>
/// <remarks>Thread-safe; the answer depends on the point alone.</remarks>
public sealed class TriangleSize : ISizeField
{
    private readonly TriangleMesh mesh;
    private readonly double[] inside;
    private readonly double[] corner;
    private readonly double growth;
    private readonly TriangleIndex index;

    /// <summary>Prepares the look-up.</summary>
    /// <param name="mesh">The earlier mesh.</param>
    /// <param name="inside">Edge length in metres per triangle, finite and positive.</param>
    /// <param name="atVertex">Edge length in metres per vertex, finite and positive; lowered until none grows faster than the growth.</param>
    /// <param name="growth">Largest increase of the edge length per distance, positive.</param>
    /// <exception cref="ArgumentException">A length does not match the mesh.</exception>
    public TriangleSize(TriangleMesh mesh, double[] inside, double[] atVertex, double growth)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        ArgumentNullException.ThrowIfNull(inside);
        if (inside.Length != mesh.TriangleCount)
        {
            throw new ArgumentException($"{inside.Length} lengths were given for {mesh.TriangleCount} triangles.", nameof(inside));
        }

        var smooth = new VertexSize(mesh, atVertex, growth);
        this.mesh = mesh;
        this.inside = inside;
        this.growth = growth;
        corner = smooth.Sizes.ToArray();
        index = smooth.Index;
    }

    /// <inheritdoc/>
    public double At(double x, double y)
    {
        int t = index.Find(x, y);
        double least = inside[t];
        for (int k = 0; k < 3; k++)
        {
            int v = mesh.Corners[(3 * t) + k];
            double dx = x - mesh.X[v], dy = y - mesh.Y[v];
            least = Math.Min(least, corner[v] + (growth * Math.Sqrt((dx * dx) + (dy * dy))));
        }

        return least;
    }
}
