namespace FieldSolve.Device;

/// <summary>What came of reading a device file: a device, or the faults that forbid it.</summary>
/// <param name="Device">Null when there are faults.</param>
/// <param name="Faults">All faults of the file, in the order of their places; empty when the device is good.</param>
public sealed record DeviceReading(SheetDevice? Device, IReadOnlyList<Fault> Faults);
