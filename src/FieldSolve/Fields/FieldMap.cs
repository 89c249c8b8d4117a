using FieldSolve.Geometry;

namespace FieldSolve.Fields;

/// <summary>
/// Potential, field and current over the sheet for one wiring and one current, on quadratic triangles. One value per node;
/// fields are averaged over the triangles that meet in a node (weighted by area).
/// </summary>
public sealed class FieldMap
{
    /// <summary>x of each node, metres.</summary>
    public required double[] X { get; init; }

    /// <summary>y of each node, metres.</summary>
    public required double[] Y { get; init; }

    /// <summary>Six nodes per triangle, counter-clockwise: corners 0, 1, 2, then the middles of edges 01, 12, 20.</summary>
    public required int[] Nodes { get; init; }

    /// <summary>Potential at each node, V; the drain's metal is at 0 V.</summary>
    public required double[] Potential { get; init; }

    /// <summary>E along lab x at each node, V/m.</summary>
    public required double[] Ex { get; init; }

    /// <summary>E along lab y at each node, V/m.</summary>
    public required double[] Ey { get; init; }

    /// <summary>Sheet current density along lab x at each node, A/m.</summary>
    public required double[] Kx { get; init; }

    /// <summary>Sheet current density along lab y at each node, A/m.</summary>
    public required double[] Ky { get; init; }

    /// <summary>Potential of each contact's metal, V, in the device's order.</summary>
    public required double[] ContactPotential { get; init; }

    /// <summary>Name of the wiring.</summary>
    public required string Wiring { get; init; }

    /// <summary>Current, A.</summary>
    public required double Current { get; init; }

    /// <summary>Position in the drive's list of currents.</summary>
    public required int CurrentIndex { get; init; }

    /// <summary>Number of triangles.</summary>
    public int TriangleCount => Nodes.Length / 6;

    /// <summary>Power density E.K at a node, W/m².</summary>
    public double Power(int node) => (Ex[node] * Kx[node]) + (Ey[node] * Ky[node]);

    /// <summary>Largest and smallest coordinate: lower left and upper right corner.</summary>
    public (Point2 Low, Point2 High) Bounds() => (new(X.Min(), Y.Min()), new(X.Max(), Y.Max()));
}
