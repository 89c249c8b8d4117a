using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Lockin;

/// <summary>
/// What the charge over a gate does to measured harmonics: the difference between the AC run at the frequency of [drive] and the same without the gate, on one mesh, so
/// that the error of the mesh drops out.
/// </summary>
public sealed class GateMemory : ICycleMemory
{
    /// <inheritdoc/>
    public IReadOnlyDictionary<MeasuredVoltage, (double Shift, double Error)> Of(
        SheetDevice device, TriangleMesh mesh, MeasuredVoltages measured, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(measured);
        double frequency = Frequency(device);
        var found = new Dictionary<MeasuredVoltage, (double, double)>(ReferenceEqualityComparer.Instance);
        foreach (IGrouping<double, MeasuredVoltage> group in measured.Data.Where(d => d.Harmonic is not null && d.Current > 0).GroupBy(d => d.Current).OrderBy(g => g.Key))
        {
            int[] circuits = [.. group.Select(d => d.Circuit).Distinct().Order()];
            SheetDevice there = device with
            {
                Drive = new DriveSpec(group.Key, group.Key, 1, true, [frequency], device.Drive!.Offset),
                Wirings = [.. circuits.Select(c => measured.Circuits[c].Wiring with { Name = Name(c) })],
            };
            var options = new LockinOptions { Frames = false, Mesh = mesh };
            LockinResult with = LockinRun.Execute(there, options, null, cancel), without = LockinRun.Execute(there with { GateCapacitance = null }, options, null, cancel);
            cancel.ThrowIfCancellationRequested();
            foreach (MeasuredVoltage d in group)
            {
                found[d] = Difference(with, without, Name(d.Circuit), measured.Circuits[d.Circuit].Pairs[d.Pair].Name, d);
            }
        }

        return found;
    }

    private static string Name(int circuit) => string.Create(System.Globalization.CultureInfo.InvariantCulture, $"{circuit}");

    // What the fit reads: odd harmonics along sin, even ones along cos.
    private static (double Shift, double Error) Difference(LockinResult with, LockinResult without, string wiring, string pair, MeasuredVoltage d)
    {
        if (d.Harmonic > PhaseNodes.HighestHarmonic)
        {
            throw new FitException($"Line {d.Line} of the data is harmonic {d.Harmonic}; over a gate they are known up to {PhaseNodes.HighestHarmonic}. Leave the line out.");
        }

        HarmonicReading? Find(LockinResult result) => result.Points.FirstOrDefault(p => p.Wiring == wiring)?.Of(pair, d.Harmonic!.Value);
        if (Find(with) is not { } gated || Find(without) is not { } plain)
        {
            throw new FitException($"The sheet over its gate has no periodic solution at the current of line {d.Line} of the data; begin nearer to the truth (start = …), or leave the line out.");
        }

        (double shift, double error) = (gated.X - plain.X, Math.Max(0, gated.Error - plain.Error));
        return d.Harmonic % 2 == 1 || d.Harmonic == 0 ? (shift, error) : (gated.Y - plain.Y, error);
    }

    private static double Frequency(SheetDevice device) => device.Drive is { Frequencies: [var one] } ? one
        : device.Drive is { } drive
            ? throw new FitException(
                $"The data hold harmonics of a sheet over a gate, which depend on the frequency, and [drive] names {(drive.Frequencies.Count == 0 ? "none" : "several")}; give the one of the data, for example frequency = \"17.77 Hz\"",
                drive.At.Line, drive.At.Column)
            : throw new FitException("The data hold harmonics of a sheet over a gate, which depend on the frequency; add a [drive] with the one of the data, for example frequency = \"17.77 Hz\"");
}
