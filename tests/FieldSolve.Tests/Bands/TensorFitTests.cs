using FieldSolve.Bands;
using static FieldSolve.Tests.BandsTests.BandSamples;

namespace FieldSolve.Tests.BandsTests;

/// <summary>A tensor fitted to a profile.</summary>
public class TensorFitTests
{
    [Theory]
    [InlineData(20, 20, 5.0, 1.0)]
    [InlineData(20, 30, 5.0, 1.0)]
    [InlineData(20, 100, 1.0, 5.0)]
    [InlineData(-80, 90, 5.0, 1.0)]
    public void A_tensor_is_recovered_with_a_along_the_wanted_axis(double largest, double wanted, double a, double b)
    {
        double axis = largest * Math.PI / 180;
        double[] directions = [0.1, 0.5, 1.1, 1.9, 2.4, 3.3];
        TensorFit fit = TensorFit.Of(directions, [.. directions.Select(d => 1 + (4 * Math.Pow(Math.Cos(d - axis), 2)))]);
        Assert.InRange(fit.ResidualLargest, 0, 1e-13);
        (Estimate pa, Estimate pb, double turned) = fit.Principal(wanted * Math.PI / 180);
        Assert.Equal(a, pa.Value, 1e-12);
        Assert.Equal(b, pb.Value, 1e-12);
        Assert.InRange(turned - (wanted * Math.PI / 180), -Math.PI / 4, Math.PI / 4);
        double angle = turned + (a > b ? 0 : Math.PI / 2) - axis;
        Assert.Equal(0, Math.Sin(angle), 1e-12);
    }

    [Fact]
    public void What_a_tensor_cannot_carry_is_the_residual()
    {
        double[] directions = [.. Enumerable.Range(0, 36).Select(k => k * Math.PI / 18)];
        TensorFit fit = TensorFit.Of(directions, [.. directions.Select(d => 2 + (0.5 * Math.Cos(2 * d)) + (0.06 * Math.Cos((4 * d) - 1)) + (0.02 * Math.Sin(6 * d)))]);
        Assert.Equal(2, fit.Mean.Value, 1e-12);
        Assert.Equal(0.5, fit.Amplitude.Value, 1e-12);
        Assert.Equal(0.03, fit.Harmonics!.Value.Fourth, 1e-12);
        Assert.Equal(0.01, fit.Harmonics.Value.Sixth, 1e-12);
        Assert.Equal(Math.Sqrt(((0.06 * 0.06) + (0.02 * 0.02)) / 2) / 2, fit.ResidualRms, 1e-12);
    }

    [Fact]
    public void Standard_errors_cover_the_truth_as_often_as_they_should()
    {
        // A normal variable lies within one standard deviation in 68 % of all cases (mathematics, no source needed): 400 seeded tables.
        Random random = new(7);
        double[] directions = [.. Enumerable.Range(0, 12).Select(k => k * Math.PI / 12)];
        int inside = 0, insideAxis = 0;
        for (int n = 0; n < 400; n++)
        {
            double Noise() => 0.05 * Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
            TensorFit fit = TensorFit.Of(
                directions, [.. directions.Select(d => 3 + Math.Cos(2 * (d - 0.4)) + Noise())], [.. directions.Select(_ => 0.05)]);
            inside += Math.Abs(fit.Amplitude.Value - 1) <= fit.Amplitude.Error ? 1 : 0;
            insideAxis += Math.Abs(fit.Axis.Value - 0.4) <= fit.Axis.Error ? 1 : 0;
        }

        Assert.InRange(inside, 240, 304);
        Assert.InRange(insideAxis, 240, 304);
    }

    [Fact]
    public void Circle_and_peanut()
    {
        // Common practice, no source: a circle for an ordinary conductor, peanut-shaped for a strongly anisotropic two-fold one.
        BandResponse round = Model(Cone()).Solve(), peanut = Model(Cone(ratio: 4)).Solve();
        Assert.All(round.Profile, p => Assert.Equal(round.Profile[0].Ballistic.Value, p.Ballistic.Value, 1e-12 * p.Ballistic.Value));

        // At the waist the chord between two neighbouring directions passes outside the curve.
        double[] r = [.. peanut.Profile.Select(p => p.Ballistic.Value)];
        int waist = Array.IndexOf(r, r.Min());
        double chord = r[waist + 2] * Math.Cos(10 * Math.PI / 180);
        Assert.True(chord > r[waist]);
        TensorFit fit = TensorFit.Of([.. peanut.Profile.Select(p => p.Direction)], r);
        Assert.InRange(fit.ResidualLargest, 0.02, 0.5);
        Assert.True(fit.Harmonics!.Value.Fourth > fit.Harmonics.Value.Sixth);
    }

    [Fact]
    public void Two_directions_are_too_few()
    {
        Assert.NotNull(TensorFit.Forbids([0, Math.PI, 1, 1 + Math.PI, 2 * Math.PI]));
        Assert.Null(TensorFit.Forbids([0, Math.PI, 1, 2]));
    }
}
