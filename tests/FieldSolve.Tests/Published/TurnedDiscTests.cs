using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using FieldSolve.Turning;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Curves of a turned crystal on a disc against closed forms; the stretch is that of J. D. Wasscher, Philips Res. Rep. 16 (1961) 301.</summary>
public class TurnedDiscTests(ITestOutputHelper output)
{
    private const double Radius = 4e-6, Current = 1e-5, Mean = 1e3;
    private readonly Honesty honesty = new(output);

    // Transverse voltage of opposite arcs of half angle 10 degrees, probes at right angles, resistivity ratio 4, in units of sqrt(rho_a rho_b) I, for directions counted
    // from the axis of high resistivity: series of the stretched disc and its cross-ratio, evaluated to 12 digits outside this project. No printed table is known.
    public static TheoryData<double, double> Arcs() => new()
    {
        { 0, 0 }, { 15, 0.443512832631 }, { 30, 0.811705779908 }, { 45, 0.959271747928 }, { 60, 0.789996102107 }, { 75, 0.42232337917 }, { 90, 0 },
    };

    private static readonly Lazy<TurnResult> FiniteArcs = new(() => TestTurn.Run(Disc(10, 4, 25, 30), 24));

    [Theory]
    [MemberData(nameof(Arcs))]
    public void Finite_arcs_at_ratio_four(double direction, double across)
    {
        CurveRow row = TestTurn.At(FiniteArcs.Value, direction);
        honesty.Reading($"turned disc, direction {direction} deg", FiniteArcs.Value.Drive, row, "across", Mean * Current * across);
        DiscArcs arcs = DiscArcs.Opposite(10, direction, RimChords.Anisotropic(4));
        honesty.Reading($"turned disc, direction {direction} deg", FiniteArcs.Value.Drive, row, "source", Mean * Current * arcs.Resistance);
        honesty.Reading($"turned disc, direction {direction} deg", FiniteArcs.Value.Drive, row, "along", Mean * Current * arcs.Reading(direction + 155, direction + 25));
    }

    // Point contacts: the sin 2 theta content of V_across is exactly (2 / pi) (rho_h - rho_l) I for any ratio, followed by sin 6 theta; that of cos 2 theta in V_along the
    // same times cos psi with probes at psi from the contacts. Elliptic coordinates of the stretched disc; a closed form is O. Vafek, Phys. Rev. Applied 20, 064008 (2023).
    // The arcs here have half angle 0.5 degrees and move the values by about the square of that. With 24 directions the next orders do not alias into those looked at.
    [Theory]
    [InlineData(2)]
    [InlineData(9)]
    public void Point_contacts_have_the_exact_fourier_content(double ratio)
    {
        TurnResult r = TestTurn.Run(Disc(0.5, ratio, 20, 0), 24);
        double root = Math.Sqrt(ratio), difference = Mean * (root - (1 / root)), q = (root - 1) / (root + 1);
        double finiteWidth = 5 * Math.Pow(RimChords.Radians(0.5), 2) * Mean + 1e-4 * Mean * root;
        Assert.Equal(2 / Math.PI * difference, TestTurn.Harmonic(r, "across_odd", 2).Sin, finiteWidth);
        Assert.Equal(-Mean / Math.PI * 8 / 3 * Math.Pow(q, 3) / (1 - Math.Pow(q, 6)), TestTurn.Harmonic(r, "across_odd", 6).Sin, finiteWidth);
        Assert.Equal(0, TestTurn.Harmonic(r, "across_odd", 4).Sin, finiteWidth);
        Assert.Equal(0, TestTurn.Harmonic(r, "across_odd", 2).Cos, finiteWidth);
        Assert.Equal(2 / Math.PI * difference * Math.Cos(RimChords.Radians(20)), TestTurn.Harmonic(r, "along_odd", 2).Cos, finiteWidth);

        // The strip's formula would call this (rho_a - rho_b) / 2: it is 4 / pi too large.
        Assert.Equal(4 / Math.PI, TestTurn.Harmonic(r, "across_odd", 2).Sin / (difference / 2), 2e-3);
    }

    // The response of the meshed disc, fitted to readings that come from the closed form and not from the mesh.
    [Fact]
    public void Geometry_fit_recovers_the_sheet_from_exact_readings()
    {
        TurnResult coarse = TestTurn.Run(Disc(20, 4, 40, 20).Wanted(1e-3), 4);
        AngleDatum[] data = [.. Enumerable.Range(0, 6).Select(k =>
        {
            double direction = 30 * k;
            DiscArcs arcs = DiscArcs.Opposite(20, direction, RimChords.Anisotropic(4));

            // The direction counts from the axis of high resistivity, which lies at 20 degrees where the file's axis does: turn it back.
            return new AngleDatum(
                coarse.Drive.Device.Wirings[0], 0, RimChords.Radians(-direction - 20),
                new(Mean * arcs.Reading(direction + 140, direction + 40), 1e-3, null, 0), new(Mean * arcs.Reading(direction + 90, direction - 90), 1e-3, null, 0));
        })];
        var law = new FieldSolve.Laws.LabLaw(coarse.Drive.Device.Law, coarse.Drive.Device.Axis);
        var level = FieldSolve.Solving.FieldLevel.Build(coarse.Drive.Device, FieldSolve.Meshing.UniformSplit.Split(coarse.Drive.Mesh), law, default);
        FittedTensor? geometry = new GeometryFit(coarse.Drive.Device, level, data, default).Linear(new(1e-3, 1.2e-3, 0.1, 0));
        Assert.NotNull(geometry);
        Assert.Equal(4, geometry.AnisotropyRatio!.Value.Value, 4e-3);
        Assert.Equal(20, geometry.AxisDegrees!.Value.Value, 0.05);
        Assert.Equal(Mean, geometry.SheetResistance!.Value.Value, 1.0);
        Assert.Equal(0, geometry.HallResistance!.Value.Value, 1.0);

        // The uniform-field formulas are far off on a disc.
        FittedTensor? strip = StripFit.Linear(coarse.Drive.Device, data);
        Assert.True(Math.Abs(strip!.AnisotropyRatio!.Value.Value - 4) > 0.3, $"strip ratio {strip.AnisotropyRatio}");
    }

    private static DeviceText Disc(double half, double ratio, double near, double axis)
    {
        double root = Math.Sqrt(ratio);
        return DeviceText.Disc(Radius, DeviceText.Ohmic(1 / (Mean * root), root / Mean, axis: axis))
            .Arc("in", 180, half, Radius).Arc("out", 0, half, Radius)
            .RimTip("p", 180 - near, Radius).RimTip("q", near, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius)
            .Wiring("w", "in", "out", "p q", "left right").Drive(Current);
    }
}
