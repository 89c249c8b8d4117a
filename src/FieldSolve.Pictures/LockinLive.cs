using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>What the live report of an AC run shows: the cycle of each wiring as a map, waves, harmonics and the second harmonic across.</summary>
internal static class LockinLive
{
    private const int PerCycle = 96, Points = 24, Highest = 3;

    // Some 27 MB of report at the most. A larger run shows fewer phases.
    private const int MostNodalValues = 5_000_000;
    private static readonly string[] Pairs = ["along", "across", "source"];

    /// <summary>Collects maps and charts.</summary>
    public static LiveData Of(LockinResult result)
    {
        SheetDevice device = result.Device;
        LiveData data = new() { Title = device.Title };
        Dictionary<string, (string Id, double[] Phases)> places = [];
        if (result.Frames.Count > 0)
        {
            int stride = Stride(result);
            List<int[]> meshes = [];
            List<(LiveMesh, double[])> strongest = [];
            for (int w = 0; w < device.Wirings.Count; w++)
            {
                Wiring wiring = device.Wirings[w];
                CycleFrame[] frames = [.. result.Frames.Where(f => f.Wiring == wiring.Name).Where((_, k) => k % stride == 0)];
                if (frames.Length == 0)
                {
                    continue;
                }

                FieldMap first = frames[0].Map;
                int mesh = meshes.FindIndex(n => ReferenceEquals(n, first.Nodes));
                if (mesh < 0)
                {
                    mesh = meshes.Count;
                    meshes.Add(first.Nodes);
                    data.Meshes.Add(new(first.X, first.Y, first.Nodes));
                }

                strongest.AddRange(frames.Select(f => f.Map.Potential).Distinct().Select(p => (data.Meshes[mesh], p)));
                LiveMap map = new(
                    $"map-{w}", wiring.Name, "phase", "°", mesh, 0, CurrentDirection.Degrees(device, wiring), Note(frames[0]) + (stride > 1 ? " The run was too large to keep every phase." : ""),
                    LiveDevice.Rim(device), LiveDevice.Contacts(device, wiring),
                    [.. frames.Select(f => new LiveFrame(
                        $"{SiScale.Number(f.Phase, 5)}°, I = {SiScale.Text(f.Map.Current, "A", 3)}", f.Phase, f.Map.Potential, f.Map.ContactPotential))]);
                data.Maps.Add(map);
                places[wiring.Name] = (map.Id, [.. frames.Select(f => f.Phase)]);
            }

            data.Laws.Add(LiveDevice.Law(device, strongest));
        }

        data.Charts.AddRange(Charts(result, places));
        return data;
    }

    private static string Note(CycleFrame frame) =>
        $"One cycle of the drive at {SiScale.Text(frame.CurrentRms, "A")} RMS{(frame.Frequency is { } f ? $" and {SiScale.Text(f, "Hz")}" : "")}; the current goes like the sine of the phase.";

    // Phases of the same current share a map and are sent once.
    private static int Stride(LockinResult result)
    {
        foreach (int stride in (int[])[1, 2, 3, 4, 6])
        {
            long values = result.Frames.GroupBy(f => f.Wiring).Sum(g => g.Where((_, k) => k % stride == 0).Select(f => f.Map.Potential).Distinct().Sum(p => (long)p.Length));
            if (values <= MostNodalValues)
            {
                return stride;
            }
        }

        return 12;
    }

    private static IEnumerable<LiveChart> Charts(LockinResult result, Dictionary<string, (string Id, double[] Phases)> places)
    {
        if (Pairs.Select(p => Waves(result, p, places)).OfType<LiveView>().ToArray() is { Length: > 0 } waves)
        {
            string offset = result.Device.Drive!.Offset is not 0 and var dc ? $" and an offset of {SiScale.Text(dc, "A")}" : "";
            yield return new(
                "waves", "Voltages over a cycle",
                $"At the largest current{offset}, put together from the harmonics; the current crosses zero upwards at phase 0. Bars: errors of the harmonics added up.", waves);
        }

        LiveView[] growth = [.. result.Device.Wirings.SelectMany(w => Pairs.Select(p => Growth(result, w.Name, p)).OfType<LiveView>().Take(2))];
        if (growth.Length > 0)
        {
            yield return new(
                "harmonics", "Harmonics against current",
                "Lines: slopes 1, 2 and 3 through the smallest current, as a weak non-linearity gives them. Only readings above their error bar; ringed ones are not 'ok' in the tables.", growth);
        }

        if (Second(result) is { } second)
        {
            yield return new(
                "second", "Second harmonic across against the squared first harmonic along",
                "RMS both. Lines: least squares. If V_across = k V_along² at every moment, the slope is −k/√2.", [second]);
        }

        LiveView[] spectra = [.. result.Device.Wirings.SelectMany(w => Pairs.SelectMany(p => Enumerable.Range(1, 2).Select(h => Spectrum(result, w.Name, p, h)))).OfType<LiveView>()];
        if (spectra.Length > 0)
        {
            yield return new("frequency", "Harmonics against frequency", "At the largest current; the gate's charge turns and shrinks the harmonics.", spectra);
        }

        if (DriveLive.RefinementChart(result.Common()) is { } refinement)
        {
            yield return refinement;
        }
    }

