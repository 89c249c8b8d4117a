using FieldSolve.Files;

namespace FieldSolve.Tests.FilesTests;

public class SafeNamesTests
{
    [Theory]
    [InlineData("0 deg", "0-deg")]
    [InlineData("30°", "30deg")]
    [InlineData("../../etc/passwd", "etc-passwd")]
    [InlineData("5 µm / Ω", "5-um-ohm")]
    [InlineData("   ", "wiring")]
    [InlineData("日本", "wiring")]
    [InlineData("con", "con-wiring")]
    [InlineData("a\\b:c*d?\"<>|", "a-b-c-d")]
    public void Names_become_plain(string name, string expected) => Assert.Equal([expected], SafeNames.Of([name]));

    [Fact]
    public void Names_stay_different_even_without_letter_case()
    {
        IReadOnlyList<string> names = SafeNames.Of(["a b", "a/b", "A-B", "a-b-2", new string('x', 90), new string('x', 91)]);
        Assert.Equal(["a-b", "a-b-2", "A-B-3", "a-b-2-2"], names.Take(4));
        Assert.Equal(6, names.Distinct(StringComparer.OrdinalIgnoreCase).Count());
        Assert.All(names, n => Assert.InRange(n.Length, 1, 52));
    }

    [Fact]
    public void Maps_sort_by_current() => Assert.Equal("0-deg-010.vtu", SafeNames.Map("0-deg", 10));
}
