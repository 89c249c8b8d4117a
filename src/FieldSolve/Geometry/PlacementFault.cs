namespace FieldSolve.Geometry;

/// <summary>What is wrong with a contact or a tip on the sheet.</summary>
public enum PlacementFault
{
    /// <summary>An edge contact is wider than the loop of rim it sits on.</summary>
    SpanWiderThanRim,

    /// <summary>An edge contact has no width, or its numbers are not finite, or its loop does not exist.</summary>
    SpanInvalid,

    /// <summary>Two edge contacts share a stretch of rim.</summary>
    SpansOverlap,

    /// <summary>Two edge contacts share an end.</summary>
    SpansTouch,

    /// <summary>No part of a pad lies on the sheet.</summary>
    PadOutside,

    /// <summary>A pad's polygon crosses itself, has no area or fewer than three corners.</summary>
    PadInvalid,

    /// <summary>A pad covers part of an edge contact.</summary>
    PadOverlapsContact,

    /// <summary>A pad touches an edge contact.</summary>
    PadTouchesContact,

    /// <summary>Two pads overlap.</summary>
    PadOverlapsPad,

    /// <summary>Two pads touch.</summary>
    PadsTouch,

    /// <summary>Ideal pads cover the whole sheet.</summary>
    NothingLeft,

    /// <summary>A tip lies off the sheet.</summary>
    TipOutside,

    /// <summary>A tip lies inside the metal of an ideal pad.</summary>
    TipInPad,

    /// <summary>Between a pad's side and the rim, or another side, the sheet runs out into a point of no angle.</summary>
    PadLeavesCusp,
}
