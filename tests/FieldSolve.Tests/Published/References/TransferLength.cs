namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// A pad with a specific contact resistivity at the end of a bar, as wide as the bar, one-dimensional: H. H. Berger, Solid-State Electron. 15 (1972) 145;
/// H. Murrmann, D. Widmann, IEEE Trans. Electron Devices 16 (1969) 1022. SI units.
/// </summary>
internal sealed class TransferLength(double sheetResistance, double contactResistivity, double length, double width)
{
    private readonly double scale = Math.Sqrt(sheetResistance * contactResistivity) / width;

    /// <summary>Length over which the current passes into the metal, m.</summary>
    public double Length { get; } = Math.Sqrt(contactResistivity / sheetResistance);

    /// <summary>Potential of the sheet at the front edge of the pad, against the metal, per ampere.</summary>
    public double Front => scale / Math.Tanh(length / Length);

    /// <summary>The same at the far edge.</summary>
    public double End => scale / Math.Sinh(length / Length);
}
