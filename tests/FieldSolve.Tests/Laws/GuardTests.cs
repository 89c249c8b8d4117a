using System.Diagnostics;
using FieldSolve.Laws;
using FsCheck;
using FsCheck.Fluent;
using FsCheck.Xunit;

namespace FieldSolve.Tests.LawsTests;

public class GuardTests
{
    [Fact]
    public void Guarded_law_keeps_a_tenth_of_the_zero_field_eigenvalue_at_every_field()
    {
        Assert.InRange(LawSamples.Pool.Count(l => l.Guarded.Guard is not null), 30, 80);
        foreach (LawSample law in LawSamples.Pool)
        {
            Scan(law);
        }
    }

    private static void Scan(LawSample law)
    {
        double zero = law.Guarded.AtZeroField.SmallestSymmetricEigenvalue;
        FieldGuard? guard = law.Guarded.Guard;

        // Denser than the search and off its directions; without a guard, only the sign is promised.
        double[] ea = new double[301], eb = new double[301], all = new double[301 * 6];
        double top = guard?.Limit ?? law.Scale;
        for (double f = 1e-3 * top; f < 1e6 * top; f *= f < 20 * top ? 1.023 : 1.5)
        {
            for (int j = 0; j < 301; j++)
            {
                (double s, double c) = Math.SinCos(2 * Math.PI * (j + 0.37) / 301);
                ea[j] = f * c;
                eb[j] = f * s;
            }

            Span<double> k = all;
            law.Guarded.Evaluate(
                ea, eb, k[..301], k[301..602], k[602..903], k[903..1204], k[1204..1505], k[1505..]);
            for (int j = 0; j < 301; j++)
            {
                Tensor2 d = new(k[602 + j], k[903 + j], k[1204 + j], k[1505 + j]);
                double least = d.SmallestSymmetricEigenvalue;
                double rounding = (1e-12 * (d.Aa + d.Bb)) + (1e-15 * Math.Abs(law.Guarded.AtZeroField.Ab));
                if (!(guard is not null ? least >= 0.1 * zero : least > -rounding))
                {
                    Assert.Fail(FormattableString.Invariant($"{law}\nat ({ea[j]}, {eb[j]}) V/m: {least / zero} of its zero-field value"));
                }
            }
        }
    }

    [Property(MaxTest = 1500)]
    public Property Guarded_law_is_monotone_between_any_two_fields() => Prop.ForAll(LawSamples.Cases, c =>
    {
        Response p = LawSamples.At(c.Law.Guarded, c.E1a, c.E1b), q = LawSamples.At(c.Law.Guarded, c.E2a, c.E2b);
        double da = c.E1a - c.E2a, db = c.E1b - c.E2b;
        double product = ((p.Ka - q.Ka) * da) + ((p.Kb - q.Kb) * db);
        double least = c.Law.Guarded.Guard is null && c.Law.Pure is not OhmicLaw
            ? 0
            : 0.1 * c.Law.Guarded.AtZeroField.SmallestSymmetricEigenvalue * ((da * da) + (db * db));
        double rounding = 1e-13 * (Math.Abs(p.Ka) + Math.Abs(p.Kb) + Math.Abs(q.Ka) + Math.Abs(q.Kb)) * (Math.Abs(da) + Math.Abs(db));
        Assert.True(product >= least - rounding);
    });

    [Property(MaxTest = 500)]
    public Property Guard_joins_smoothly_and_leaves_the_law_alone_below_its_start() => Prop.ForAll(LawSamples.Cases, c =>
    {
        if (c.Law.Guarded.Guard is not { } g)
        {
            return;
        }

        Assert.Equal(0.7, g.From / g.Limit, 1e-12);
        double f = double.Hypot(c.E1a, c.E1b), ca = c.E1a / f, cb = c.E1b / f;
        Assert.Equal(
            LawSamples.At(c.Law.Pure, 0.999 * g.From * ca, 0.999 * g.From * cb),
            LawSamples.At(c.Law.Guarded, 0.999 * g.From * ca, 0.999 * g.From * cb));

        Response below = LawSamples.At(c.Law.Guarded, (1 - 1e-7) * g.From * ca, (1 - 1e-7) * g.From * cb);
        Response above = LawSamples.At(c.Law.Guarded, (1 + 1e-7) * g.From * ca, (1 + 1e-7) * g.From * cb);
        double size = Math.Abs(below.Ka) + Math.Abs(below.Kb) + (g.From * (c.Law.Guarded.AtZeroField.Aa + c.Law.Guarded.AtZeroField.Bb));
        Assert.Equal(below.Ka, above.Ka, 1e-5 * size);
        Assert.Equal(below.Kb, above.Kb, 1e-5 * size);
        Assert.Equal(below.Slope.Aa, above.Slope.Aa, 1e-5 * size / g.From);
        Assert.Equal(below.Slope.Ab, above.Slope.Ab, 1e-5 * size / g.From);
        Assert.Equal(below.Slope.Ba, above.Slope.Ba, 1e-5 * size / g.From);
        Assert.Equal(below.Slope.Bb, above.Slope.Bb, 1e-5 * size / g.From);
    });