    private static LiveView? Waves(LockinResult result, string pair, Dictionary<string, (string Id, double[] Phases)> places)
    {
        List<LiveSeries> all = [];
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            if (LockinPoints.Largest(result, name) is not { } point || point.Waves.FirstOrDefault(v => v.Pair == pair) is not { } wave)
            {
                continue;
            }

            double[] phases = [.. Enumerable.Range(0, Points).Select(k => 360.0 * k / Points)], fine = [.. Enumerable.Range(0, PerCycle + 1).Select(k => 360.0 * k / PerCycle)];
            double At(double phase) => wave.At(phase * Math.PI / 180);

            // |sin| + |cos| is at most √2, and RMS values are √2 below peaks.
            double error = point.Readings.Where(r => r.Pair == pair).Sum(r => r.Harmonic == 0 ? r.Error : 2 * r.Error);
            (string? map, double[] kept) = places.TryGetValue(name, out (string Id, double[] Phases) place) ? place : (null, []);
            all.Add(new(
                name, w, phases, [.. phases.Select(At)], [.. phases.Select(_ => error)], [.. phases.Select(_ => point.Status != RowStatus.Ok)], map,
                map is null ? [] : [.. phases.Select(p => Array.FindIndex(kept, k => Math.Abs(k - p) < 1e-6))])
            {
                Curve = (fine, [.. fine.Select(At)]),
            });
        }

        return all.Count == 0 ? null : new($"V_{pair}", "phase of the drive", "°", $"V_{pair}", "V", all);
    }

    private static LiveView? Growth(LockinResult result, string wiring, string pair)
    {
        LockinPoint[] points = [.. LockinPoints.Row(result, wiring).Where(p => p.CurrentRms > 0)];
        List<LiveSeries> all = [];
        for (int h = 1; h <= Highest; h++)
        {
            (double I, HarmonicReading R)[] own = [.. points.Select(p => (p.CurrentRms, R: p.Of(pair, h)!)).Where(p => p.R is not null && p.R.R > p.R.Error)];
            if (own.Length < 2)
            {
                continue;
            }

            HarmonicSlope? fit = result.Slopes.LastOrDefault(s => s.Wiring == wiring && s.Pair == pair && s.Harmonic == h);
            double from = own[0].I, ratio = own[^1].I / from;
            double[] currents = [.. Enumerable.Range(0, 41).Select(k => from * Math.Pow(ratio, k / 40.0))];
            int order = h;
            all.Add(new(
                $"harmonic {SiScale.Number(h)}", h - 1, [.. own.Select(p => p.I)], [.. own.Select(p => p.R.R)], [.. own.Select(p => p.R.Error)],
                [.. own.Select(p => p.R.Status != RowStatus.Ok)], null, [], null, fit is null ? "" : $"fitted slope {SiScale.Number(fit.Slope, 4)}")
            {
                Curve = (currents, [.. currents.Select(i => own[0].R.R * Math.Pow(i / from, order))]),
            });
        }

        return all.Count == 0 ? null : new($"V_{pair}, wiring {wiring}", "current, RMS", "A", $"V_{pair}, RMS", "V", all) { Logarithmic = true };
    }

    private static LiveView? Second(LockinResult result)
    {
        List<LiveSeries> all = [];
        for (int w = 0; w < result.Device.Wirings.Count && !result.Device.Law.IsLinear; w++)
        {
            string name = result.Device.Wirings[w].Name;
            (double X, HarmonicReading Y)[] own =
            [
                .. LockinPoints.Row(result, name).Select(p => (Along: p.Of("along", 1), Across: p.Of("across", 2)))
                    .Where(p => p.Along is not null && p.Across is not null).Select(p => (p.Along!.R * p.Along.R, p.Across!)),
            ];
            if (own.Length == 0)
            {
                continue;
            }

            EvenSlope? fit = result.Lines.LastOrDefault(l => l.Wiring == name)?.Line;
            (double, double)? line = fit is not null && double.IsFinite(fit.Slope) ? (fit.Slope, fit.Intercept) : null;
            all.Add(new(
                name, w, [.. own.Select(p => p.X)], [.. own.Select(p => p.Y.Y)], [.. own.Select(p => p.Y.Error)], [.. own.Select(p => p.Y.Status != RowStatus.Ok)], null, [], line,
                line is null ? "" : $"{ErrorText.In(new(1, ""), fit!.Slope, fit.SlopeError)} /V, R² = {(double.IsFinite(fit.RSquared) ? SiScale.Number(fit.RSquared, 6) : "–")}"));
        }

        return all.Count == 0 ? null : new("second harmonic", "first harmonic of V_along, RMS, squared", "V²", "V_across along cos 2ωt, RMS", "V", all);
    }

    private static LiveView? Spectrum(LockinResult result, string wiring, string pair, int harmonic)
    {
        if (!(result.Device.GateCapacitance > 0) || (harmonic > 1 && result.Device.Law.IsLinear) || LockinPoints.Largest(result, wiring) is not { } last)
        {
            return null;
        }

        (double F, HarmonicReading R)[] own =
        [
            .. result.Points.Where(p => p.Wiring == wiring && p.CurrentRms == last.CurrentRms && p.Frequency is not null)
                .Select(p => (p.Frequency!.Value, p.Of(pair, harmonic)!)).Where(p => p.Item2 is not null).OrderBy(p => p.Item1).DistinctBy(p => p.Item1),
        ];
        if (own.Length < 2 || own.All(p => p.R.R <= p.R.Error))
        {
            return null;
        }

        LiveSeries Part(string name, int look, Func<HarmonicReading, double> part) => new(
            name, look, [.. own.Select(p => p.F)], [.. own.Select(p => part(p.R))], [.. own.Select(p => p.R.Error)], [.. own.Select(p => p.R.Status != RowStatus.Ok)], null, []);
        return new(
            $"V_{pair}, harmonic {SiScale.Number(harmonic)}, wiring {wiring}", "frequency", "Hz", $"V_{pair}, RMS", "V",
            [Part("x, along sin", 0, r => r.X), Part("y, along cos", 1, r => r.Y)]);
    }
}
