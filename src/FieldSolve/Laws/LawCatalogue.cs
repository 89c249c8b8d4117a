namespace FieldSolve.Laws;

/// <summary>All sheet laws, in the order they are documented. A new law is one file and one line here.</summary>
public static class LawCatalogue
{
    /// <summary>The laws.</summary>
    public static IReadOnlyList<LawKind> Kinds { get; } =
    [
        OhmicLaw.Registration,
        QuadraticLaw.Registration,
        CubicLaw.Registration,
        SaturatingLaw.Registration,
        TableLaw.Registration,
    ];

    /// <summary>The law of that name; null when there is none.</summary>
    /// <param name="name">Value of <c>kind</c> in the device file.</param>
    public static LawKind? Find(string name) => Kinds.FirstOrDefault(k => k.Name == name);
}
