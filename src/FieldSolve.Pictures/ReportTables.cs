using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>The tables of the report.</summary>
internal static class ReportTables
{
    private const string None = "–";

    /// <summary>One row per wiring.</summary>
    public static void Summary(Html page, DriveResult result)
    {
        // With a linear law the even parts are rounding, and so would be their slope.
        EvenSlope? Fit(WiringSummary s) => result.Device.Law.IsLinear ? null : s.Slope;
        page.Table(
            "Resistances are voltage over current at the smallest current that is not zero. Slope: even part of V_across against the square of the odd part of V_along, over the rows within the law; without an error when two rows are all there is.",
            ["wiring", "direction", "two-terminal", "along", "across", "slope (1/V)", "R²", "left its law at", "largest current"],
            [.. result.Summaries.Select(s => new[]
            {
                s.Wiring,
                s.HasDirection ? SiScale.Number(Math.Round(s.DirectionDegrees, 3), 6) + "°" : None,
                Ohms(s.TwoTerminal),
                Ohms(s.Along),
                Ohms(s.Across),
                ErrorText.In(new(1, ""), Fit(s)?.Slope, Fit(s)?.SlopeError),
                Fit(s) is { } fit && double.IsFinite(fit.RSquared) ? SiScale.Number(fit.RSquared, 6) : None,
                s.LeftLawAt is { } current ? SiScale.Text(current, "A") : "never",
                SiScale.Text(s.Largest, "A"),
            })],
            r => result.Summaries[r].LeftLawAt is not null,
            0);
    }

    /// <summary>Readings of a wiring: one row per current.</summary>
    public static void Curves(Html page, DriveResult result, Wiring wiring)
    {
        CurveRow[] rows = [.. result.Rows.Where(r => r.Wiring == wiring.Name)];
        SiScale current = SiScale.For(rows.Select(r => Math.Abs(r.Current)).DefaultIfEmpty(0).Max(), "A");
        SiScale Scale(string pair, Func<Reading, double?> part) =>
            SiScale.For(rows.Select(r => r.Of(pair)).OfType<Reading>().Select(part).OfType<double>().Select(Math.Abs).DefaultIfEmpty(0).Max(), "V");

        List<(string Head, Func<CurveRow, string> Cell)> columns =
        [
            ($"I ({current.Unit})", r => SiScale.Number(r.Current * current.Factor, 6)),
        ];
        void Add(string name, string pair, Func<Reading, double?> part, Func<Reading, double?> error)
        {
            if (rows.Any(r => r.Of(pair) is { } reading && part(reading) is not null))
            {
                SiScale scale = Scale(pair, part);
                columns.Add(($"{name} ({scale.Unit})", r => r.Of(pair) is { } reading ? ErrorText.In(scale, part(reading), error(reading)) : None));
            }
        }

        Add("V_along", "along", r => r.Value, r => r.Error);
        Add("V_across", "across", r => r.Value, r => r.Error);
        Add("V_across even", "across", r => r.Even, r => r.EvenError);
        Add("V_source", "source", r => r.Value, r => r.Error);
        foreach (Pair pair in wiring.Extra)
        {
            Add(pair.Name, pair.Name, r => r.Value, r => r.Error);
        }

        columns.Add(("status", r => CurvesCsv.StatusText(r.Status)));
        page.Table(
            $"Source {result.Device.Contacts[wiring.Source].Name}, drain {result.Device.Contacts[wiring.Drain].Name}{Pairs(result.Device, wiring)}. Every column of the run stands in curves.csv.",
            [.. columns.Select(c => c.Head)],
            [.. rows.Select(r => columns.Select(c => c.Cell(r)).ToArray())],
            k => rows[k].Status != RowStatus.Ok);
    }

