using System.Globalization;

namespace FieldSolve.Device;

/// <summary>One thing that is wrong with an input file.</summary>
/// <param name="File">Path as the user gave it.</param>
/// <param name="Line">1-based; 1 when the fault is about the whole file.</param>
/// <param name="Column">1-based.</param>
/// <param name="Message">What is wrong and what would be right; one line.</param>
public sealed record Fault(string File, int Line, int Column, string Message)
{
    /// <summary>FILE:LINE:COLUMN: message.</summary>
    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"{File}:{Line}:{Column}: {Message}");
}
