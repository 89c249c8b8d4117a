using System.Globalization;
using System.Text;
using FieldSolve.Laws;
using FsCheck;
using FsCheck.Fluent;

namespace FieldSolve.Tests.LawsTests;

/// <summary>One point's K and dK/dE.</summary>
public readonly record struct Response(double Ka, double Kb, Tensor2 Slope);

/// <summary>A law as written, the same with its guard, and the field at which its higher orders matter.</summary>
public sealed record LawSample(ISheetLaw Pure, ISheetLaw Guarded, double Scale)
{
    public override string ToString() => LawSummary.Describe(Guarded);
}

/// <summary>A random law with two random fields, up to about thirty times its scale.</summary>
public sealed record LawCase(LawSample Law, double E1a, double E1b, double E2a, double E2b);

/// <summary>Random laws of every kind; sizes over decades, so that no scale is preferred.</summary>
public static class LawSamples
{
    private static readonly Gen<double> Sign = Gen.Choose(-1000, 1000).Select(i => i / 1000.0);

    private static Gen<double> Decades(double low, double high) =>
        Gen.Choose(0, 1000).Select(i => low * Math.Pow(high / low, i / 1000.0));

    private static readonly Gen<(double A, double B, double Hall, double Field)> Base =
        from a in Decades(1e-4, 1e-2)
        from ratio in Decades(0.05, 20)
        from hall in Sign
        from field in Decades(1e2, 1e6)
        select (a, a * ratio, hall * a, field);

    public static Gen<LawSample> Quadratic(bool limited) =>
        from o in Base
        from d in Sign.ArrayOf(6)
        from limit in Decades(0.2, 20)
        let k = o.A / o.Field
        let second = new SecondOrder(d[0] * k, d[1] * k, d[2] * k, d[3] * k, d[4] * k, d[5] * k)
        select Sample(new QuadraticLaw(o.A, o.B, o.Hall, second, limited ? limit * o.Field : double.PositiveInfinity), o.Field);

    public static Gen<LawSample> Cubic(bool limited) =>
        from o in Base
        from d in Sign.ArrayOf(6)
        from c in Sign.ArrayOf(4)
        from share in Gen.Choose(0, 2)
        from limit in Decades(0.2, 20)
        let k = 0.5 * share * o.A / o.Field
        let q = o.A / o.Field / o.Field
        select Sample(
            new CubicLaw(
                o.A, o.B, o.Hall, new(d[0] * k, d[1] * k, d[2] * k, d[3] * k, d[4] * k, d[5] * k),
                new(c[0] * q, c[1] * q, c[2] * q, c[3] * q), limited ? limit * o.Field : double.PositiveInfinity),
            o.Field);

    public static Gen<LawSample> Saturating =>
        from o in Base
        from ratio in Decades(0.1, 10)
        from m in Gen.Choose(0, 50)
        from equal in Gen.Choose(0, 3)
        select Sample(
            new SaturatingLaw(o.A, o.B, o.Hall, o.Field, equal == 0 ? o.Field * o.A / o.B : o.Field * ratio, 1 + (m / 10.0)), o.Field);

    public static Gen<LawSample> Ohmic => Base.Select(o => Sample(new OhmicLaw(o.A, o.B, o.Hall), o.Field));

    public static Gen<LawSample> Parametric => Gen.OneOf(
        Ohmic, Quadratic(false), Quadratic(true), Cubic(false), Cubic(true), Saturating);

    private static Gen<(double A, double B)> Field(double scale) =>
        from f in Decades(1e-4, 30)
        from angle in Gen.Choose(0, 3600)
        select (scale * f * Math.Cos(angle * Math.PI / 1800), scale * f * Math.Sin(angle * Math.PI / 1800));

    /// <summary>The random laws, made once: the search for a guard costs more than any other test of a law.</summary>
    public static IReadOnlyList<LawSample> Pool { get; } = [.. Parametric.Sample(50, new Rnd(20, 17), 90)];

    public static Arbitrary<LawCase> Cases { get; } = (
        from law in Gen.Elements<LawSample>(Pool)
        from e1 in Field(law.Scale)
        from e2 in Field(law.Scale)
        select new LawCase(law, e1.A, e1.B, e2.A, e2.B)).ToArbitrary();


    private static LawSample Sample(ILawDetail law, double scale) => new(law, GuardedLaw.Around(law), scale);

    public static Response At(ISheetLaw law, double ea, double eb)
    {
        double[] k = new double[6];
        law.Evaluate(
            [ea], [eb], k.AsSpan(0, 1), k.AsSpan(1, 1), k.AsSpan(2, 1), k.AsSpan(3, 1), k.AsSpan(4, 1), k.AsSpan(5, 1));
        double[] value = new double[2];
        law.Evaluate([ea], [eb], value.AsSpan(0, 1), value.AsSpan(1, 1));

        // Both methods must tell the same K; rounding may differ.
        Assert.Equal(k[0], value[0], 1e-12 * (Math.Abs(k[0]) + Math.Abs(k[1]) + 1e-300));
        Assert.Equal(k[1], value[1], 1e-12 * (Math.Abs(k[0]) + Math.Abs(k[1]) + 1e-300));
        return new(k[0], k[1], new(k[2], k[3], k[4], k[5]));
    }

    /// <summary>A table of a law on an even grid of n x n fields up to ±most.</summary>
    public static string Table(ISheetLaw law, double most, int n)
    {
        StringBuilder text = new("# made for a test\nea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n");
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                double a = most * ((2.0 * i / (n - 1)) - 1), b = most * ((2.0 * j / (n - 1)) - 1);
                Response r = At(law, a, b);
                text.AppendLine(string.Create(CultureInfo.InvariantCulture, $"{a},{b},{r.Ka},{r.Kb}"));
            }
        }

        return text.ToString();
    }
}