    // K_a = s E + d E² alone: dK/dE = s + 2 d E along a loses definiteness at E = -s/2d. The limit cannot pass the field 0.9 s/2d / 0.7
    // (a tenth kept at the start) and is of that size.
    [Fact]
    public void Limit_of_a_single_second_order_term_is_where_algebra_puts_it()
    {
        ISheetLaw law = GuardedLaw.Around(new QuadraticLaw(4e-3, 4e-3, 0, new(2e-9, 0, 0, 0, 0, 0)));
        double lost = 4e-3 / (2 * 2e-9);
        Assert.NotNull(law.Guard);
        Assert.InRange(law.Guard.Limit, 0.8 * lost, 0.9 * lost / 0.7);
    }

    public static TheoryData<string> Unguarded => ["ohmic", "cubic", "limited", "saturating", "zero"];

    [Theory]
    [MemberData(nameof(Unguarded))]
    public void Laws_that_keep_definiteness_need_no_guard(string which)
    {
        ILawDetail law = which switch
        {
            "ohmic" => new OhmicLaw(4e-3, 1e-3, 5e-3),
            "cubic" => new CubicLaw(4e-3, 1e-3, 1e-3, default, new(1e-15, 1e-15, 1e-15, 1e-15)),
            "limited" => new QuadraticLaw(4e-3, 1e-3, 0, new(0, 2e-9, 0, 0, 0, 1e-9), 1e5),
            "saturating" => new SaturatingLaw(4e-3, 1e-3, 0, 1e5, 4e5, 2),
            _ => new QuadraticLaw(4e-3, 1e-3, 0, default),
        };
        Assert.Null(GuardedLaw.Around(law).Guard);
    }

    [Fact]
    public void Laws_that_lose_definiteness_are_guarded()
    {
        Assert.NotNull(GuardedLaw.Around(new SaturatingLaw(4e-3, 1e-3, 0, 1e5, 1e5, 2)).Guard);
        Assert.NotNull(GuardedLaw.Around(new SaturatingLaw(4e-3, 1e-3, 0, 1e5, 3.9e5, 1)).Guard);
        Assert.NotNull(GuardedLaw.Around(new CubicLaw(1, 1, 0, default, new(-1e-6, 0, 0, 1))).Guard);
        Assert.NotNull(GuardedLaw.Around(new QuadraticLaw(1, 1, 0, new(0, 1e-30, 0, 0, 0, 0))).Guard);
        Assert.NotNull(GuardedLaw.Around(new CubicLaw(1, 1, 0, default, new(1, 0, 0, -1e-12))).Guard);

        // Equal saturation currents do not suffice when the two fields are far apart.
        Assert.NotNull(GuardedLaw.Around(new SaturatingLaw(1, 100, 0, 1, 0.01, 2)).Guard);
    }

    [Fact]
    public void Search_gives_the_same_guard_every_time_and_takes_milliseconds()
    {
        QuadraticLaw law = new(4e-3, 1e-3, 0, new(0, 2e-9, 0, 0, 0, 1e-9));
        FieldGuard? first = GuardSearch.Find(law);
        Stopwatch watch = Stopwatch.StartNew();
        for (int k = 0; k < 10; k++)
        {
            Assert.Equal(first, GuardSearch.Find(law));
        }

        // 20 ms each is wanted; the wide margin is for a busy machine.
        Assert.InRange(watch.Elapsed.TotalMilliseconds / 10, 0, 200);
    }

    [Fact]
    public void Batches_of_any_length_give_what_single_points_give()
    {
        ISheetLaw law = GuardedLaw.Around(new QuadraticLaw(4e-3, 1e-3, 1e-3, new(1e-9, 2e-9, 3e-9, -1e-9, 2e-9, 1e-9)));
        foreach (int n in new[] { 1, 3, 7, 255, 256, 257, 1001 })
        {
            double[] ea = [.. Enumerable.Range(0, n).Select(i => 1e6 * Math.Sin(i * 0.7) * i / n)];
            double[] eb = [.. Enumerable.Range(0, n).Select(i => 1e6 * Math.Cos(i * 1.3) * i / n)];
            double[][] o = [.. Enumerable.Range(0, 6).Select(_ => new double[n])];
            law.Evaluate(ea, eb, o[0], o[1], o[2], o[3], o[4], o[5]);
            for (int i = 0; i < n; i++)
            {
                Assert.Equal(
                    LawSamples.At(law, ea[i], eb[i]), new(o[0][i], o[1][i], new(o[2][i], o[3][i], o[4][i], o[5][i])));
            }
        }

        Assert.Throws<ArgumentException>(() => law.Evaluate(new double[2], new double[2], new double[2], new double[3]));
    }
}
