using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Solving;

namespace FieldSolve.Turning;

/// <summary>Makes the fits of a turn.</summary>
internal static class AngleFitter
{
    // Every direction of a turned axis needs factors of its own; so many determine the four unknowns many times over.
    private const int MostTurnsInGeometry = 8;

    public static AngleFit Of(SheetDevice device, FieldLevel level, IReadOnlyList<AngleDatum> data, CancellationToken cancel)
    {
        var law = PrincipalSheet.Of(device.Law.AtZeroField.ToLab(device.Axis), device.Axis);
        FittedTensor? strip = StripFit.Linear(device, data);
        var response = new GeometryFit(device, level, Chosen(data), cancel);
        FittedTensor? geometry = response.Linear(Start(device, strip));
        return new()
        {
            Law = law,
            LawSecond = LawSecondOrder.Of(device.Law),
            Strip = strip,
            StripCurve = strip?.Sheet is { } sheet ? Curve(device, data, sheet) : null,
            Geometry = geometry,
            Mirror = strip?.Sheet is { } s ? StripFit.Mirror(device, data, s) : null,
            StripSecond = strip?.Sheet is { } t ? StripFit.Second(device, data, t) : null,
            GeometrySecond = geometry?.Sheet is { } g ? response.Second(g) : null,
            Harmonics = HarmonicFit.Of(data, device.Axis),
            Directions = data.Count,
        };
    }

    private static StripFormula? Curve(SheetDevice device, IReadOnlyList<AngleDatum> data, PrincipalSheet sheet)
    {
        StripGeometry[] strips = [.. data.Select(d => StripGeometry.Of(device, d.Wiring, d.Direction))];
        const double Alike = 0.01;
        bool same = strips.All(s => Math.Abs(s.Length - strips[0].Length) <= Alike * strips[0].Width && Math.Abs(s.Width - strips[0].Width) <= Alike * strips[0].Width);
        return same ? new(sheet, strips[0].Length, strips[0].Width) : null;
    }

    // The strip's answer, or the isotropic sheet that any reading suggests: the law itself is what is looked for.
    private static PrincipalSheet Start(SheetDevice device, FittedTensor? strip)
    {
        Tensor2 order = device.Law.AtZeroField;
        double mean = Math.Pow(10, Math.Round(Math.Log10(Math.Sqrt(order.Aa * order.Bb))));
        return strip?.Sheet ?? new(mean, mean, device.Axis, 0);
    }

    // Half a circle holds all that the tensor can say.
    private static IReadOnlyList<AngleDatum> Chosen(IReadOnlyList<AngleDatum> data)
    {
        int turns = data.Select(d => d.Turn).Distinct().Count();
        return turns <= MostTurnsInGeometry
            ? data
            : [.. Enumerable.Range(0, MostTurnsInGeometry).Select(k => data[(int)((long)k * data.Count / (2 * MostTurnsInGeometry))]).Distinct()];
    }
}
