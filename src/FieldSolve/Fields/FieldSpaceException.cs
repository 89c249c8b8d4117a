namespace FieldSolve.Fields;

/// <summary>The unknowns of a device cannot be set up, for example because the sheet falls into parts that no metal joins.</summary>
public sealed class FieldSpaceException(string message) : Exception(message);
