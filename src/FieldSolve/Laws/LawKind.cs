namespace FieldSolve.Laws;

/// <summary>A kind of sheet law: its name and keys in the device file and how it is made from them.</summary>
/// <param name="Name">Value of <c>kind</c> in the file.</param>
/// <param name="Summary">One line for help.</param>
/// <param name="Parameters">Keys in the order they are documented; <c>kind</c> and <c>axis</c> belong to the device.</param>
/// <param name="Build">
/// Makes the law, guarded where it needs it. Throws <see cref="LawException"/> when the values make no sense together.
/// </param>
public sealed record LawKind(
    string Name, string Summary, IReadOnlyList<LawParameter> Parameters, Func<LawValues, ISheetLaw> Build);
