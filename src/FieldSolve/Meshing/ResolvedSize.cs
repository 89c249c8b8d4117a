using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>A size field that never asks for less than a double can resolve at the sheet's coordinates, and never for nonsense.</summary>
internal sealed class ResolvedSize : ISizeField
{
    // An edge this many last places long still has directions good to a thousandth.
    private const double LastPlaces = 4096;
    private readonly ISizeField inner;
    private readonly double smallest;

    public ResolvedSize(ISizeField inner, Domain domain)
    {
        this.inner = inner;
        double largest = domain.Vertices.Max(p => Math.Max(Math.Abs(p.X), Math.Abs(p.Y)));
        smallest = LastPlaces * Math.BitIncrement(largest) - (LastPlaces * largest);
    }

    public double At(double x, double y)
    {
        double h = inner.At(x, y);
        if (!(h > 0))
        {
            throw new MeshException(FormattableString.Invariant($"The wanted edge length at ({x:G9}, {y:G9}) m is {h}. It must be greater than zero."));
        }

        return Math.Max(h, smallest);
    }
}
