namespace FieldSolve.Fields;

/// <summary>
/// The potential alone of one wiring at one current, on quadratic triangles: what a live map needs to work out field and current by itself.
/// A fifth of the memory of a <see cref="FieldMap"/>; the frames of a run share their mesh.
/// </summary>
public sealed class PotentialFrame
{
    /// <summary>Nodal values in all frames of a run together: some 27 MB of report at the most. A larger run keeps fewer frames.</summary>
    internal const int MostNodalValues = 5_000_000;

    /// <summary>x of each node, metres.</summary>
    public required double[] X { get; init; }

    /// <summary>y of each node, metres.</summary>
    public required double[] Y { get; init; }

    /// <summary>Six nodes per triangle, counter-clockwise: corners 0, 1, 2, then the middles of edges 01, 12, 20.</summary>
    public required int[] Nodes { get; init; }

    /// <summary>Potential at each node, V; the drain's metal is at 0 V.</summary>
    public required double[] Potential { get; init; }

    /// <summary>Potential of each contact's metal, V, in the device's order.</summary>
    public required double[] ContactPotential { get; init; }

    /// <summary>Name of the wiring.</summary>
    public required string Wiring { get; init; }

    /// <summary>Current, A.</summary>
    public required double Current { get; init; }

    /// <summary>Position in the drive's list of currents.</summary>
    public required int CurrentIndex { get; init; }

    /// <summary>The potential of a map; its arrays are shared.</summary>
    public static PotentialFrame Of(FieldMap map)
    {
        ArgumentNullException.ThrowIfNull(map);
        return new PotentialFrame
        {
            X = map.X,
            Y = map.Y,
            Nodes = map.Nodes,
            Potential = map.Potential,
            ContactPotential = map.ContactPotential,
            Wiring = map.Wiring,
            Current = map.Current,
            CurrentIndex = map.CurrentIndex,
        };
    }

    /// <summary>The frame of a sheet whose every potential is the opposite, at the opposite current.</summary>
    internal PotentialFrame Negated() => new()
    {
        X = X,
        Y = Y,
        Nodes = Nodes,
        Potential = [.. Potential.Select(v => -v)],
        ContactPotential = [.. ContactPotential.Select(v => -v)],
        Wiring = Wiring,
        Current = -Current,
        CurrentIndex = CurrentIndex,
    };

    /// <summary>Takes the potential out of a solution.</summary>
    /// <param name="space">Nodes.</param>
    /// <param name="u">Unknowns, V.</param>
    /// <param name="drain">Contact whose metal is at 0 V in the frame.</param>
    /// <param name="wiring">Name of the wiring.</param>
    /// <param name="current">A.</param>
    /// <param name="currentIndex">Position in the list of currents.</param>
    public static PotentialFrame Of(FieldSpace space, ReadOnlySpan<double> u, int drain, string wiring, double current, int currentIndex)
    {
        ArgumentNullException.ThrowIfNull(space);
        double zero = u[space.ContactUnknown[drain]];
        double[] potential = new double[space.NodeCount], metal = new double[space.ContactUnknown.Length];
        for (int n = 0; n < potential.Length; n++)
        {
            potential[n] = u[space.Unknown[n]] - zero;
        }

        for (int c = 0; c < metal.Length; c++)
        {
            metal[c] = u[space.ContactUnknown[c]] - zero;
        }

        return new PotentialFrame
        {
            X = space.NodeX,
            Y = space.NodeY,
            Nodes = space.Nodes,
            Potential = potential,
            ContactPotential = metal,
            Wiring = wiring,
            Current = current,
            CurrentIndex = currentIndex,
        };
    }
}
