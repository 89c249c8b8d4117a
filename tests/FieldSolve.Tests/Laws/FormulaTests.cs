using FieldSolve.Laws;

namespace FieldSolve.Tests.LawsTests;

public class FormulaTests
{
    [Fact]
    public void Hall_part_turns_the_current_clockwise_for_a_positive_coefficient()
    {
        OhmicLaw law = new(4e-3, 1e-3, 5e-4);
        Response alongA = LawSamples.At(law, 10, 0), alongB = LawSamples.At(law, 0, 10);
        Assert.Equal((4e-2, -5e-3), (alongA.Ka, alongA.Kb));
        Assert.Equal((5e-3, 1e-2), (alongB.Ka, alongB.Kb));
        Assert.Equal(new Tensor2(4e-3, 5e-4, -5e-4, 1e-3), law.AtZeroField);
        Assert.True(law.IsLinear);
    }

    // E = (2, 3): E_a² = 4, E_b² = 9, 2 E_a E_b = 12, with ohmic parts 10·2 + 1·3 and 20·3 - 1·2.
    [Fact]
    public void Quadratic_law_uses_contracted_indices()
    {
        QuadraticLaw law = new(10, 20, 1, new(0.1, 0.2, 0.3, 0.4, 0.5, 0.6));
        Response r = LawSamples.At(law, 2, 3);
        Assert.Equal(23 + 0.4 + 1.8 + 3.6, r.Ka, 1e-12);
        Assert.Equal(58 + 1.6 + 4.5 + 7.2, r.Kb, 1e-12);
        Assert.False(law.IsLinear);
    }

    // E = (2, 3): E_a³ = 8, E_a E_b² = 18, E_b³ = 27, E_b E_a² = 12.
    [Fact]
    public void Cubic_law_adds_the_third_order()
    {
        CubicLaw law = new(10, 20, 1, new(0.1, 0.2, 0.3, 0.4, 0.5, 0.6), new(0.01, 0.02, 0.03, 0.04));
        Response r = LawSamples.At(law, 2, 3);
        Assert.Equal(28.8 + 0.08 + 0.36, r.Ka, 1e-12);
        Assert.Equal(71.3 + (27 * 0.04) + (12 * 0.03), r.Kb, 1e-12);
    }

