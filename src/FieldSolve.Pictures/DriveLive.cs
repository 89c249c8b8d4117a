using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>What the live report of a drive shows.</summary>
internal static class DriveLive
{
    /// <summary>Collects maps and charts; wirings without frames have no map.</summary>
    public static LiveData Of(DriveResult result)
    {
        SheetDevice device = result.Device;
        LiveData data = new() { Title = device.Title };
        Dictionary<string, (string Id, int[] Index)> places = [];
        if (result.Frames.Count > 0)
        {
            PotentialFrame first = result.Frames[0];
            LiveMesh mesh = new(first.X, first.Y, first.Nodes);
            data.Meshes.Add(mesh);
            data.Laws.Add(LiveDevice.Law(device, result.Frames.GroupBy(f => f.Wiring).Select(g => (mesh, g.MaxBy(f => Math.Abs(f.Current))!.Potential))));
            for (int w = 0; w < device.Wirings.Count; w++)
            {
                Wiring wiring = device.Wirings[w];
                PotentialFrame[] frames = [.. result.Frames.Where(f => f.Wiring == wiring.Name && ReferenceEquals(f.Nodes, first.Nodes)).OrderBy(f => f.CurrentIndex)];
                if (frames.Length > 0)
                {
                    LiveMap map = Map(result, w, frames);
                    data.Maps.Add(map);
                    places[wiring.Name] = (map.Id, [.. frames.Select(f => f.CurrentIndex)]);
                }
            }
        }

        data.Charts.AddRange(Charts(result, places));
        return data;
    }

    private static LiveMap Map(DriveResult result, int w, PotentialFrame[] frames)
    {
        SheetDevice device = result.Device;
        Wiring wiring = device.Wirings[w];
        int missing = (device.Drive?.Currents.Count ?? frames.Length) - frames.Length;
        return new(
            $"map-{w}", wiring.Name, "current", "A", 0, 0,
            result.Summaries.FirstOrDefault(s => s.Wiring == wiring.Name)?.DirectionDegrees ?? 0,
            missing > 0 ? $"{missing} of the drive's currents have no map here: the run was too large or did not reach them." : "",
            LiveDevice.Rim(device), LiveDevice.Contacts(device, wiring),
            [.. frames.Select(f => new LiveFrame(SiScale.Text(f.Current, "A"), f.Current, f.Potential, f.ContactPotential))]);
    }

    private static IEnumerable<LiveChart> Charts(DriveResult result, Dictionary<string, (string Id, int[] Index)> places)
    {
        SheetDevice device = result.Device;
        double[] currents = [.. device.Drive?.Currents ?? []];
        int[] Frames(string wiring, IEnumerable<double> at) => places.TryGetValue(wiring, out (string Id, int[] Index) place)
            ? [.. at.Select(i => Array.IndexOf(place.Index, Array.IndexOf(currents, i)))] : [];

        LiveView? View(string label, string pair, string axis, bool reversed, Func<Reading, double?> part, Func<Reading, double?> error)
        {
            List<LiveSeries> all = [];
            for (int w = 0; w < device.Wirings.Count; w++)
            {
                string name = device.Wirings[w].Name;
                CurveRow[] rows = [.. (reversed ? result.Rows.Concat(result.ReversedRows) : result.Rows)
                    .Where(r => r.Wiring == name && r.Of(pair) is { } v && part(v) is { } y && double.IsFinite(y)).DistinctBy(r => r.Current).OrderBy(r => r.Current)];
                if (rows.Length > 0)
                {
                    all.Add(new(
                        name, w, [.. rows.Select(r => r.Current)], [.. rows.Select(r => part(r.Of(pair)!)!.Value)], [.. rows.Select(r => error(r.Of(pair)!) ?? 0)],
                        [.. rows.Select(r => r.Status != RowStatus.Ok)], places.TryGetValue(name, out (string Id, int[] Index) place) ? place.Id : null,
                        Frames(name, rows.Select(r => r.Current))));
                }
            }

            return all.Count == 0 ? null : new(label, "current", "A", axis, "V", all);
        }

        List<LiveView?> views = [];
        string[] pairs = [.. device.Wirings.SelectMany(w => w.Pairs).Select(p => p.Name).Distinct(), "source"];
        foreach (string pair in pairs.OrderBy(p => p switch { "along" => 0, "across" => 1, _ => 2 }))
        {
            string v = pair is "along" or "across" or "source" ? "V_" + pair : pair;
            views.Add(View(v, pair, v, true, r => r.Value, r => r.Error));
            views.Add(View(v + ", odd part", pair, v + ", odd", false, r => r.Odd, r => r.Error));
            views.Add(View(v + ", even part", pair, v + ", even", false, r => r.Even, r => r.EvenError));
        }

        if (views.OfType<LiveView>().ToArray() is { Length: > 0 } curves)
        {
            yield return new("curves", "Voltages against current", "Bars are numerical errors. Ringed points are not 'ok' in the tables.", curves);
        }

        if (Even(result, places, Frames) is { } even)
        {
            yield return new(
                "even", "Even across voltage against the square of the odd along voltage",
                "Lines: least squares over the rows within the law.", [even]);
        }

        if (RefinementChart(result) is { } refinement)
        {
            yield return refinement;
        }
    }

