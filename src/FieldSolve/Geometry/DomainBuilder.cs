using System.Globalization;

namespace FieldSolve.Geometry;

/// <summary>Puts contacts and tips on a sheet and makes the domain the mesher triangulates.</summary>
public static class DomainBuilder
{
    /// <summary>
    /// Every problem with where contacts and tips sit, contacts first; empty if the domain can be built. A contact that cannot be
    /// placed at all (for instance a pad that crosses itself) is left out when the others are looked at.
    /// </summary>
    /// <param name="live">The conducting sheet; sound, see <see cref="Outline.Validate"/>.</param>
    /// <param name="contacts">By contact index.</param>
    /// <param name="tips">Point tips, metres.</param>
    /// <exception cref="ArgumentException">A placement has both a span and a pad, or neither.</exception>
    public static IReadOnlyList<PlacementProblem> Check(
        Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips) => Arrange(live, contacts, tips).Problems;

    /// <summary>
    /// The domain: the rim cut at contact ends, ideal pads taken out of the sheet, the edges of other pads drawn into it. Arcs of
    /// the domain are a quarter turn at most. Expects placements without problems.
    /// </summary>
    /// <param name="live">The conducting sheet; sound, see <see cref="Outline.Validate"/>.</param>
    /// <param name="contacts">By contact index.</param>
    /// <param name="tips">Point tips, metres.</param>
    /// <exception cref="LayoutException">A placement has a problem.</exception>
    /// <exception cref="ArgumentException">A placement has both a span and a pad, or neither.</exception>
    public static Domain Build(Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips)
    {
        Arrangement arrangement = Arrange(live, contacts, tips);
        if (arrangement.Problems is [var first, ..])
        {
            string what = first.Contact >= 0 ? "contact" : "tip";
            throw new LayoutException(string.Create(
                CultureInfo.InvariantCulture,
                $"{what} {(first.Contact >= 0 ? first.Contact : first.Tip)} at ({first.At.X:G6} m, {first.At.Y:G6} m): {first.Fault}"));
        }

        return arrangement.Domain();
    }

    private static Arrangement Arrange(Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips)
    {
        ArgumentNullException.ThrowIfNull(live);
        ArgumentNullException.ThrowIfNull(contacts);
        ArgumentNullException.ThrowIfNull(tips);
        return contacts.Any(c => c.Span is null == (c.Pad is null))
            ? throw new ArgumentException("A contact sits either on a stretch of rim or is a pad.", nameof(contacts))
            : new(live, contacts, tips);
    }
}
