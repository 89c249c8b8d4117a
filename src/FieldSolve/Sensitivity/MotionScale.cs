using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Sensitivity;

/// <summary>
/// How far a cause may move things when a derivative of places is taken: as far as on the scale of the sheet, or less where a narrow contact, or a neighbour
/// or a corner close by, leaves no more room.
/// </summary>
internal static class MotionScale
{
    // The smallest moves things by ten times the distance below which places count as one.
    private static readonly double[] Shares = [1, 0.1, 0.01, 1e-3, 1e-4];

    // Sides that meet within this many tolerances of the outline would, on a small change, still be taken as meeting.
    private const double Meeting = 4;

    /// <summary>Scales to try one after the other, the largest first; see <see cref="NodeMotion.Velocity"/>.</summary>
    public static IEnumerable<double> Of(SheetDevice device, CauseKind kind, CauseTarget target)
    {
        double large = kind.LargeChange(device);
        return MetalMeets(device, kind, target) ? [large] : Shares.Select(s => s * large);
    }

    /// <summary>Velocities at the largest scale that has them; null where there is none.</summary>
    public static MotionField? Velocity(NodeMotion motion, SheetDevice device, CauseKind kind, CauseTarget target, Func<double, Domain?> domain) =>
        Of(device, kind, target).Select(scale => motion.Velocity(domain, scale)).FirstOrDefault(f => f is not null);

    /// <summary>Whether there is a scale with velocities.</summary>
    public static bool IsSmooth(SheetDevice device, CauseKind kind, CauseTarget target, Func<double, Domain?> domain) =>
        Of(device, kind, target).Any(scale => NodeMotion.IsSmooth(device.Domain, domain, scale));

    /// <summary>Why a cause has no velocities, as a clause; and whether it is for want of room.</summary>
    public static (bool NoRoom, string Why) Obstacle(SheetDevice device, SheetCause cause)
    {
        if (MetalMeets(device, cause.Kind, cause.Target))
        {
            return (false, "a corner or side of the metal lies on the edge of the sheet, or a point on the edge of the metal");
        }

        double least = Of(device, cause.Kind, cause.Target).Last() * NodeMotion.Reach;
        foreach (double by in new[] { -least, least })
        {
            if (Fault(device, cause, by) is { } fault)
            {
                string change = cause.Kind.Dimension == Dimension.Angle
                    ? string.Create(CultureInfo.InvariantCulture, $"{by / cause.UnitSize:G2} deg") : SiText.Of(by, "m");
                return (true, $"at {change} {fault}");
            }
        }

        return (false, "an edge of the sheet or of the metal appears, vanishes or meets another on the smallest change");
    }

    // Why a value of a cause makes no device; null when it makes one.
    private static string? Fault(SheetDevice device, SheetCause cause, double by)
    {
        var draft = new DeviceDraft(device);
        try
        {
            cause.Kind.Apply(draft, cause.Target, by);
        }
        catch (LayoutException e)
        {
            return e.Message;
        }

        return DomainBuilder.Check(draft.Live, draft.Contacts, [.. device.Tips.Select(t => t.At)]) is not [var first, ..] ? null
            : first.Contact < 0 ? $"the point '{device.Tips[first.Tip].Name}' leaves the sheet"
            : first.OtherContact < 0 ? $"contact '{device.Contacts[first.Contact].Name}' is misplaced"
            : $"contacts '{device.Contacts[first.Contact].Name}' and '{device.Contacts[first.OtherContact].Name}' meet";
    }

    // Whether a pad that moves, or that the rim moves under, meets the rim or a tip in a corner or along a side.
    private static bool MetalMeets(SheetDevice device, CauseKind kind, CauseTarget target)
    {
        Outline live = device.Layout.Live;
        double near = Meeting * live.Tolerance;
        IEnumerable<int> concerned = kind.Scope == CauseScope.Sheet ? Enumerable.Range(0, device.Contacts.Count) : target.Contacts;
        foreach (IReadOnlyList<Point2> pad in concerned.Select(c => device.Layout.Contacts[c].Pad).OfType<IReadOnlyList<Point2>>())
        {
            Curve[] sides = OutlinePolygons.Segments(pad);
            if (pad.Any(p => live.Pieces[live.NearestPiece(p)].Distance(p) <= near)
                || live.Pieces.Select(c => c.Start).Concat(device.Tips.Select(t => t.At)).Any(p => sides.Any(s => s.Distance(p) <= near)))
            {
                return true;
            }
        }

        return false;
    }
}
