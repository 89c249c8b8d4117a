using System.Globalization;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What a fit found, in sentences.</summary>
internal static class FitWords
{
    private const double Poor = 0.01, Alike = 0.95;

    /// <summary>The answer: does the model describe the data, what are the numbers, what is it that the data do not tell.</summary>
    public static IEnumerable<string> Answer(FitResult result)
    {
        FitQuality q = result.Quality;
        string chi = string.Create(CultureInfo.InvariantCulture, $"chi squared is {q.ChiSquared:G4} for {q.Freedom} degrees of freedom")
            + (q.Probability is { } p ? p < 1e-3 ? ", which chance alone would make in fewer than one of a thousand cases" : string.Create(CultureInfo.InvariantCulture, $", as large or larger by chance in {100 * p:G2} % of cases") : "");
        yield return (result.Converged ? "" : "The fit did not come to rest. ")
            + (q.Probability is < Poor ? $"The model does not describe the data within their stated errors: {chi}." : $"The model describes the data: {chi}.");
        FittedParameter[] known = [.. result.Parameters.Where(f => f.Value is not null)];
        if (known.Length > 0)
        {
            yield return "Found: " + string.Join("; ", known.Select(f => $"{f.Parameter.Label} = {Value(f)}{(f.AtBound ? " (at its bound)" : "")}")) + ".";
        }

        FittedParameter[] open = [.. result.Parameters.Where(f => f.Value is null)];
        if (open.Length > 0)
        {
            yield return $"The data do not determine {string.Join(", ", open.Select(f => f.Parameter.Label))}.";
        }

        foreach (FitDirection d in result.Directions.Where(d => !d.Determined && d.Words.Length > 0))
        {
            yield return d.Words;
        }

        (string First, string Second, double R)[] close =
        [
            .. Enumerable.Range(0, result.Parameters.Count).SelectMany(i => Enumerable.Range(0, i).Select(j => (result.Parameters[j].Parameter.Label, result.Parameters[i].Parameter.Label, result.Correlation[i, j])))
                .Where(c => Math.Abs(c.Item3) >= Alike).OrderByDescending(c => Math.Abs(c.Item3)).Take(3),
        ];
        if (close.Length > 0)
        {
            yield return "Strongly correlated, so that the data know a combination far better than either: "
                + string.Join(", ", close.Select(c => $"{c.First} and {c.Second} ({SiScale.Number(100 * c.R, 3)} %)")) + ".";
        }
    }

    /// <summary>Value, error and unit, with one power of ten for both.</summary>
    public static string Value(FittedParameter f)
    {
        double u = f.Parameter.UnitSize, value = f.Value!.Value / u, error = f.StandardError!.Value / u;
        return f.Parameter.Unit switch
        {
            "deg" => ErrorText.In(new(1, ""), value, error) + "°",
            "1" => ErrorText.In(new(1, ""), value, error),
            _ => ErrorText.Of(value, error, Unit(f.Parameter.Unit)),
        };
    }

    /// <summary>A unit of tables as it is printed.</summary>
    public static string Unit(string unit) => unit == "1" ? "" : unit.Replace("^2", "²", StringComparison.Ordinal).Replace("^3", "³", StringComparison.Ordinal).Replace("ohm", "Ω", StringComparison.Ordinal);
}
