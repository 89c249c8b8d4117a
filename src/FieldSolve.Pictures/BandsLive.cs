using FieldSolve.Bands;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What the live report of the bands command shows: conductance against direction, beside what a tensor makes of it.</summary>
internal static class BandsLive
{
    private const int Points = 180;
    private const double Degree = Math.PI / 180;

    /// <summary>Collects the chart.</summary>
    public static LiveData Of(BandsResult result)
    {
        LiveData data = new() { Title = result.Input.Title };
        LiveView[] views = result.Response is { } response ? Model(result, response) : [Measured(result, result.Input.Profile!)];
        data.Charts.Add(new(
            "profile", "Conductance against direction",
            result.Response is null ? "Points: measured, bars: their standard errors; line: the fitted tensor." : "Points: computed; line: what a tensor makes of it, its cos 2θ part. The values are those of profile.csv.", views));
        return data;
    }

    private static LiveView[] Model(BandsResult result, BandResponse response)
    {
        double[] x = [.. response.Profile.Select(p => p.Direction / Degree)];
        LiveSeries Computed(Func<ProfilePoint, Estimate> of) => new(
            "computed", 0, x, [.. response.Profile.Select(p => of(p).Value)], [.. response.Profile.Select(p => of(p).Error)], [.. x.Select(_ => false)], null, [])
        { Curve = ([], []) };
        BandLaw law = result.Law;
        return
        [
            View(result, "Ballistic conductance per width", "S/m", [Computed(p => p.Ballistic), Tensor(d => TensorOf(result.Fit, d))]),
            View(result, "Sheet conductance n·σ·n", "S", [Computed(p => p.Sheet), Tensor(d => law.B + ((law.A - law.B) * Math.Pow(Math.Cos(d - law.Axis), 2)))]),
        ];
    }

    private static LiveView Measured(BandsResult result, MeasuredProfile profile) => View(
        result, profile.IsResistance ? "Sheet resistance n·ρ·n" : "Sheet conductance n·σ·n", profile.IsResistance ? "Ω" : "S",
        [
            new("measured", 0, [.. profile.Directions.Select(d => d / Degree)], [.. profile.Values], profile.Errors is { } e ? [.. e] : [], [.. profile.Values.Select(_ => false)], null, []) { Curve = ([], []) },
            Tensor(d => TensorOf(result.Fit, d)),
        ]) with
    { ErrorName = "standard error" };

    private static LiveView View(BandsResult result, string what, string unit, IReadOnlyList<LiveSeries> series)
    {
        double a = ((result.Law.Axis / Degree % 360) + 360) % 360;
        return new(what, "direction from lab x", "°", what, unit, series)
        {
            Marks = [.. Enumerable.Range(0, 5).Select(k => ((a % 90) + (90 * k), Math.Abs(Math.IEEERemainder((a % 90) + (90 * k) - a, 180)) < 1 ? "a" : "b")).Where(m => m.Item1 <= 360)],
        };
    }

    private static double TensorOf(TensorFit fit, double direction) => fit.Mean.Value + (fit.Amplitude.Value * Math.Cos(2 * (direction - fit.Axis.Value)));

    private static LiveSeries Tensor(Func<double, double> of)
    {
        double[] angles = [.. Enumerable.Range(0, Points + 1).Select(k => 360.0 * k / Points)];
        return new("tensor", 1, [], [], [], [], null, []) { Curve = (angles, [.. angles.Select(d => of(d * Degree))]) };
    }
}
