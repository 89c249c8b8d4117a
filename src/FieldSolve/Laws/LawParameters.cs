using FieldSolve.Quantities;

namespace FieldSolve.Laws;

/// <summary>Parameters that several laws share. Apart from the catalogue, so that neither waits for the other's start.</summary>
internal static class LawParameters
{
    /// <summary>a, b, hall: the ohmic part.</summary>
    public static IReadOnlyList<LawParameter> Ohmic { get; } =
    [
        new("a", Dimension.SheetConductance, true, 0, ParameterBound.Positive, "sheet conductance along crystal a"),
        new("b", Dimension.SheetConductance, true, 0, ParameterBound.Positive, "sheet conductance along crystal b"),
        new("hall", Dimension.SheetConductance, false, 0, ParameterBound.Any, "Hall sheet conductance"),
    ];

    /// <summary>d11 … d26: the second-order part.</summary>
    public static IReadOnlyList<LawParameter> Second { get; } = Alike(
        Dimension.QuadraticConductance, "second-order sheet conductance", "d11", "d12", "d16", "d21", "d22", "d26");

    /// <summary>c11 … c22: the third-order part.</summary>
    public static IReadOnlyList<LawParameter> Third { get; } = Alike(
        Dimension.CubicConductance, "third-order sheet conductance", "c11", "c12", "c21", "c22");

    /// <summary>field_limit: infinite when absent.</summary>
    public static LawParameter FieldLimit { get; } = new(
        "field_limit", Dimension.Field, false, double.PositiveInfinity, ParameterBound.Positive, "field beyond which the higher orders fade");

    private static LawParameter[] Alike(Dimension dimension, string meaning, params string[] keys) =>
        [.. keys.Select(key => new LawParameter(key, dimension, false, 0, ParameterBound.Any, meaning))];
}
