namespace FieldSolve.Device;

/// <summary>How the wirings of all directions come about.</summary>
/// <param name="Around">Prefix of the ring whose contacts the first wiring is stepped round; null when each wiring of the file is one direction.</param>
/// <param name="Contacts">Indices of the ring's contacts, counter-clockwise; empty without a ring.</param>
public sealed record TurnSpec(string? Around, IReadOnlyList<int> Contacts);