    /// <summary>Estimated errors from mesh to mesh; null without levels.</summary>
    public static LiveChart? RefinementChart(DriveResult result) =>
        Refinement(result) is { } view ? new("refinement", "Error from mesh to mesh", "Ringed: above the wanted error.", [view]) : null;

    // Largest estimated error over the wanted one, level by level: a straight line down in logarithmic axes.
    private static LiveView? Refinement(DriveResult result)
    {
        List<LiveSeries> all = [];
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            foreach ((string part, string label) in new[] { ("value", "voltages"), ("even", "even parts") })
            {
                (double X, double Y)[] points = [.. result.Levels.Select(l => ((double)l.Unknowns, l.Estimates
                    .Where(e => e.Wiring == name && e.Part == part && e.Wanted > 0).Select(e => e.Error / e.Wanted).Where(double.IsFinite).DefaultIfEmpty(0).Max()))
                    .Where(p => p.Item2 > 0)];
                if (points.Length > 0)
                {
                    all.Add(new($"{name}, {label}", all.Count, [.. points.Select(p => p.X)], [.. points.Select(p => p.Y)], [], [.. points.Select(p => p.Y > 1)], null, []));
                }
            }
        }

        return all.Count == 0 ? null : new("estimated error over wanted error", "unknowns", "", "largest estimated error over the wanted one", "", all) { Logarithmic = true };
    }

    private static LiveView? Even(DriveResult result, Dictionary<string, (string Id, int[] Index)> places, Func<string, IEnumerable<double>, int[]> frames)
    {
        List<LiveSeries> all = [];
        for (int w = 0; w < result.Device.Wirings.Count && !result.Device.Law.IsLinear; w++)
        {
            string name = result.Device.Wirings[w].Name;
            CurveRow[] rows = [.. result.Rows.Where(r => r.Wiring == name && r.Of("along")?.Odd is not null && r.Of("across")?.Even is not null)];
            if (rows.Length == 0)
            {
                continue;
            }

            EvenSlope? fit = result.Summaries.FirstOrDefault(s => s.Wiring == name)?.Slope;
            string text = fit is null ? ""
                : $"{ErrorText.In(new(1, ""), fit.Slope, fit.SlopeError)} /V, R² = {(double.IsFinite(fit.RSquared) ? SiScale.Number(fit.RSquared, 6) : "–")}";
            all.Add(new(
                name, w, [.. rows.Select(r => r.Of("along")!.Odd!.Value * r.Of("along")!.Odd!.Value)], [.. rows.Select(r => r.Of("across")!.Even!.Value)],
                [.. rows.Select(r => r.Of("across")!.EvenError ?? 0)], [.. rows.Select(r => r.Status != RowStatus.Ok)],
                places.TryGetValue(name, out (string Id, int[] Index) place) ? place.Id : null, frames(name, rows.Select(r => r.Current)),
                fit is null ? null : (fit.Slope, fit.Intercept), text));
        }

        return all.Count == 0 ? null : new("even part", "V_along, odd, squared", "V²", "V_across, even", "V", all);
    }
}
