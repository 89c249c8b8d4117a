using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>
/// The computed map of one wiring on a mesh and on its uniform split. The split gives the values; the difference of the two says how far they may be off: it is larger than what the
/// split still lacks (by seven in the smooth parts of a potential, by three in those of a field, by little at contact ends).
/// </summary>
internal sealed class ComputedMap
{
    private readonly MapSampler fine, coarse;
    private readonly double[] fineValues, coarseValues;

    private ComputedMap(FieldMap map, FieldMap below, MapQuantity quantity, Func<double, CancellationToken, PatchResponse> patch)
    {
        Patch = patch;
        (Map, Quantity, fine, coarse) = (map, quantity, new(map), new(below));
        (fineValues, coarseValues) = (Of(map, quantity), Of(below, quantity));
        (Point2 low, Point2 high) = map.Bounds();
        (Centre, Size, Extent) = (new((low.X + high.X) / 2, (low.Y + high.Y) / 2), Math.Max(high.X - low.X, high.Y - low.Y), high - low);
    }

    /// <summary>The map on the finer mesh.</summary>
    public FieldMap Map { get; }

    /// <summary>Makes the response to a patch of some width, metres; costs a factorisation.</summary>
    public Func<double, CancellationToken, PatchResponse> Patch { get; }

    /// <summary>What it shows.</summary>
    public MapQuantity Quantity { get; }

    /// <summary>Middle of the bounding box, metres.</summary>
    public Point2 Centre { get; }

    /// <summary>Longer side of the bounding box, metres.</summary>
    public double Size { get; }

    /// <summary>Sides of the bounding box, metres.</summary>
    public Point2 Extent { get; }

    /// <summary>Smallest and largest value of the nodes.</summary>
    public (double Low, double High) Range => (fineValues.Min(), fineValues.Max());

    /// <summary>Solves the coarser mesh from the finer one's solution.</summary>
    /// <exception cref="FitException">It has no solution.</exception>
    public static ComputedMap Of(MeshPair meshes, FieldMap map, Wiring wiring, MapQuantity quantity, CancellationToken cancel)
    {
        FieldLevel level = meshes.Coarse;
        FieldSpace space = level.Space;

        double[] u = Unknowns(level, map);
        var newton = new NewtonSolver(level);
        NewtonOutcome outcome = newton.Solve(u, wiring.Source, wiring.Drain, map.Current, cancel);
        newton.Release();
        if (!outcome.Converged)
        {
            throw new FitException("The coarse mesh has no solution at that current; drive less or extend the law.");
        }

        FieldMap below = FieldMapBuilder.Build(space, level.Equations.Law, u, wiring.Drain, wiring.Name, map.Current, 0);

        // A patch needs triangles of its own size: the split, unless it is large.
        return meshes.Fine.Space.Size > MostForPatch
            ? new(map, below, quantity, (width, stop) => new(level, u, below, wiring.Drain, quantity, width, stop))
            : new(map, below, quantity, (width, stop) => new(meshes.Fine, Unknowns(meshes.Fine, map), map, wiring.Drain, quantity, width, stop));
    }

    private const int MostForPatch = 40_000;

    // The last unknown is the zero of the potential, which the solution's own drain need not be.
    private static double[] Unknowns(FieldLevel level, FieldMap map)
    {
        // Nodes of the coarse mesh come first in its split.
        FieldSpace space = level.Space;
        double[] u = new double[level.Equations.Length];
        for (int n = 0; n < space.NodeCount; n++)
        {
            u[space.Unknown[n]] = map.Potential[n];
        }

        for (int c = 0; c < map.ContactPotential.Length; c++)
        {
            u[space.ContactUnknown[c]] = map.ContactPotential[c];
        }

        double zero = u[^1];
        for (int i = 0; i < u.Length; i++)
        {
            u[i] -= zero;
        }

        return u;
    }

    /// <summary>Value at a place; null off the sheet.</summary>
    public double? Value(Point2 at) => fine.Value(fineValues, at.X, at.Y);

    /// <summary>Value of the nearest node of the rim.</summary>
    public double AtRim(Point2 at) => fineValues[fine.NearestRim(at.X, at.Y).Node];

    /// <summary>What the split adds to the coarser mesh at a place; 0 off the sheet.</summary>
    public double Error(Point2 at) => fine.Value(fineValues, at.X, at.Y) - coarse.Value(coarseValues, at.X, at.Y) ?? 0;

    private static double[] Of(FieldMap map, MapQuantity quantity) =>
        quantity == MapQuantity.Potential ? map.Potential : [.. map.Ex.Zip(map.Ey, (x, y) => Math.Sqrt((x * x) + (y * y)))];
}
