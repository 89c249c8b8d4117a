using NetTopologySuite.Geometries;

namespace FieldSolve.Geometry;

/// <summary>
/// The sheet as closed loops of curves with the sheet to the left: the outer loop first (counter-clockwise), then the holes (clockwise).
/// </summary>
public sealed class Outline
{
    /// <summary>
    /// Takes the loops in either direction and turns the outer one (the first) counter-clockwise and the others clockwise.
    /// Checks nothing else: see <see cref="Validate"/>.
    /// </summary>
    /// <param name="loops">Each loop's pieces, end to start.</param>
    public Outline(IReadOnlyList<IReadOnlyList<Curve>> loops)
    {
        Loops = loops;
    }

    /// <summary>The loops; each piece starts where the one before it ends.</summary>
    public IReadOnlyList<IReadOnlyList<Curve>> Loops { get; }

    /// <summary>Length of the diagonal of the smallest upright rectangle about the sheet, metres.</summary>
    public double Size => throw new NotSupportedException();

    /// <summary>Area of the sheet, holes taken off, square metres; exact with arcs.</summary>
    public double Area => throw new NotSupportedException();

    /// <summary>Length of a loop, metres.</summary>
    public double LoopLength(int loop) => throw new NotSupportedException();

    /// <summary>The point at an arc length (metres, any sign, taken round the loop) from the loop's first point.</summary>
    public Point2 At(int loop, double s) => throw new NotSupportedException();

    /// <summary>The place of the whole rim nearest to a point.</summary>
    public RimPlace Nearest(Point2 p) => throw new NotSupportedException();

    /// <summary>The place of one loop nearest to a point.</summary>
    public RimPlace NearestOn(int loop, Point2 p) => throw new NotSupportedException();

    /// <summary>The pieces that cover a span, in the loop's direction.</summary>
    public IReadOnlyList<Curve> Stretch(RimSpan span) => throw new NotSupportedException();

    /// <summary>The span between two places of one loop, the shorter way round.</summary>
    /// <exception cref="ArgumentException">The places are on different loops, or the same place.</exception>
    public RimSpan Between(RimPlace a, RimPlace b) => throw new NotSupportedException();

    /// <summary>Whether a point is on the sheet; a point on the rim counts as on it.</summary>
    public bool Contains(Point2 p) => throw new NotSupportedException();

    /// <summary>The sheet without a dead edge of this width (metres, 0 or more) along its whole rim.</summary>
    /// <exception cref="LayoutException">Nothing is left, or several pieces.</exception>
    public Outline Inset(double distance) => throw new NotSupportedException();

    /// <summary>Everything wrong with the outline; empty if it is sound.</summary>
    public IReadOnlyList<LayoutProblem> Validate() => throw new NotSupportedException();

    /// <summary>An outline with straight edges from a polygon; coincident neighbouring corners are dropped.</summary>
    /// <param name="polygon">Shell and holes.</param>
    /// <param name="scale">Metres per unit of the polygon.</param>
    /// <exception cref="LayoutException">A ring has fewer than three distinct corners.</exception>
    public static Outline FromPolygon(Polygon polygon, double scale) => throw new NotSupportedException();
}
