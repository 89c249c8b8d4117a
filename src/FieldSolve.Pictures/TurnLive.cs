using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>What the live report of a turn shows: a map that follows the direction, the curves over it with the fitted formulas, and other ratios.</summary>
internal static class TurnLive
{
    private const int MostCurrents = 5, FormulaPoints = 181, FormulaLook = 6;
    private const string MapId = "map-0";

    /// <summary>Collects the map and the charts.</summary>
    public static LiveData Of(TurnResult result)
    {
        SheetDevice device = result.Drive.Device;
        LiveData data = new() { Title = device.Title };
        TurnFrame[] frames = [];
        if (result.Frames.Count > 0)
        {
            PotentialFrame first = result.Frames[0].Frame;
            frames = [.. result.Frames.Where(f => ReferenceEquals(f.Frame.Nodes, first.Nodes)).OrderBy(f => TurnQuantity.Angle(result, f.DirectionDegrees, f.AxisDegrees))];
            LiveMesh mesh = new(first.X, first.Y, first.Nodes);
            data.Meshes.Add(mesh);
            data.Laws.Add(LiveDevice.Law(device, frames.Select(f => (mesh, f.Frame.Potential))));
            data.Maps.Add(Map(result, frames));
        }

        if (Curves(result, frames) is { Length: > 0 } curves)
        {
            string marks = TurnQuantity.AxisA(result) is null ? "" : " a and b mark the crystal axes.";
            string formula = AnglePicture.HasFormula(result) ? " Dashed without points: the formulas for a uniform strip, fitted to the curves of small drive, at the largest current." : "";
            data.Charts.Add(new("angles", "Voltages over the direction", $"Bars are numerical errors; ringed points are not 'ok' in the table.{marks}{formula}", curves));
        }

        if (Ratios(result) is { Length: > 0 } ratios)
        {
            data.Charts.Add(new(
                "ratios", "Other anisotropy ratios",
                "Linear response of the same device at the same geometric mean of the two conductances. The across voltage vanishes at ratio 1 and along the crystal axes.", ratios));
        }

        const string Everyone = "all directions";
        if (DriveLive.RefinementChart(result.Drive with
        {
            Device = device with { Wirings = [device.Wirings[0] with { Name = Everyone }] },
            Levels = [.. result.Drive.Levels.Select(l => l with { Estimates = [.. l.Estimates.Select(e => e with { Wiring = Everyone })] })],
        }) is { } refinement)
        {
            data.Charts.Add(refinement);
        }

        return data;
    }

    private static LiveMap Map(TurnResult result, TurnFrame[] frames)
    {
        SheetDevice device = result.Drive.Device;
        bool axis = result.Mode == TurnMode.Axis;
        static string Angle(double degrees) => SiScale.Number(Math.Round(degrees, 2), 5) + "°";
        Wiring Of(TurnFrame f) => device.Wirings.First(w => w.Name == f.Frame.Wiring);
        int all = result.Rows.Select(r => (r.DirectionDegrees, r.AxisDegrees, r.Row.Wiring)).Distinct().Count();
        string missing = frames.Length < all ? $" {frames.Length} of {all} directions have a map: the run was too large for more, or did not reach them." : "";
        double file = Degrees.Wrapped(device.Axis * 180 / Math.PI);
        return new(
            MapId, axis ? $"Turned crystal, wiring {frames[0].Frame.Wiring}" : "Turned current", axis ? "axis" : "direction", "°", 0, 0, frames[0].DirectionDegrees,
            $"At {SiScale.Text(frames[0].Frame.Current, "A")}." + missing, LiveDevice.Rim(device), LiveDevice.Contacts(device, Of(frames[0])),
            [.. frames.Select(f => new LiveFrame(
                axis ? $"{Angle(f.AxisDegrees)}, current {Angle(Degrees.Wrapped(f.DirectionDegrees - f.AxisDegrees))} from a" : $"{Angle(f.DirectionDegrees)}, {f.Frame.Wiring}",
                axis ? f.AxisDegrees : f.DirectionDegrees, f.Frame.Potential, f.Frame.ContactPotential)
            {
                Roles = axis ? null : LiveDevice.Roles(device, Of(f)),
                Turn = axis ? (f.AxisDegrees - file) * Math.PI / 180 : 0,
            })]);
    }

