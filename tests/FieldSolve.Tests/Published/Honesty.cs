using System.Globalization;
using FieldSolve.Readings;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Compares readings with exact values: the stated error bar must cover the true error, the bar must meet what the device file asks for by
/// default (1e-4 of the largest along voltage), and the true error must meet it for each current by itself.
/// </summary>
internal sealed class Honesty(ITestOutputHelper output)
{
    private const double Wanted = 1e-4;
    private const double WantedEven = 1e-3;

    // Positions of rim points, widths and units round at 1e-16; singular meshes magnify that a little.
    private const double Rounding = 1e-12;

    /// <summary>Checks a reading.</summary>
    /// <param name="what">Name of the case for the report.</param>
    /// <param name="result">Of the drive.</param>
    /// <param name="row">One of its rows.</param>
    /// <param name="pair">Name of the pair.</param>
    /// <param name="exact">V.</param>
    /// <param name="coarseness">V by which the check's own approximation may be off.</param>
    public void Reading(string what, DriveResult result, CurveRow row, string pair, double exact, double coarseness = 0)
    {
        Reading reading = Found(row, pair);
        double scale = Scale(result.Rows.Where(r => r.Current == row.Current)), largest = Scale(result.Rows);
        Judge($"{what} {pair}", result, reading.Value, exact, reading.Error, scale, Wanted * largest, Wanted * scale, coarseness);
    }

    /// <summary>Checks the first row of a one-wiring, one-current drive.</summary>
    public void Reading(string what, DriveResult result, string pair, double exact, double coarseness = 0) =>
        Reading(what, result, result.Rows[0], pair, exact, coarseness);

    /// <summary>Checks an even part; its wanted error is relative to itself.</summary>
    public void Even(string what, DriveResult result, CurveRow row, string pair, double exact, double coarseness = 0)
    {
        Reading reading = Found(row, pair);
        Assert.NotNull(reading.Even);
        Judge($"{what} {pair} even", result, reading.Even.Value, exact, reading.EvenError!.Value, Math.Abs(exact), WantedEven * Math.Abs(exact), WantedEven * Math.Abs(exact), coarseness);
    }

    // The largest |along voltage|, or the largest of all readings where nothing is read along.
    private static double Scale(IEnumerable<CurveRow> rows)
    {
        Reading[] all = [.. rows.SelectMany(r => r.Readings)], along = [.. all.Where(r => r.Pair == "along")];
        return (along.Length > 0 ? along : all).Max(r => Math.Abs(r.Value));
    }

    private static Reading Found(CurveRow row, string pair)
    {
        Assert.NotEqual(RowStatus.NotConverged, row.Status);
        Reading? reading = row.Of(pair);
        Assert.NotNull(reading);
        return reading;
    }

    private void Judge(
        string what, DriveResult result, double value, double exact, double bar, double scale, double mostBar, double mostError, double coarseness)
    {
        double error = Math.Abs(value - exact), beyond = Math.Max(0, error - coarseness - (Rounding * scale));
        string line = string.Create(CultureInfo.InvariantCulture,
            $"| {what} | {exact / scale:G6} | {error / scale:E1} | {bar / scale:E1} | {error / Math.Max(bar, double.Epsilon):G3} | {result.Figures.Unknowns} | {result.Stages.Sum(s => s.Seconds):F2} |");
        output.WriteLine(line);
        Assert.True(beyond <= bar, "Error bar too small: " + line);
        Assert.True(bar <= mostBar * (1 + 1e-9), "Error bar above what is wanted: " + line);
        Assert.True(beyond <= mostError, "Error above what is wanted: " + line);
    }
}