    /// <summary>Where a wiring's rows left the law.</summary>
    public static void Exits(Html page, DriveResult result, Wiring wiring)
    {
        CurveRow[] rows = [.. result.Rows.Concat(result.ReversedRows).Where(r => r.Wiring == wiring.Name && r.Exit is not null)];
        page.Table(
            "Where the field passes the range of the law. Outside-law rows: give the law a field_limit, give the contact a resistance, or drive less.",
            ["current", "x", "y", "largest |E|", "law guarded from", "radius of the zone", "status"],
            [.. rows.Select(r => new[]
            {
                SiScale.Text(r.Current, "A"), SiScale.Text(r.Exit!.X, "m"), SiScale.Text(r.Exit.Y, "m"), SiScale.Text(r.Exit.Field, "V/m", 3),
                SiScale.Text(r.Exit.From, "V/m", 3), SiScale.Text(r.Exit.Radius, "m", 2), CurvesCsv.StatusText(r.Status),
            })],
            k => rows[k].Status == RowStatus.OutsideLaw);
    }

    /// <summary>The refinement, and the estimates on the last mesh.</summary>
    public static void Refinement(Html page, DriveResult result)
    {
        page.Table(
            "From mesh to mesh: largest estimated error over the wanted one.",
            ["level", "triangles", "unknowns", "voltages", "even parts"],
            [.. result.Levels.Select(l => new[]
            {
                l.Level.ToString(CultureInfo.InvariantCulture), ReportWords.Grouped(l.Triangles), ReportWords.Grouped(l.Unknowns),
                Worst(l, "value"), Worst(l, "even"),
            })]);
        if (result.Levels.Count > 0)
        {
            page.Table(
                "On the last mesh, at the largest current.",
                ["wiring", "pair", "part", "value ± error", "wanted error"],
                [.. result.Levels[^1].Estimates.Select(e => new[]
                {
                    e.Wiring, e.Pair, e.Part == "even" ? "even part" : "voltage", ErrorText.Of(e.Value, e.Error, "V"), SiScale.Text(e.Wanted, "V", 2),
                })],
                k => result.Levels[^1].Estimates[k].Error > result.Levels[^1].Estimates[k].Wanted,
                0, 1, 2);
        }
    }

    /// <summary>What was asked for and how much work it was.</summary>
    public static void Settings(Html page, DriveResult result)
    {
        SheetDevice device = result.Device;
        List<string[]> rows =
        [
            ["wanted error of a voltage, relative to the largest along voltage", SiScale.Number(device.Mesh.Error)],
            ["wanted error of an even part, relative to itself", SiScale.Number(device.Mesh.EvenError)],
            ["most unknowns", ReportWords.Grouped(device.Mesh.MaxUnknowns)],
            ["caution above a sheet current density of", SiScale.Text(device.Caution.SheetCurrentDensity, "A/m")],
            ["caution above a power density of", SiScale.Text(device.Caution.PowerDensity, "W/m²")],
            ["numeric factorisations", ReportWords.Grouped(result.Figures.Factorisations)],
            ["stored entries of the factors", ReportWords.Grouped(result.Figures.FactorNonZeros)],
            ["solves", ReportWords.Grouped(result.Figures.Solves)],
            ["Newton steps", ReportWords.Grouped(result.Figures.NewtonSteps)],
            ["largest relative residual", SiScale.Number(result.Figures.LargestResidual, 2)],
        ];
        page.Table("", ["setting or figure", "value"], rows, null, 0);
    }

    private static string Pairs(SheetDevice device, Wiring wiring)
    {
        string Name(Terminal t) => t.IsTip ? device.Tips[t.Index].Name : device.Contacts[t.Index].Name;
        return string.Concat(wiring.Pairs.Select(p => $"; {p.Name} from {Name(p.Plus)} to {Name(p.Minus)}"));
    }

    private static string Ohms(double? value) => value is { } v && double.IsFinite(v) ? SiScale.Text(v, "Ω", 6) : None;

    private static string Worst(RefinementLevel level, string part)
    {
        double[] ratios = [.. level.Estimates.Where(e => e.Part == part && e.Wanted > 0).Select(e => e.Error / e.Wanted).Where(double.IsFinite)];
        return ratios.Length == 0 ? None : SiScale.Number(ratios.Max(), 2);
    }
}
