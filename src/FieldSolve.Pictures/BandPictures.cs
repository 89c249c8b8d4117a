using FieldSolve.Bands;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Pictures of the bands command: Fermi line, conductance against direction, ellipse of the sheet conductance.</summary>
public static class BandPictures
{
    private const int Side = 430, MostNamed = 14;
    private const float Left = 84, Right = 24, Bottom = 56, Top = 40;

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The run.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(BandsResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write(
        [
            new("fermi-line", null, "fermi-line", "Lines of the chemical potential, each drawn about its own node, in the lab frame.", () => FermiLine(result)),
            new("profile", null, "profile", "Conductance as a polar curve: the distance from the middle is the value in that direction. Dashed: what a tensor makes of it.", () => Profile(result)),
            new("tensor", null, "tensor", "End of the sheet current per unit field as the field turns through all directions; its half axes are the principal sheet conductances.", () => Tensor(result)),
        ], folder, cancel);
    }

    private static Figure? FermiLine(BandsResult result)
    {
        if (result.Contours.Count == 0)
        {
            return null;
        }

        double reach = result.Contours.SelectMany(c => c.Points).Max(p => Math.Max(Math.Abs(p.X), Math.Abs(p.Y)));

        // Wave numbers are shown per nanometre, as in the literature.
        const double perNanometre = 1e-9;
        Plot plot = Square("Fermi line", "k_x (1/nm)", "k_y (1/nm)", perNanometre * reach);
        foreach (BandContour c in result.Contours)
        {
            Add(plot, c.Points.Select(p => (p.X, p.Y)), perNanometre, Style(c.Cone, c.Name));
        }

        plot.Add.Marker(0, 0, MarkerShape.Cross, 9, Look.Ink);
        int[] cones = [.. result.Contours.Select(c => c.Cone).Distinct().Order().Take(MostNamed)];
        return Figure.Of(plot, Width, Height).WithKeyRight(
        [
            .. cones.Select(k => Style(k, Look.Short(result.Input.Model!.Cones[k].Name, 22))),
            new KeyEntry(result.Input.Model!.Thickness is null ? "node" : "node; cut at k_c = 0", Look.Ink, 0, null, MarkerShape.Cross),
        ]);
    }

    private static Figure Profile(BandsResult result)
    {
        KeyEntry computed = Style(0, "computed"), fitted = Style(1, "tensor");
        if (result.Response is { } response)
        {
            SiScale scale = SiScale.For(response.Profile.Max(p => p.Ballistic.Value), "S/m"), sheet = SiScale.For(response.Profile.Max(p => p.Sheet.Value), "S");
            double reach = scale.Factor * response.Profile.Max(p => p.Ballistic.Value);
            Plot ballistic = Square("Ballistic conductance per width", $"x part ({scale.Unit})", $"y part ({scale.Unit})", reach);
            AddPolar(ballistic, reach);
            Add(ballistic, Closed(response.Profile.Select(p => Polar(p.Direction, p.Ballistic.Value))), scale.Factor, computed);
            Add(ballistic, Closed(response.Profile.Select((p, k) => Polar(p.Direction, result.Fit.Fitted[k]))), scale.Factor, fitted);
            reach = sheet.Factor * response.Profile.Max(p => p.Sheet.Value);
            Plot boltzmann = Square("Sheet conductance n·σ·n", $"x part ({sheet.Unit})", $"y part ({sheet.Unit})", reach);
            AddPolar(boltzmann, reach);
            Add(boltzmann, Around(d => AlongDirection(result.Law, d)), sheet.Factor, computed);
            return Figure.Rows([ballistic, boltzmann], 2, Width, Height).WithKeyRight([computed, fitted with { Name = "tensor (cos 2θ)" }]);
        }

        MeasuredProfile measured = result.Input.Profile!;
        SiScale unit = SiScale.For(measured.Values.Max(), measured.IsResistance ? "Ω" : "S");
        double most = unit.Factor * Math.Max(measured.Values.Max(), result.Fit.Mean.Value + result.Fit.Amplitude.Value);
        Plot plot = Square(
            measured.IsResistance ? "Sheet resistance n·ρ·n" : "Sheet conductance n·σ·n", $"x part ({unit.Unit})", $"y part ({unit.Unit})", most);
        AddPolar(plot, most);
        Add(plot, Around(d => result.Fit.Mean.Value + (result.Fit.Amplitude.Value * Math.Cos(2 * (d - result.Fit.Axis.Value)))), unit.Factor, fitted);
        KeyEntry points = new("measured", Look.Line(0), 0, null, Look.Shape(0));
        Add(plot, measured.Directions.Select((d, k) => Polar(d, measured.Values[k])), unit.Factor, points);
        return Figure.Of(plot, Width, Height).WithKeyRight([points, fitted with { Name = "tensor (cos 2θ)" }]);
    }

