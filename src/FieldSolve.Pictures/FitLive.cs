using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What the live report of a fit shows: data with the model, and the residuals.</summary>
internal static class FitLive
{
    private const double Far = 4, Shown = 8;

    // 95 % point of chi squared with one degree of freedom.
    private const double Level95 = 3.841458820694124;
    private const int CurvePoints = 120, MostNumbers = 40, BarLook = 5, CurveLook = 1;

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

        LiveView[] directions = [.. result.Data.Where(d => d.Datum.Current != 0).GroupBy(d => (d.Pair.Name, d.Datum.Harmonic)).Select(g => Directions(result, [.. g])).OfType<LiveView>()];
        if (directions.Length > 0)
        {
            data.Charts.Add(new("fit-directions", "Data and model against the direction", "At the largest current of each wiring. Points: measured, bars: their standard deviations. Ringed: more than four of them away.", directions));
        }

        if (result.Data.Count > 1)
        {
            data.Charts.Add(new("fit-residuals", "Residuals", "Measured less model in standard deviations. Ringed: more than four.", [Order(result), AgainstCurrent(result)]));
        }

        if (result.Data.Count >= 10)
        {
            data.Charts.Add(new("fit-histogram", "How often", "Residuals in standard deviations with the normal curve; those beyond eight stand in the outermost bars.", [Histogram([.. result.Data.Select(d => Math.Clamp(d.Residual, -Shown, Shown))])]));
        }

        int[] known = [.. Enumerable.Range(0, result.Parameters.Count).Where(j => result.Parameters[j].Value is not null).Take(MostNumbers)];
        if (known.Length > 1)
        {
            data.Charts.Add(new("fit-correlations", "Correlations (%)", "Near 100 or −100 the data know a combination better than either number.", [Correlations(result, known)]));
        }

        if (result.Parameters.Select(Profile).OfType<LiveView>().ToArray() is { Length: > 0 } profiles)
        {
            data.Charts.Add(new(
                "fit-profiles", "Profile likelihood",
                "Rise of the least sum of squares while one number is held and all others are fitted again; the 95 % interval lies where it stays below 3.84. Points: as computed; dashed: the parabola of the standard error. Where the two part, trust the interval.",
                profiles));
        }

        return data;
    }

    // The root of the rise is nearly straight in the value: between the computed points it is taken so, but smoothly.
    private static LiveView? Profile(FittedParameter p)
    {
        if (p.Profile.Count < 3 || p.StandardError is not { } error)
        {
            return null;
        }

        bool angle = p.Parameter.Unit == "deg";
        double size = angle ? p.Parameter.UnitSize : 1, best = p.Ended, low = p.Profile[0].Value, high = p.Profile[^1].Value;
        string unit = angle ? "°" : FitWords.Unit(p.Parameter.Unit);
        double[] at = [.. Enumerable.Range(0, CurvePoints + 1).Select(k => low + ((high - low) * k / CurvePoints))];
        double Parabola(double x) => (x - best) * (x - best) / (error * error);
        double[] x = [.. at.Select(v => v / size)], ends = [x[0], x[^1]];
        MathNet.Numerics.Interpolation.CubicSpline root = MathNet.Numerics.Interpolation.CubicSpline.InterpolatePchip(
            [.. Thick(p.Profile).Select(q => q.Value)], [.. Thick(p.Profile).Select(q => Math.Sign(q.Value - best) * Math.Sqrt(q.Rise))]);
        return new(p.Parameter.Label, p.Parameter.Label, unit, "rise of chi squared", "",
        [
            new("profile", 0, [.. p.Profile.Select(q => q.Value / size)], [.. p.Profile.Select(q => q.Rise)], [], [.. p.Profile.Select(_ => false)], null, [])
            {
                Curve = (x, [.. at.Select(v => Math.Pow(root.Interpolate(v), 2))]),
            },
            new("standard error", 1, [], [], [], [], null, []) { Curve = (x, [.. at.Select(Parabola)]) },
            new("95 %", 6, [], [], [], [], null, []) { Curve = (ends, [Level95, Level95]) },
        ])
        {
            Marks = [.. new (double? X, string Name)[] { (p.Interval?.Low, "low"), (best, "fit"), (p.Interval?.High, "high") }.Where(m => m.X is not null).Select(m => (m.X!.Value / size, m.Name))],
        };
    }

    // Five points at least, as the interpolation wants: halfway to its neighbours the root of the rise is taken as straight.
    private static List<LikelihoodPoint> Thick(IReadOnlyList<LikelihoodPoint> points)
    {
        List<LikelihoodPoint> all = [.. points.DistinctBy(p => p.Value)];
        if (all.Count >= 5)
        {
            return all;
        }

        for (int k = all.Count - 1; k > 0; k--)
        {
            double a = all[k - 1].Value, b = all[k].Value, root = (Math.Sqrt(all[k - 1].Rise) + Math.Sqrt(all[k].Rise)) / 2;
            all.Insert(k, new((a + b) / 2, root * root));
        }

        return all;
    }

    private static LiveView Correlations(FitResult result, int[] known) => new("correlations", "number", "", "correlation", "",
    [
        new("correlation", 0, [], [.. known.SelectMany(i => known.Select(j => i == j ? 1 : result.Correlation[i, j]))], [], [], null, []),
    ])
    {
        Kind = "matrix",
        Categories = [.. known.Select(j => result.Parameters[j].Parameter.Label)],
    };

    private static LiveView? Directions(FitResult result, FittedVoltage[] data)
    {
        (double Direction, FittedVoltage Datum)[] points = FitDirectionPicture.Points(result, data);
        if (points.Select(p => Math.Round(p.Direction, 3)).Distinct().Count() < FitDirectionPicture.FewestDirections)
        {
            return null;
        }

        string quantity = FitPictures.Quantity(data[0].Pair.Name, data[0].Datum.Harmonic) + " over current";
        double[] x = [.. points.Select(p => p.Direction)];
        return new(quantity, "direction of the current", "°", quantity, "Ω",
        [
            new("measured", 0, x, [.. points.Select(p => p.Datum.Datum.Value / p.Datum.Datum.Current)], [.. points.Select(p => Math.Abs(p.Datum.Datum.Sigma / p.Datum.Datum.Current))],
                [.. points.Select(p => Math.Abs(p.Datum.Residual) > Far)], null, [])
            {
                Curve = ([], []),
            },
            new("model", 1, [], [], [], [], null, []) { Curve = (x, [.. points.Select(p => p.Datum.Model / p.Datum.Datum.Current)]) },
        ])
        { ErrorName = "standard deviation" };
    }

    private static LiveView AgainstCurrent(FitResult result)
    {
        double most = result.Data.Max(d => d.Datum.Current), least = result.Data.Min(d => d.Datum.Current);
        LiveSeries Level(string name, double level) => new(name, 6, [], [], [], [], null, []) { Curve = ([least, most], [level, level]) };
        return new("residuals against current", "current", "A", "(measured − model) / σ", "",
        [
            .. result.Data.GroupBy(d => FitPictures.Quantity(d.Pair.Name, d.Datum.Harmonic)).Select((g, k) => new LiveSeries(
                g.Key, k, [.. g.Select(d => d.Datum.Current)], [.. g.Select(d => d.Residual)], [], [.. g.Select(d => Math.Abs(d.Residual) > Far)], null, [])
            {
                Curve = ([], []),
            }),
            Level("+2 σ", 2), Level("−2 σ", -2),
        ]);
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
