using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What the live report of a fit shows: data with the model, and the residuals.</summary>
internal static class FitLive
{
    private const double Far = 4, Shown = 8;
    private const int CurvePoints = 120, BarLook = 5, CurveLook = 1;

    /// <summary>Collects the charts.</summary>
    public static LiveData Of(FitResult result)
    {
        LiveData data = new() { Title = result.Device.Title };
        LiveView[] curves =
        [
            .. result.Data.GroupBy(d => (d.Pair.Name, d.Datum.Harmonic)).Where(g => g.Select(d => d.Datum.Current).Distinct().Count() > 1)
                .Select(g => Curves(result, [.. g], FitPictures.Quantity(g.Key.Name, g.Key.Harmonic))),
        ];
        if (curves.Length > 0)
        {
            data.Charts.Add(new("fit-curves", "Data and model", "Points: measured, bars: their standard deviations; lines join the fitted model at the same currents. Ringed: more than four standard deviations away.", curves));
        }

        if (result.Data.Count > 1)
        {
            data.Charts.Add(new("fit-residuals", "Residuals", "Measured less model in standard deviations. Ringed: more than four.", [Order(result)]));
        }

        if (result.Data.Count >= 10)
        {
            data.Charts.Add(new("fit-histogram", "How often", "Residuals in standard deviations with the normal curve; those beyond eight stand in the outermost bars.", [Histogram([.. result.Data.Select(d => Math.Clamp(d.Residual, -Shown, Shown))])]));
        }

        return data;
    }

    private static LiveView Curves(FitResult result, FittedVoltage[] data, string quantity)
    {
        string rms = data[0].Datum.Harmonic is null ? "" : ", RMS";
        string[] wirings = [.. result.Measured.Circuits.Select(c => c.Wiring.Name).Distinct()];
        List<LiveSeries> all = [];
        for (int w = 0; w < wirings.Length; w++)
        {
            FittedVoltage[] own = [.. data.Where(d => d.Circuit.Wiring.Name == wirings[w]).OrderBy(d => d.Datum.Current)];
            if (own.Length > 0)
            {
                double[] x = [.. own.Select(d => d.Datum.Current)];
                all.Add(new(
                    wirings[w], w, x, [.. own.Select(d => d.Datum.Value)], [.. own.Select(d => d.Datum.Sigma)], [.. own.Select(d => Math.Abs(d.Residual) > Far)], null, [])
                {
                    Curve = (x, [.. own.Select(d => d.Model)]),
                });
            }
        }

        return new(quantity, "current" + rms, "A", quantity + rms, "V", all) { ErrorName = "standard deviation" };
    }

    private static LiveView Order(FitResult result)
    {
        double[] at = [.. Enumerable.Range(1, result.Data.Count).Select(k => (double)k)], ends = [0, result.Data.Count + 1];
        LiveSeries Level(string name, double level) => new(name, 6, [], [], [], [], null, []) { Curve = (ends, [level, level]) };
        return new("residuals in the order of the data", "datum", "", "(measured − model) / σ", "",
        [
            new("data", 0, at, [.. result.Data.Select(d => d.Residual)], [], [.. result.Data.Select(d => Math.Abs(d.Residual) > Far)], null, [])
            {
                // Each stands alone: no line from one to the next.
                Curve = ([], []),
            },
            Level("+2 σ", 2), Level("−2 σ", -2),
        ]);
    }

    private static LiveView Histogram(double[] residuals)
    {
        double low = residuals.Min(), span = residuals.Max() - low;
        double[] counts = span > 0 ? HistogramPicture.Counts(residuals) : [residuals.Length];
        double width = span > 0 ? span / counts.Length : 1;
        double[] edges = [.. Enumerable.Range(0, counts.Length + 1).Select(k => low + (k * width))], fine = [.. Enumerable.Range(0, CurvePoints + 1).Select(k => low + (counts.Length * width * k / CurvePoints))];
        return new("residuals", "(measured − model) / σ", "", "data", "",
        [
            new("data", BarLook, edges, counts, [], [], null, []),
            new("normal curve", CurveLook, [], [], [], [], null, [])
            {
                Curve = (fine, [.. fine.Select(z => residuals.Length * width * Math.Exp(-z * z / 2) / Math.Sqrt(2 * Math.PI))]),
            },
        ])
        { Kind = "histogram" };
    }
}
