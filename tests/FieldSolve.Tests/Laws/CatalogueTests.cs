using System.Globalization;
using FieldSolve.Laws;

namespace FieldSolve.Tests.LawsTests;

public class CatalogueTests
{
    [Fact]
    public void Catalogue_holds_the_documented_laws_and_keys()
    {
        Assert.Equal(["ohmic", "quadratic", "cubic", "saturating", "table"], LawCatalogue.Kinds.Select(k => k.Name));
        Assert.Equal(["a", "b", "hall"], Keys("ohmic"));
        Assert.Equal(["a", "b", "hall", "d11", "d12", "d16", "d21", "d22", "d26", "field_limit"], Keys("quadratic"));
        Assert.Equal(
            ["a", "b", "hall", "d11", "d12", "d16", "d21", "d22", "d26", "c11", "c12", "c21", "c22", "field_limit"], Keys("cubic"));
        Assert.Equal(["a", "b", "hall", "field_a", "field_b", "sharpness"], Keys("saturating"));
        Assert.Equal(["file"], Keys("table"));
        Assert.Null(LawCatalogue.Find("cubics"));

        static IEnumerable<string> Keys(string name) => LawCatalogue.Find(name)!.Parameters.Select(p => p.Key);
    }

    // Each key gets a value of its own, so that two keys that were exchanged would show.
    [Fact]
    public void Every_key_reaches_its_place_in_the_law()
    {
        Dictionary<string, double> v = new()
        {
            ["a"] = 10,
            ["b"] = 20,
            ["hall"] = 1,
            ["d11"] = 0.1,
            ["d12"] = 0.2,
            ["d16"] = 0.3,
            ["d21"] = 0.4,
            ["d22"] = 0.5,
            ["d26"] = 0.6,
            ["c11"] = 0.01,
            ["c12"] = 0.02,
            ["c21"] = 0.03,
            ["c22"] = 0.04,
            ["field_limit"] = 7,
        };
        SecondOrder second = new(0.1, 0.2, 0.3, 0.4, 0.5, 0.6);
        Same(new CubicLaw(10, 20, 1, second, new(0.01, 0.02, 0.03, 0.04), 7), Make("cubic", v));
        foreach (string key in new[] { "c11", "c12", "c21", "c22" })
        {
            v.Remove(key);
        }

        Same(new QuadraticLaw(10, 20, 1, second, 7), Make("quadratic", v));
        v.Remove("field_limit");
        Same(new QuadraticLaw(10, 20, 1, second), Make("quadratic", v));
        Same(new OhmicLaw(10, 20), Make("ohmic", new() { ["a"] = 10, ["b"] = 20 }));
        Same(
            new SaturatingLaw(10, 20, 1, 3, 4, 2),
            Make("saturating", new() { ["a"] = 10, ["b"] = 20, ["hall"] = 1, ["field_a"] = 3, ["field_b"] = 4, ["sharpness"] = 2 }));

        static void Same(ISheetLaw want, ISheetLaw got)
        {
            double[] w = new double[2], g = new double[2];
            want.EvaluatePure([2], [3], w.AsSpan(0, 1), w.AsSpan(1, 1));
            got.EvaluatePure([2], [3], g.AsSpan(0, 1), g.AsSpan(1, 1));
            Assert.Equal(w, g);
            Assert.Equal(want.Kind, got.Kind);
        }
    }

    [Theory]
    [InlineData("a", 0, "greater than zero")]
    [InlineData("b", double.NaN, "greater than zero")]
    [InlineData("field_limit", -1, "greater than zero")]
    [InlineData("d11", double.PositiveInfinity, "finite")]
    [InlineData("sharpness", 2, "no parameter")]
    public void Values_outside_their_bounds_are_refused(string key, double value, string part)
    {
        Dictionary<string, double> v = new() { ["a"] = 1, ["b"] = 1, [key] = value };
        Assert.Contains(part, Assert.Throws<LawException>(() => Make("quadratic", v)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Missing_values_are_named()
    {
        LawException e = Assert.Throws<LawException>(() => Make("saturating", new() { ["a"] = 1, ["b"] = 1, ["field_a"] = 1, ["field_b"] = 1 }));
        Assert.Contains("'sharpness'", e.Message, StringComparison.Ordinal);
        Assert.Throws<LawException>(() => Make("table", []));
    }

    [Fact]
    public void Faults_of_a_table_come_with_its_path()
    {
        LawKind kind = LawCatalogue.Find("table")!;
        LawException e = Assert.Throws<LawException>(() => kind.Build(new(
            kind, new Dictionary<string, double>(), new Dictionary<string, LawFile> { ["file"] = new("k.csv", "ea\n") })));
        Assert.Equal("k.csv", e.File);
        Assert.Equal((1, 1), (Assert.Single(e.Faults).Line, e.Faults[0].Column));
    }

    [Fact]
    public void Description_names_parameters_units_and_reach_in_any_culture()
    {
        CultureInfo before = CultureInfo.CurrentCulture;
        try
        {
            CultureInfo.CurrentCulture = new CultureInfo(string.Empty) { NumberFormat = { NumberDecimalSeparator = "," } };
            Assert.Equal(
                "ohmic: a = 4 mS, b = 1 mS, hall = 500 µS\nthe same dK/dE at every field",
                LawSummary.Describe(Make("ohmic", new() { ["a"] = 4e-3, ["b"] = 1e-3, ["hall"] = 5e-4 })));
            string text = LawSummary.Describe(Make("quadratic", new() { ["a"] = 4e-3, ["b"] = 1e-3, ["d12"] = 2e-9 }));
            Assert.StartsWith("quadratic: a = 4 mS, b = 1 mS, d12 = 2E-09 A m/V^2\nas written up to ", text, StringComparison.Ordinal);
            Assert.Contains("sharpness = 2", LawSummary.Describe(new SaturatingLaw(1, 1, 0, 1, 1, 2)), StringComparison.Ordinal);
        }
        finally
        {
            CultureInfo.CurrentCulture = before;
        }
    }

    private static ISheetLaw Make(string name, Dictionary<string, double> numbers)
    {
        LawKind kind = LawCatalogue.Find(name)!;
        return kind.Build(new(kind, numbers));
    }
}
