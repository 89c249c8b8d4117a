using FieldSolve.Bands;

namespace FieldSolve.Tests.BandsTests;

/// <summary>The quadrature: exact where theory says so, and never further off than its error.</summary>
public class GaussKronrodTests
{
    [Fact]
    public void Exact_for_polynomials()
    {
        // Fifteen points of Kronrod's rule are exact to degree 22 (R. Piessens et al., QUADPACK, 1983); x^6 has degree 20 in the program's variable.
        IntegralSet set = Integrate(x => Math.Pow(x, 6), 0, 1, 0.5);
        Assert.Equal(1.0 / 7, set.Values[0], 1e-15);
    }

    public static TheoryData<string, double, double, double> Known => new()
    {
        { "root", 0, 2, 2 * Math.Sqrt(2) * 2 / 3 },
        { "half circle", -1, 1, Math.PI / 2 },
        { "peak", -1, 1, 2 * Math.Atan(1 / 1e-3) / 1e-3 },
        { "log", 0, 1, -1 },
        { "kink", 0, 1, (0.3 * 0.3 / 2) + (0.7 * 0.7 / 2) },
    };

    [Theory]
    [MemberData(nameof(Known))]
    public void Known_integrals(string name, double from, double to, double expected)
    {
        IntegralSet set = Integrate(
            x => name switch
            {
                "root" => Math.Sqrt(x),
                "half circle" => Math.Sqrt((1 - x) * (1 + x)),
                "peak" => 1 / ((x * x) + 1e-6),
                "log" => Math.Log(x),
                _ => Math.Abs(x - 0.3),
            },
            from, to, 1e-9);
        Assert.Equal(expected, set.Values[0], 1e-8 * Math.Abs(expected));
        Assert.True(Math.Abs(set.Values[0] - expected) <= set.Errors[0] + (4e-15 * Math.Abs(expected)), $"{set.Values[0]} ± {set.Errors[0]} misses {expected}");
        Assert.True(set.Meets([1e-8], [0]));
    }

    [Fact]
    public void Own_errors_are_added()
    {
        IntegralSet set = GaussKronrod.Integrate(
            (x, v, e) => (v[0], e[0]) = (1, 0.25), [0, 2], [0], [1e-9], CancellationToken.None);
        Assert.Equal(2, set.Values[0], 1e-14);
        Assert.Equal(0.5, set.Errors[0], 1e-10);
    }

    private static IntegralSet Integrate(Func<double, double> f, double from, double to, double error) =>
        GaussKronrod.Integrate((x, v, _) => v[0] = f(x), [from, to], [0], [error], CancellationToken.None);
}
