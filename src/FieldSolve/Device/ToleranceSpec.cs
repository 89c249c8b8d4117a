namespace FieldSolve.Device;

/// <summary>The causes of error that [tolerance] names.</summary>
/// <param name="Causes">In the order: contacts, sheet, layers.</param>
/// <param name="Notes">Causes given for all contacts that some contacts cannot have, in words.</param>
public sealed record ToleranceSpec(IReadOnlyList<SheetCause> Causes, IReadOnlyList<string> Notes);
