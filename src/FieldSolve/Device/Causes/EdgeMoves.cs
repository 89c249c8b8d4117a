using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>What causes share that move contacts along the edge.</summary>
internal static class EdgeMoves
{
    /// <summary>Why a contact's ends cannot move along the edge; null when they can.</summary>
    public static string? Refuse(SheetDevice device, int contact)
    {
        if (device.Layout.Contacts[contact].Span is not { } span)
        {
            return "is a pad; give it 'x', 'y', 'rotation' or 'growth'";
        }

        Outline live = device.Layout.Live;
        return span.Length >= live.LoopLength(span.Loop) - live.Tolerance ? "covers a whole rim and has no ends to move"
            : OutlineGrowth.IsCorner(live, span.Loop, span.From) || OutlineGrowth.IsCorner(live, span.Loop, span.From + span.Length)
                ? "ends at a corner of the sheet, which metal that is a little off does not move"
            : null;
    }

    /// <summary>Moves a contact along the loop's own direction and makes it wider.</summary>
    /// <exception cref="LayoutException">Nothing of the contact is left.</exception>
    public static void Move(DeviceDraft draft, int contact, double along, double wider)
    {
        RimSpan span = draft.Contacts[contact].Span!.Value;
        double length = span.Length + wider;
        if (!(length > draft.Live.Tolerance))
        {
            throw new LayoutException($"nothing is left of contact '{draft.Designed.Contacts[contact].Name}'");
        }

        double from = Outline.Wrapped(span.From + along - (wider / 2), draft.Live.LoopLength(span.Loop));
        draft.Place(contact, draft.Contacts[contact] with { Span = new(span.Loop, from, length) });
    }

    /// <summary>Moves the middle of an edge contact by the part of a displacement along the edge; a pad by all of it.</summary>
    public static void Displace(DeviceDraft draft, int contact, Func<Point2, Point2> place)
    {
        if (draft.Contacts[contact].Pad is { } pad)
        {
            draft.Place(contact, draft.Contacts[contact] with { Pad = [.. pad.Select(place)] });
        }
        else if (Refuse(draft.Designed, contact) is null)
        {
            RimSpan span = draft.Contacts[contact].Span!.Value;
            (int piece, double t) = draft.Live.PieceAt(span.Loop, span.From + (span.Length / 2));
            Curve curve = draft.Live.Pieces[piece];
            Point2 middle = curve.At(t);
            Move(draft, contact, Point2.Dot(place(middle) - middle, curve.Tangent(t)), 0);
        }
    }
}