    private static Figure Tensor(BandsResult result)
    {
        BandLaw law = result.Law;
        SiScale scale = SiScale.For(Math.Max(law.A, law.B), "S");
        Plot plot = Square("Sheet conductance", $"K_x / |E| ({scale.Unit})", $"K_y / |E| ({scale.Unit})", scale.Factor * Math.Max(law.A, law.B));
        (double s, double c) = Math.SinCos(law.Axis);
        KeyEntry ellipse = Style(0, "end of K/|E|"), a = Style(1, $"a: {SiScale.Text(law.A, "S", 5)}"), b = Style(2, $"b: {SiScale.Text(law.B, "S", 5)}");
        Add(plot, [(0, 0), (law.A * c, law.A * s)], scale.Factor, a);
        Add(plot, [(0, 0), (-law.B * s, law.B * c)], scale.Factor, b);
        Add(plot, Enumerable.Range(0, 361).Select(k =>
        {
            (double sin, double cos) = Math.SinCos(k * Math.PI / 180);
            return ((c * law.A * cos) - (s * law.B * sin), (s * law.A * cos) + (c * law.B * sin));
        }), scale.Factor, ellipse);
        KeyEntry note = new(FormattableString.Invariant($"a at {law.Axis * 180 / Math.PI:0.##} deg"), Look.Ink, 0, null, MarkerShape.None);
        return Figure.Of(plot, Width, Height).WithKeyRight([ellipse, a, b, note]);
    }

    private static int Width => (int)(Side + Left + Right);

    private static int Height => (int)(Side + Top + Bottom);

    private static KeyEntry Style(int k, string name) => KeyEntry.Curve(k, name, marked: false) with { Width = 2 };

    /// <summary>A plot with equal scales about the origin.</summary>
    private static Plot Square(string title, string x, string y, double reach)
    {
        Plot plot = Look.NewPlot(title, x, y);
        plot.Layout.Fixed(new PixelPadding(Left, Right, Bottom, Top));
        double limit = 1.12 * reach, step = Levels.Step(2 * limit, 6);
        plot.Axes.SetLimits(-limit, limit, -limit, limit);
        plot.Axes.Bottom.TickGenerator = Levels.EvenTicks(-limit, limit, step);
        plot.Axes.Left.TickGenerator = Levels.EvenTicks(-limit, limit, step);
        return plot;
    }

    /// <summary>Circles at the ticks and spokes every 30 degrees, in place of the grid.</summary>
    private static void AddPolar(Plot plot, double reach)
    {
        plot.HideGrid();
        KeyEntry thin = new("", Color.FromHex("#D0D0D0"), 1, null, MarkerShape.None);
        double limit = 1.12 * reach, step = Levels.Step(2 * limit, 6);
        for (double r = step; r < limit; r += step)
        {
            Add(plot, Around(_ => r), 1, thin);
        }

        for (int k = 0; k < 6; k++)
        {
            (double x, double y) = Polar(k * Math.PI / 6, limit);
            Add(plot, [(-x, -y), (x, y)], 1, thin);
        }
    }

    private static double AlongDirection(BandLaw law, double direction) =>
        law.B + ((law.A - law.B) * Math.Pow(Math.Cos(direction - law.Axis), 2));

    private static IEnumerable<(double X, double Y)> Around(Func<double, double> value) =>
        Enumerable.Range(0, 361).Select(k => Polar(k * Math.PI / 180, value(k * Math.PI / 180)));

    private static (double X, double Y) Polar(double direction, double value) => (value * Math.Cos(direction), value * Math.Sin(direction));

    private static IEnumerable<(double X, double Y)> Closed(IEnumerable<(double X, double Y)> points)
    {
        (double, double)[] all = [.. points];
        return all.Append(all[0]);
    }

    private static void Add(Plot plot, IEnumerable<(double X, double Y)> points, double factor, KeyEntry style) =>
        plot.PlottableList.Add(new CurveLine([[.. points.Select(p => new Coordinates(factor * p.X, factor * p.Y))]]) { Style = style });
}
