using FieldSolve.Laws;
using FsCheck;
using FsCheck.Fluent;
using FsCheck.Xunit;

namespace FieldSolve.Tests.LawsTests;

public class DerivativeTests
{
    [Property(MaxTest = 1500)]
    public Property Derivative_is_the_limit_of_differences_at_every_field() => Prop.ForAll(LawSamples.Cases, c =>
    {
        Check(c.Law.Pure, c.E1a, c.E1b);
        Check(c.Law.Guarded, c.E1a, c.E1b);
        if (c.Law.Guarded.Guard is { } g)
        {
            // Also where the bend is strongest.
            double f = double.Hypot(c.E1a, c.E1b), at = g.From + (double.Hypot(c.E2a, c.E2b) / c.Law.Scale / 10 * (g.Limit - g.From));
            Check(c.Law.Guarded, c.E1a / f * at, c.E1b / f * at);
        }
    });

    [Fact]
    public void Derivative_at_zero_field_is_the_ohmic_tensor()
    {
        foreach (LawSample law in LawSamples.Pool)
        {
            Response r = LawSamples.At(law.Guarded, 0, 0);
            Assert.Equal(law.Guarded.AtZeroField, r.Slope);
            Assert.Equal((0.0, 0.0), (r.Ka, r.Kb));
        }
    }

    private static void Check(ISheetLaw law, double ea, double eb)
    {
        // Central differences of two steps, extrapolated: error of order step^4, rounding about 1e-16 / step.
        double size = double.Hypot(ea, eb), h = 1e-3 * size;
        Response at = LawSamples.At(law, ea, eb);
        (double aa, double ba) = Difference(law, ea, eb, h, 0);
        (double ab, double bb) = Difference(law, ea, eb, 0, h);
        double norm = Math.Abs(at.Slope.Aa) + Math.Abs(at.Slope.Ab) + Math.Abs(at.Slope.Ba) + Math.Abs(at.Slope.Bb)
            + ((Math.Abs(at.Ka) + Math.Abs(at.Kb)) / size);

        // The third derivative of g jumps at the guard's start: there the difference is off by h² g'''/6 at most.
        double tolerance = 1e-6 * norm;
        if (law.Guard is { } g && Math.Abs(size - g.From) <= 2 * h)
        {
            tolerance = 1e-3 * norm;
        }

        Assert.Equal(aa, at.Slope.Aa, tolerance);
        Assert.Equal(ab, at.Slope.Ab, tolerance);
        Assert.Equal(ba, at.Slope.Ba, tolerance);
        Assert.Equal(bb, at.Slope.Bb, tolerance);
    }

    private static (double A, double B) Difference(ISheetLaw law, double ea, double eb, double ha, double hb)
    {
        (double A, double B) Central(double k)
        {
            Response p = LawSamples.At(law, ea + (k * ha), eb + (k * hb)), m = LawSamples.At(law, ea - (k * ha), eb - (k * hb));
            return ((p.Ka - m.Ka) / (2 * k * (ha + hb)), (p.Kb - m.Kb) / (2 * k * (ha + hb)));
        }

        (double A, double B) full = Central(1), half = Central(0.5);
        return (((4 * half.A) - full.A) / 3, ((4 * half.B) - full.B) / 3);
    }
}