    private static LiveView[] Curves(TurnResult result, TurnFrame[] frames)
    {
        double[] every = [.. result.Drive.Device.Drive!.Currents.Where(c => c != 0).Distinct().OrderByDescending(Math.Abs)];
        double[] currents = every.Length <= MostCurrents ? every : [.. Enumerable.Range(0, MostCurrents).Select(k => every[k * (every.Length - 1) / (MostCurrents - 1)])];
        double[] angles = [.. Enumerable.Range(0, FormulaPoints).Select(k => 360.0 * k / (FormulaPoints - 1))];
        int FrameOf(double angle, CurveRow row) => Array.FindIndex(
            frames, f => f.Frame.Current == row.Current && f.Frame.Wiring == row.Wiring && TurnQuantity.Angle(result, f.DirectionDegrees, f.AxisDegrees) == angle);
        return
        [
            .. TurnQuantity.Of(result).Select(q =>
            {
                List<LiveSeries> all = [];
                for (int k = 0; k < currents.Length; k++)
                {
                    IReadOnlyList<(double Angle, double Value, double Error, CurveRow Row)> points = q.Points(result, currents[k]);
                    if (points.Count > 0)
                    {
                        double[] x = [.. points.Select(p => p.Angle)], y = [.. points.Select(p => p.Value)];
                        all.Add(new(
                            SiScale.Text(currents[k], "A"), k, x, y, [.. points.Select(p => p.Error)], [.. points.Select(p => p.Row.Status != RowStatus.Ok)],
                            frames.Length > 0 ? MapId : null, frames.Length > 0 ? [.. points.Select(p => FrameOf(p.Angle, p.Row))] : [])
                        {
                            Curve = Closed(x, y),
                        });
                    }
                }

                if (currents.Length > 0 && q.Formula(result, currents[0], 0) is not null)
                {
                    all.Add(new(AnglePicture.Formula.Name, FormulaLook, [], [], [], [], null, [])
                    {
                        Curve = (angles, [.. angles.Select(a => q.Formula(result, currents[0], a)!.Value)]),
                    });
                }

                return Marked(result, new(q.Name(result), TurnQuantity.AngleName(result).Replace(" (°)", "", StringComparison.Ordinal), "°", q.Name(result), "V", all));
            }),
        ];
    }

    private static LiveView[] Ratios(TurnResult result)
    {
        LiveView? View(string pair, Func<RatioPoint, (double Value, double Error)?> part)
        {
            List<LiveSeries> all = [];
            for (int k = 0; k < result.Ratios.Count; k++)
            {
                RatioPoint[] points = [.. result.Ratios[k].Points.Where(p => part(p) is not null).OrderBy(p => TurnQuantity.Angle(result, p))];
                if (points.Length > 0)
                {
                    double[] x = [.. points.Select(p => TurnQuantity.Angle(result, p))], y = [.. points.Select(p => part(p)!.Value.Value)];
                    all.Add(new($"ratio {SiScale.Number(result.Ratios[k].Ratio, 4)}", k, x, y, [.. points.Select(p => part(p)!.Value.Error)], [.. points.Select(_ => false)], null, [])
                    {
                        Curve = Closed(x, y),
                    });
                }
            }

            return all.Count == 0 ? null
                : Marked(result, new($"V_{pair} / I at small drive", TurnQuantity.AngleName(result).Replace(" (°)", "", StringComparison.Ordinal), "°", $"V_{pair} / I", "Ω", all));
        }

        return [.. new[] { View("along", p => p.Along), View("across", p => p.Across) }.OfType<LiveView>()];
    }

    // The first direction stands again at the end of the circle.
    private static (double[] X, double[] Y) Closed(double[] x, double[] y) => x.Length > 1 ? ([.. x, x[0] + 360], [.. y, y[0]]) : (x, y);

    private static LiveView Marked(TurnResult result, LiveView view) => TurnQuantity.AxisA(result) is not { } a ? view : view with
    {
        Marks = [.. Enumerable.Range(0, 5).Select(k => ((a % 90) + (90 * k), Math.Abs(Math.IEEERemainder((a % 90) + (90 * k) - a, 180)) < 1 ? "a" : "b")).Where(m => m.Item1 <= 360)],
    };
}
