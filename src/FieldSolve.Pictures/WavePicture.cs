using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>V(t) of the along and across pairs over two cycles at the largest current, all wirings together.</summary>
internal static class WavePicture
{
    private const int MostNamed = 12, PerCycle = 120;
    private const double Cycles = 2;

    /// <summary>Draws the picture; null when nothing converged.</summary>
    public static Figure? Draw(LockinResult result)
    {
        LockinPoint[] points = [.. result.Device.Wirings.Select(w => LockinPoints.Largest(result, w.Name)).OfType<LockinPoint>()];
        double drive = points.Select(p => p.CurrentRms).DefaultIfEmpty(0).Max();
        Plot[] panels = [.. new[] { ("along", "V_along"), ("across", "V_across"), ("source", "V_source") }
            .Select(p => Panel(result, points, p.Item1, p.Item2, drive)).OfType<Plot>()];
        IEnumerable<KeyEntry> key = result.Device.Wirings.Take(MostNamed).Select((w, k) => KeyEntry.Curve(k, Look.Short(w.Name, 18), false));
        return panels.Length == 0 ? null : Figure.Rows(panels, 1, 600, 290).WithKeyRight([.. key]);
    }

    private static Plot? Panel(LockinResult result, LockinPoint[] points, string pair, string quantity, double drive)
    {
        (string Wiring, Waveform Wave)[] waves = [.. points.SelectMany(p => p.Waves.Where(w => w.Pair == pair).Select(w => (p.Wiring, w)))];
        double[] at = [.. Enumerable.Range(0, (int)(Cycles * PerCycle) + 1).Select(k => k / (double)PerCycle)];
        double largest = waves.SelectMany(w => at.Select(t => Math.Abs(w.Wave.At(2 * Math.PI * t)))).DefaultIfEmpty(0).Max();
        if (waves.Length == 0 || largest == 0)
        {
            return null;
        }

        SiScale scale = SiScale.For(largest, "V");
        double offset = result.Device.Drive!.Offset;
        string dc = offset == 0 ? "" : $", offset {SiScale.Text(offset, "A")}";
        Plot plot = Look.NewPlot($"{quantity}, I = {SiScale.Text(drive, "A")} RMS{dc}", "time (cycles of the drive)", $"{quantity} ({scale.Unit})");
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            Wiring wiring = result.Device.Wirings[w];
            foreach ((_, Waveform wave) in waves.Where(v => v.Wiring == wiring.Name))
            {
                Coordinates[] line = [.. at.Select(t => new Coordinates(t, scale.Factor * wave.At(2 * Math.PI * t)))];
                plot.PlottableList.Add(new CurveLine([line]) { Style = KeyEntry.Curve(w, wiring.Name, false) });
            }
        }

        plot.Axes.SetLimitsX(0, Cycles);
        Look.FixMargins(plot);
        return plot;
    }
}