    // |E|² = 13, F² = 6.5: the higher orders are divided by 3, the ohmic part is not.
    [Fact]
    public void Field_limit_divides_the_higher_orders()
    {
        double limit = Math.Sqrt(6.5);
        Response q = LawSamples.At(new QuadraticLaw(10, 20, 1, new(0.1, 0.2, 0.3, 0.4, 0.5, 0.6), limit), 2, 3);
        Assert.Equal(23 + (5.8 / 3), q.Ka, 1e-12);
        Assert.Equal(58 + (13.3 / 3), q.Kb, 1e-12);
        Response c = LawSamples.At(new CubicLaw(10, 20, 1, default, new(0.01, 0.02, 0.03, 0.04), limit), 2, 3);
        Assert.Equal(23 + (0.44 / 3), c.Ka, 1e-12);
        Assert.Equal(58 + (1.44 / 3), c.Kb, 1e-12);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(4)]
    public void Saturating_law_follows_its_formula(double m)
    {
        SaturatingLaw law = new(4e-3, 1e-3, 2e-4, 1e5, 3e5, m);
        foreach ((double a, double b) in new[] { (1e3, -2e3), (1e5, 2e5), (-4e6, 3e6), (0, 5e4), (7e4, 0) })
        {
            double f = Math.Sqrt((a * a) + (b * b));
            Response r = LawSamples.At(law, a, b);
            double ka = (4e-3 * a / Math.Pow(1 + Math.Pow(f / 1e5, m), 1 / m)) + (2e-4 * b);
            double kb = (1e-3 * b / Math.Pow(1 + Math.Pow(f / 3e5, m), 1 / m)) - (2e-4 * a);
            Assert.Equal(ka, r.Ka, 1e-12 * (Math.Abs(ka) + Math.Abs(kb)));
            Assert.Equal(kb, r.Kb, 1e-12 * (Math.Abs(ka) + Math.Abs(kb)));
        }
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3.5)]
    [InlineData(200)]
    public void Saturating_law_stays_finite_from_no_field_to_huge_fields(double m)
    {
        SaturatingLaw law = new(4e-3, 1e-3, 0, 1e5, 1e5, m);
        foreach (double f in new[] { 0, 1e-300, 1e-3, 1e9, 1e40, 1e200, 1e300 })
        {
            Response r = LawSamples.At(law, 0.6 * f, 0.8 * f);
            Assert.True(double.IsFinite(r.Ka) && double.IsFinite(r.Kb));
            Assert.True(double.IsFinite(r.Slope.Aa) && double.IsFinite(r.Slope.Ab) && double.IsFinite(r.Slope.Ba) && double.IsFinite(r.Slope.Bb));
            if (f > 1e30)
            {
                Assert.Equal(4e-3 * 1e5 * 0.6, r.Ka, 1e-9);
                Assert.Equal(1e-3 * 1e5 * 0.8, r.Kb, 1e-9);
            }
        }
    }

    // D. M. Caughey, R. E. Thomas, Proc. IEEE 55 (1967) 2192, from memory: silicon's drift velocity v = v_m (E/E_c) / (1 + (E/E_c)^m)^(1/m)
    // with v_m = 1.1e7 cm/s, E_c = 8e3 V/cm, m = 2 for electrons and 9.5e6 cm/s, 1.95e4 V/cm, m = 1 for holes. K = q n v.
    [Theory]
    [InlineData(1.1e7, 8e3, 2)]
    [InlineData(9.5e6, 1.95e4, 1)]
    public void Saturating_law_is_the_published_drift_velocity(double velocityCmPerS, double fieldVPerCm, double m)
    {
        const double ChargePerArea = 1.602176634e-19 * 1e16;
        double vm = velocityCmPerS / 100, ec = fieldVPerCm * 100, s = ChargePerArea * vm / ec;
        SaturatingLaw law = new(s, s, 0, ec, ec, m);

        // At E_c the velocity is v_m / 2^(1/m), at a hundredth of it the mobility is v_m/E_c, at large fields v_m.
        Assert.Equal(ChargePerArea * vm / Math.Pow(2, 1 / m), LawSamples.At(law, ec, 0).Ka, 1e-12);
        Assert.Equal(0.01 * s * ec, LawSamples.At(law, 0.01 * ec, 0).Ka, 0.011 * 0.01 * s * ec);
        Assert.Equal(ChargePerArea * vm, LawSamples.At(law, 1e6 * ec, 0).Ka, 2e-6 * ChargePerArea * vm);
    }

    [Fact]
    public void Parameters_out_of_range_are_refused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => new OhmicLaw(0, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => new OhmicLaw(1, double.NaN));
        Assert.Throws<ArgumentOutOfRangeException>(() => new OhmicLaw(1, 1, double.PositiveInfinity));
        Assert.Throws<ArgumentOutOfRangeException>(() => new QuadraticLaw(1, 1, 0, new(double.NaN, 0, 0, 0, 0, 0)));
        Assert.Throws<ArgumentOutOfRangeException>(() => new QuadraticLaw(1, 1, 0, default, 0));
        Assert.Throws<ArgumentOutOfRangeException>(() => new CubicLaw(1, 1, 0, default, new(0, 0, 0, double.NaN)));
        Assert.Throws<ArgumentOutOfRangeException>(() => new SaturatingLaw(1, 1, 0, 1, 1, 0.9));
        Assert.Throws<ArgumentOutOfRangeException>(() => new SaturatingLaw(1, 1, 0, -1, 1, 2));
        Assert.Throws<ArgumentOutOfRangeException>(() => new LabLaw(new OhmicLaw(1, 1), double.NaN));
    }

    // A law with a potential has a symmetric dK/dE at every field; the names say which coefficients that takes (Ka = dP/dEa, Kb = dP/dEb).
    [Fact]
    public void Laws_with_a_potential_have_symmetric_slopes()
    {
        SecondOrder even = new(0.1, 0.2, 0.3, 0.3, 0.5, 0.2), other = even with { D26 = 0.6 };
        ThirdOrder cubic = new(0.01, 0.02, 0.02, 0.04);
        ISheetLaw[] with =
        [
            new OhmicLaw(4, 1), new QuadraticLaw(10, 20, 0, even), new CubicLaw(10, 20, 0, even, cubic), new SaturatingLaw(3, 3, 0, 7, 7, 2),
        ];
        ISheetLaw[] without =
        [
            new OhmicLaw(4, 1, 0.1), new QuadraticLaw(10, 20, 0, other), new QuadraticLaw(10, 20, 0, even, 5), new QuadraticLaw(10, 20, 1, even),
            new CubicLaw(10, 20, 0, even, cubic with { C21 = 0.03 }), new SaturatingLaw(3, 3, 0, 7, 8, 2), new SaturatingLaw(3, 3, 0.5, 7, 7, 2),
        ];
        Assert.All(with, law => Assert.True(law.HasPotential));
        Assert.All(without, law => Assert.False(law.HasPotential));
        Assert.All(with, law => Assert.Equal(0, Twist(law), 1e-14));
        Assert.All(without, law => Assert.NotEqual(0, Twist(law), 1e-3));

        static double Twist(ISheetLaw law)
        {
            Tensor2 slope = LawSamples.At(law, 2, 3).Slope;
            return slope.Ab - slope.Ba;
        }
    }
}
