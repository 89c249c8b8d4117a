namespace FieldSolve.Turning;

/// <summary>The device has no directions to turn through; the message says what to add.</summary>
public sealed class TurnException(string message) : Exception(message);
