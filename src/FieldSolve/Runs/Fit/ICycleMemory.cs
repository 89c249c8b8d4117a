using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>
/// What harmonics of an AC drive owe to a memory of the sheet (charge over a gate). The states of a fit are quasi-static; this is added to what they give, and measured
/// anew where the fit ended.
/// </summary>
public interface ICycleMemory
{
    /// <summary>Per datum: what the memory adds to the quasi-static voltage and the error of that, V; 0 for DC.</summary>
    /// <param name="device">The device at some values of the free numbers.</param>
    /// <param name="mesh">Of that device.</param>
    /// <param name="measured">Circuits and data.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="FitException">The harmonics cannot be found; the message says why and what to do.</exception>
    IReadOnlyDictionary<MeasuredVoltage, (double Shift, double Error)> Of(SheetDevice device, TriangleMesh mesh, MeasuredVoltages measured, CancellationToken cancel);
}
