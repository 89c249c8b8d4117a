using FieldSolve.Laws;

namespace FieldSolve.Tests.LawsTests;

public class LabLawTests
{
    [Theory]
    [InlineData(0)]
    [InlineData(0.4)]
    [InlineData(-1.9)]
    [InlineData(Math.PI)]
    public void Lab_law_is_the_rotated_crystal_law(double axis)
    {
        const int N = 519;
        ISheetLaw law = GuardedLaw.Around(new QuadraticLaw(4e-3, 1e-3, 5e-4, new(1e-9, 2e-9, 3e-9, -1e-9, 2e-9, 1e-9)));
        LabLaw lab = new(law, axis);
        double[] ex = [.. Enumerable.Range(0, N).Select(i => 1e6 * Math.Sin(i * 0.7) * i / N)];
        double[] ey = [.. Enumerable.Range(0, N).Select(i => 1e6 * Math.Cos(i * 1.3) * i / N)];
        double[][] o = [.. Enumerable.Range(0, 10).Select(_ => new double[N])];
        lab.Evaluate(ex, ey, o[0], o[1], o[2], o[3], o[4], o[5]);
        lab.Evaluate(ex, ey, o[6], o[7]);
        lab.EvaluatePure(ex, ey, o[8], o[9]);
        (double s, double c) = Math.SinCos(axis);
        double[] pa = new double[1], pb = new double[1];
        for (int i = 0; i < N; i++)
        {
            // E_crystal = R(-axis) E_lab, K_lab = R(axis) K_crystal.
            double ea = (c * ex[i]) + (s * ey[i]), eb = (c * ey[i]) - (s * ex[i]);
            Response r = LawSamples.At(law, ea, eb);
            Tensor2 t = r.Slope.ToLab(axis);
            double k = Math.Abs(r.Ka) + Math.Abs(r.Kb) + 1e-30, d = Math.Abs(t.Aa) + Math.Abs(t.Bb) + Math.Abs(t.Ab);
            Assert.Equal((c * r.Ka) - (s * r.Kb), o[0][i], 1e-12 * k);
            Assert.Equal((s * r.Ka) + (c * r.Kb), o[1][i], 1e-12 * k);
            Assert.Equal(t.Aa, o[2][i], 1e-12 * d);
            Assert.Equal(t.Ab, o[3][i], 1e-12 * d);
            Assert.Equal(t.Ba, o[4][i], 1e-12 * d);
            Assert.Equal(t.Bb, o[5][i], 1e-12 * d);
            Assert.Equal(o[0][i], o[6][i], 1e-12 * k);
            Assert.Equal(o[1][i], o[7][i], 1e-12 * k);
            law.EvaluatePure([ea], [eb], pa, pb);
            double p = Math.Abs(pa[0]) + Math.Abs(pb[0]) + 1e-30;
            Assert.Equal((c * pa[0]) - (s * pb[0]), o[8][i], 1e-12 * p);
            Assert.Equal((s * pa[0]) + (c * pb[0]), o[9][i], 1e-12 * p);
        }

        Assert.Equal(law.AtZeroField.ToLab(axis), lab.AtZeroField);
        Assert.Equal(law.Guard, lab.Guard);
        Assert.NotNull(lab.Guard);
        Assert.False(lab.IsLinear);
    }

    [Fact]
    public void Evaluation_allocates_nothing()
    {
        LabLaw lab = new(GuardedLaw.Around(new QuadraticLaw(4e-3, 1e-3, 0, new(0, 2e-9, 0, 0, 0, 1e-9))), 0.5);
        double[] e = [.. Enumerable.Range(0, 1000).Select(i => 1e3 * i)];
        double[] k = new double[1000], d = new double[1000];
        lab.Evaluate(e, e, k, d, d, d, d, d);
        long before = GC.GetAllocatedBytesForCurrentThread();
        lab.Evaluate(e, e, k, d, d, d, d, d);
        lab.Evaluate(e, e, k, d);
        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }
}
