using FieldSolve.Laws;

namespace FieldSolve.Tests.LawsTests;

/// <summary>dK/dp against central differences of the law built anew, and beyond the guard against what its definition says.</summary>
public class ParameterSlopeTests
{
    private static readonly ISheetLaw Cubic = Make("cubic", new()
    {
        ["a"] = 3e-3,
        ["b"] = 1e-3,
        ["hall"] = 4e-4,
        ["d11"] = 2e-9,
        ["d16"] = -1e-9,
        ["d22"] = 3e-9,
        ["d26"] = 1e-9,
        ["c11"] = 2e-14,
        ["c12"] = 1e-14,
        ["c21"] = -2e-14,
        ["c22"] = 3e-14,
        ["field_limit"] = 2e5,
    });

    private static readonly ISheetLaw Saturating = Make("saturating", new()
    {
        ["a"] = 3e-3,
        ["b"] = 1e-3,
        ["hall"] = 4e-4,
        ["field_a"] = 1e5,
        ["field_b"] = 3e5,
        ["sharpness"] = 1.7,
    });

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void Slopes_are_limits_of_differences(bool cubic)
    {
        ISheetLaw law = cubic ? Cubic : Saturating;
        double[] ea = [1e3, -2e4, 3e4, 0, 5], eb = [-4e3, 1e4, 2e4, 3e4, -8], ka = new double[5], kb = new double[5];
        if (law.Guard is { } guard)
        {
            Assert.True(guard.From > 4e4, "the fields must lie below the guard, which moves with the parameters");
        }

        foreach (LawParameter p in LawSensitivity.Parameters(law))
        {
            double value = LawSensitivity.Value(law, p.Key), step = 1e-4 * (value == 0 ? 1e-9 : Math.Abs(value));
            LawSensitivity.Slope(law, p.Key, ea, eb, ka, kb);
            (double[] pa, double[] pb) = At(LawSensitivity.With(law, new Dictionary<string, double> { [p.Key] = value + step }), ea, eb);
            (double[] ma, double[] mb) = At(LawSensitivity.With(law, new Dictionary<string, double> { [p.Key] = value - step }), ea, eb);
            double scale = ka.Concat(kb).Max(Math.Abs);
            Assert.True(scale > 0, p.Key);
            for (int i = 0; i < ea.Length; i++)
            {
                Assert.Equal((pa[i] - ma[i]) / (2 * step), ka[i], 1e-6 * scale);
                Assert.Equal((pb[i] - mb[i]) / (2 * step), kb[i], 1e-6 * scale);
            }
        }
    }

    [Fact]
    public void Beyond_the_guard_higher_orders_see_the_field_pulled_back()
    {
        ISheetLaw law = Make("quadratic", new() { ["a"] = 1e-3, ["b"] = 1e-3, ["d11"] = 1e-8 });
        FieldGuard guard = law.Guard!;
        double f = 3 * guard.Limit, w = guard.Limit - guard.From, pulled = (guard.From + (w * Math.Tanh((f - guard.From) / w))) / f;
        double[] ka = new double[1], kb = new double[1];
        LawSensitivity.Slope(law, "d11", [0.6 * f], [0.8 * f], ka, kb);
        Assert.Equal(Math.Pow(0.6 * f * pulled, 2), ka[0], 1e-12 * ka[0]);
        Assert.Equal(0, kb[0]);
        LawSensitivity.Slope(law, "b", [0.6 * f], [0.8 * f], ka, kb);
        Assert.Equal((0, 0.8 * f), (ka[0], kb[0]), (x, y) => x.Item1 == y.Item1 && Math.Abs(x.Item2 - y.Item2) <= 1e-12 * f);
    }

    [Fact]
    public void What_cannot_be_varied_is_refused()
    {
        // A limit that is not there has no value to vary, a table no numbers.
        ISheetLaw law = Make("quadratic", new() { ["a"] = 1e-3, ["b"] = 1e-3 });
        Assert.DoesNotContain(LawSensitivity.Parameters(law), p => p.Key == "field_limit");
        Assert.Throws<ArgumentException>(() => LawSensitivity.Value(law, "c11"));
        Assert.Throws<LawException>(() => LawSensitivity.With(law, new Dictionary<string, double> { ["a"] = -1 }));
        Assert.Equal(2e-9, LawSensitivity.Value(LawSensitivity.With(law, new Dictionary<string, double> { ["d12"] = 2e-9 }), "d12"));
    }

    private static ISheetLaw Make(string kind, Dictionary<string, double> values)
    {
        LawKind k = LawCatalogue.Find(kind)!;
        return k.Build(new LawValues(k, values));
    }

    private static (double[] A, double[] B) At(ISheetLaw law, double[] ea, double[] eb)
    {
        double[] ka = new double[ea.Length], kb = new double[ea.Length];
        law.Evaluate(ea, eb, ka, kb);
        return (ka, kb);
    }
}
