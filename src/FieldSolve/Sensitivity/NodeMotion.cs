using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Meshing;

namespace FieldSolve.Sensitivity;

/// <summary>
/// How all nodes of a finite-element space hang on the vertices of the mesh it was made from (that mesh itself or its parent by one uniform
/// split) and on arcs: turns a gradient with respect to nodes into one with respect to a short list of places, and the motion of a
/// domain into velocities of these places.
/// </summary>
public sealed class NodeMotion
{
    // A derivative of places is taken over four domains at -2, -1, 1 and 2 of these steps: with places that are smooth on the scale of the
    // sheet the error is the fourth power of the step, and rounding stays at 1e-12.
    private const double Step = 1e-4;

    /// <summary>How far from the reference the outermost domain lies, as a share of the scale.</summary>
    internal const double Reach = 2 * Step;

    private static readonly (double At, double Weight)[] Stencil = [(-2, 1.0 / 12), (-1, -8.0 / 12), (1, 8.0 / 12), (2, -1.0 / 12)];

    private readonly MeshMover mover;
    private readonly int vertices;
    private readonly int[] parentA;     // of nodes from `vertices` on
    private readonly int[] parentB;     // -1: the node lies on an arc, and parentA is its place in the list
    private readonly List<(int Edge, double T)> onArcs = [];

    /// <summary>Finds the dependences.</summary>
    /// <param name="mover">Of the mesh whose vertices move.</param>
    /// <param name="space">On that mesh, or on its uniform split.</param>
    /// <exception cref="ArgumentException">The space belongs to another mesh.</exception>
    public NodeMotion(MeshMover mover, FieldSpace space)
    {
        ArgumentNullException.ThrowIfNull(mover);
        ArgumentNullException.ThrowIfNull(space);
        this.mover = mover;
        TriangleMesh mesh = mover.Mesh;
        vertices = mesh.VertexCount;
        bool split = space.Mesh.TriangleCount == 4 * mesh.TriangleCount;
        if (!split && space.Mesh.TriangleCount != mesh.TriangleCount)
        {
            throw new ArgumentException("The space is neither on the mesh nor on its uniform split.", nameof(space));
        }

        parentA = new int[space.NodeCount - vertices];
        parentB = new int[parentA.Length];
        if (split)
        {
            int[] middles = UniformSplit.EdgeMiddles(mesh);
            Hang(mesh.Corners, 3, (t, k) => middles[(3 * t) + k]);
            foreach (MeshEdge e in mesh.Edges)
            {
                if (mesh.Domain.Edges[e.DomainEdge].Curve.IsArc)
                {
                    OnArc(middles[(3 * e.LeftTriangle) + EdgeNumbers.LocalEdge(mesh, e.LeftTriangle, e.A, e.B)], e);
                }
            }
        }

        Hang(space.Nodes, 6, (t, k) => space.Nodes[(6 * t) + 3 + k]);
        foreach (MeshEdge e in space.Mesh.Edges)
        {
            if (FieldSpace.Bends(space.Mesh, e))
            {
                OnArc(space.MiddleOf(e), e);
            }
        }

        void Hang(int[] corners, int stride, Func<int, int, int> middle)
        {
            for (int t = 0; t < corners.Length / stride; t++)
            {
                for (int k = 0; k < 3; k++)
                {
                    int m = middle(t, k) - vertices;
                    (parentA[m], parentB[m]) = (corners[(stride * t) + k], corners[(stride * t) + ((k + 1) % 3)]);
                }
            }
        }

        void OnArc(int node, MeshEdge e)
        {
            (parentA[node - vertices], parentB[node - vertices]) = (onArcs.Count, -1);
            onArcs.Add((e.DomainEdge, 0.5 * (e.FromT + e.ToT)));
        }
    }

    /// <summary>Number of places: the mesh's vertices, then the nodes on arcs.</summary>
    public int Count => vertices + onArcs.Count;

    /// <summary>Turns a gradient with respect to nodes (one entry per node) into one with respect to the places.</summary>
    internal double[] Pull(ReadOnlySpan<double> gradient)
    {
        double[] g = gradient.ToArray(), list = new double[Count];
        for (int n = g.Length - 1; n >= vertices; n--)
        {
            int a = parentA[n - vertices], b = parentB[n - vertices];
            if (b < 0)
            {
                list[vertices + a] = g[n];
            }
            else
            {
                g[a] += 0.5 * g[n];
                g[b] += 0.5 * g[n];
            }
        }

        g.AsSpan(0, vertices).CopyTo(list);
        return list;
    }

    /// <summary>Whether a domain changes in places alone when a cause changes a little either way, so that it has velocities.</summary>
    /// <param name="at">The domain at the reference.</param>
    /// <param name="domain">The domain at a value of the cause counted from the reference; null where there is none.</param>
    /// <param name="scale">A value of the cause that moves things by about the size of the sheet; less where a narrow contact or a close neighbour leaves little room.</param>
    public static bool IsSmooth(Domain at, Func<double, Domain?> domain, double scale)
    {
        ArgumentNullException.ThrowIfNull(at);
        ArgumentNullException.ThrowIfNull(domain);
        return Stencil.All(s => domain(s.At * Step * scale) is { } moved && MeshMover.Alike(at, moved));
    }

    /// <summary>
    /// Velocity of the places when a cause moves the domain.
    /// </summary>
    /// <param name="domain">The domain at a value of the cause counted from the reference; null or an exception-free null where there is none.</param>
    /// <param name="scale">A value of the cause that moves things by about the size of the sheet; less where a narrow contact or a close neighbour leaves little room.</param>
    /// <returns>Null when the domain changes in more than places on the way, two ten-thousandths of the scale.</returns>
    public MotionField? Velocity(Func<double, Domain?> domain, double scale)
    {
        ArgumentNullException.ThrowIfNull(domain);
        double step = Step * scale;
        double[] x = new double[Count], y = new double[Count];
        foreach ((double at, double weight) in Stencil)
        {
            if (domain(at * step) is not { } moved || !MeshMover.Alike(mover.Mesh.Domain, moved))
            {
                return null;
            }

            double w = weight / step;
            void Add(int place, Point2 p) => (x[place], y[place]) = (x[place] + (w * p.X), y[place] + (w * p.Y));
            mover.Places(moved, Add);
            for (int k = 0; k < onArcs.Count; k++)
            {
                Add(vertices + k, moved.Edges[onArcs[k].Edge].Curve.At(onArcs[k].T));
            }
        }

        mover.Extend(x, y);
        return new(this, x, y);
    }
}

/// <summary>Velocities of the places of a <see cref="NodeMotion"/>, metres per unit of a cause.</summary>
/// <param name="Motion">What they belong to.</param>
/// <param name="X">Along x.</param>
/// <param name="Y">Along y.</param>
public sealed record MotionField(NodeMotion Motion, double[] X, double[] Y);
