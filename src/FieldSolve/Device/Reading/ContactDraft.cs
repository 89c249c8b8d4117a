using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>A contact as read, before it is known whether the whole device is sound.</summary>
/// <param name="Name">Null if it has none, or a faulty one.</param>
/// <param name="NameAt">Where the name stands.</param>
/// <param name="At">Where what places it stands; the members of a ring share it.</param>
internal sealed record ContactDraft(string? Name, Place NameAt, Place At)
{
    /// <summary>The stretch of rim; null for a pad or if faulty.</summary>
    public RimSpan? Span { get; init; }

    /// <summary>The corners of a pad, metres; null for an edge contact or if faulty.</summary>
    public IReadOnlyList<Point2>? Pad { get; init; }

    /// <summary>Ohm metre.</summary>
    public double LineResistance { get; init; }

    /// <summary>Ohm square metre.</summary>
    public double Resistivity { get; init; }

    public ContactPlacement? Placement => Span is null && Pad is null ? null : new(Span, Pad, Pad is not null && Resistivity == 0);

    /// <summary>The contact on a live rim.</summary>
    public Contact Build(Outline live) => ContactShape.On(live, Placement!, Name!, LineResistance, Resistivity);
}

/// <summary>A point tip as read.</summary>
/// <param name="Name">Null if it has none, or a faulty one.</param>
/// <param name="NameAt">Where the name stands.</param>
/// <param name="Place">Where its co-ordinates stand.</param>
/// <param name="At">Metres; null if faulty.</param>
internal sealed record TipDraft(string? Name, Place NameAt, Place Place, Point2? At);

/// <summary>A ring of equal contacts as read.</summary>
/// <param name="Prefix">What the names start with.</param>
/// <param name="First">Index of its first contact.</param>
/// <param name="Count">Number of contacts.</param>
internal sealed record RingDraft(string Prefix, int First, int Count);
