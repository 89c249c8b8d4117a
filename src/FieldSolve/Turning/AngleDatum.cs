using FieldSolve.Device;

namespace FieldSolve.Turning;

/// <summary>A reading in the limit of small drive.</summary>
/// <param name="Odd">V/I, ohm.</param>
/// <param name="OddError">Its numerical error, ohm.</param>
/// <param name="Even">V_even/I², ohm/A; null when one sign was solved or the law is linear.</param>
/// <param name="EvenError">Its numerical error, ohm/A.</param>
internal sealed record WeakReading(double Odd, double OddError, double? Even, double EvenError);

/// <summary>One direction of a turn in the limit of small drive.</summary>
/// <param name="Wiring">The wiring.</param>
/// <param name="Direction">Of the current in the lab frame, radians.</param>
/// <param name="Turn">By how much the crystal axis is turned from the file's, radians.</param>
/// <param name="Along">The along pair; null when absent or not solved.</param>
/// <param name="Across">The across pair likewise.</param>
internal sealed record AngleDatum(Wiring Wiring, double Direction, double Turn, WeakReading? Along, WeakReading? Across)
{
    /// <summary>Direction of the current as seen from the crystal, in a lab frame that turns with it, radians.</summary>
    public double Seen => Direction - Turn;
}
