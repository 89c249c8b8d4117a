namespace FieldSolve.Geometry;

/// <summary>Puts contacts and tips on a sheet and makes the domain the mesher triangulates.</summary>
public static class DomainBuilder
{
    /// <summary>Every problem with where contacts and tips sit; empty if the domain can be built.</summary>
    public static IReadOnlyList<PlacementProblem> Check(
        Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips) => throw new NotSupportedException();

    /// <summary>The domain. Expects placements without problems.</summary>
    /// <exception cref="LayoutException">A placement has a problem.</exception>
    public static Domain Build(
        Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips) => throw new NotSupportedException();
}
