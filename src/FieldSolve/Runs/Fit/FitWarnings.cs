using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>What a user of a fit must know.</summary>
internal static class FitWarnings
{
    private const double Unlikely = 0.001, MostRuns = 3.5;

    /// <summary>Where the fitted sheet leaves its law by enough to matter.</summary>
    public static IReadOnlyList<string> Guarded(FitProblem problem, FitModel model, double[] p, double share, CancellationToken cancel)
    {
        (LawExit? exit, double?[] influence) = model.Guarded(p, cancel);
        (double Sigmas, int Line) worst = influence.Select((v, i) => (Math.Abs(v ?? 0) / problem.Data[i].Sigma, problem.Data[i].Line)).Max();
        return exit is { } there && worst.Sigmas > share
            ? [string.Create(
                CultureInfo.InvariantCulture,
                $"The field reaches {SiText.Of(there.Field, "V/m")} at {SiText.Place(there.X, there.Y)}, beyond the {SiText.Of(there.From, "V/m")} up to which the fitted law is used as written; what comes after moves line {worst.Line} of the data by {worst.Sigmas:G2} standard deviations. Give the law a field_limit or the contacts a resistance, or leave out the largest currents.")]
            : [];
    }

    public static IReadOnlyList<string> Of(
        SheetDevice device, IReadOnlyList<FittedParameter> parameters, IReadOnlyList<FitDirection> directions, FitQuality quality, double share, FitEnd end, FitOptions options)
    {
        var list = new List<string>(device.Fit!.Notes);
        void Say(FormattableString text) => list.Add(text.ToString(CultureInfo.InvariantCulture));
        if (!end.Converged)
        {
            Say($"The fit did not come to rest after {end.Steps} steps; the numbers are where it stopped.");
        }

        if (share > device.Fit.NumericalShare)
        {
            Say($"The numerical error of the model reaches {100 * share:G2} % of a datum's standard deviation; {100 * device.Fit.NumericalShare:G2} % was wanted ('numerical_share'). Raise max_unknowns in [mesh], or allow more.");
        }

        foreach (FitDirection d in directions.Where(d => !d.Determined))
        {
            // Names of numbers are case-sensitive: the sentence begins as they do.
            list.Add(d.Words + ".");
        }

        foreach (FittedParameter p in parameters.Where(p => p.NumericalError > p.StandardError))
        {
            Say($"The model's numerical errors together may move '{p.Parameter.Label}' by up to {p.NumericalError / p.StandardError!.Value:G2} standard errors; a smaller 'numerical_share' makes them smaller.");
        }

        foreach (FittedParameter p in parameters.Where(p => p.AtBound))
        {
            Say($"'{p.Parameter.Label}' ended at a bound; its standard error says little.");
        }

        if (quality.Probability < Unlikely)
        {
            Say($"Chi squared is {quality.ChiSquared:G4} for {quality.Freedom} degrees of freedom: the model misses something, or the sigmas are too small{(options.Robust ? "" : "; --robust counts outliers less")}.");
        }
        else if (quality.Probability > 1 - Unlikely)
        {
            Say($"Chi squared is {quality.ChiSquared:G4} for {quality.Freedom} degrees of freedom: the sigmas look too large.");
        }

        if (quality.RunsZ < -MostRuns)
        {
            Say($"Residuals keep their sign along the currents ({-quality.RunsZ:G2} standard deviations too few changes): the model misses a trend.");
        }

        if (quality.LargestProbability < Unlikely)
        {
            Say($"Line {quality.LargestLine} of the data is {Math.Abs(quality.Largest):G3} standard deviations off: an outlier?{(options.Robust ? "" : " --robust counts it less.")}");
        }

        return list;
    }
}
