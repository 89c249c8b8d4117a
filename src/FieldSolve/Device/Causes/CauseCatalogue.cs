using FieldSolve.Laws;

namespace FieldSolve.Device;

/// <summary>All kinds of causes of error, in the order they are documented. A new kind is one file and one line here.</summary>
public static class CauseCatalogue
{
    /// <summary>The kinds. Every numeric parameter of every law is one too.</summary>
    public static IReadOnlyList<CauseKind> Kinds { get; } =
    [
        new PositionCause(),
        new WidthCause(),
        new ResistanceCause(),
        new ResistivityCause(),
        new PadShiftCause(alongX: true),
        new PadShiftCause(alongX: false),
        new PadRotationCause(),
        new PadGrowthCause(),
        new OutlineGrowthCause(),
        new AxisCause(),
        .. LawCatalogue.Kinds.SelectMany(k => k.Parameters).Where(p => !p.IsFile).DistinctBy(p => p.Key).Select(p => new LawCause(p)),
        new LayerShiftCause(alongX: true),
        new LayerShiftCause(alongX: false),
        new LayerRotationCause(),
        new LayerWidthCause(),
    ];

    /// <summary>The kinds of one scope.</summary>
    public static IEnumerable<CauseKind> Of(CauseScope scope) => Kinds.Where(k => k.Scope == scope);

    /// <summary>The kind of that key and scope; null when there is none.</summary>
    public static CauseKind? Find(string key, CauseScope scope) => Kinds.FirstOrDefault(k => k.Key == key && k.Scope == scope);
}
