using System.Diagnostics;
using FieldSolve.Geometry;
using Xunit.Abstractions;

namespace FieldSolve.Tests.GeometryTests;

/// <summary>Large layouts take about a second; the bounds here only catch a search of all pairs.</summary>
public class LargeLayoutTests(ITestOutputHelper output)
{
    private const double Bound = 60; // seconds on a busy machine; all pairs of these would take minutes

    [Fact]
    public void Fifty_thousand_corners()
    {
        Outline wavy = Wavy(100);
        Timed("outline", () => wavy = Wavy(50_000));
        Timed("validate", () => Assert.Empty(wavy.Validate()));
        Timed("inset", () => Assert.True(wavy.Inset(1e-3).Pieces.Length > 1000));
        double length = wavy.LoopLength(0) / 1000;
        ContactPlacement[] contacts = [.. Enumerable.Range(0, 1000).Select(k => Shapes.Edge(0, k * length, length / 2))];
        Point2[] tips = [.. Enumerable.Range(0, 100).Select(k => new Point2(0.005 * k, 0.1))];
        Timed("domain", () => Assert.Equal(100, DomainBuilder.Build(wavy, contacts, tips).Tips.Count));
        Timed("nearest", () => Assert.All(contacts, c => Assert.True(wavy.Nearest(1.1 * wavy.At(0, c.Span!.Value.From)).Distance > 0.01)));
    }

    [Fact]
    public void Five_hundred_holes_and_a_thousand_pads()
    {
        Point2[][] loops = [Shapes.Rectangle(0, 0, 50, 40), .. Enumerable.Range(0, 500).Select(k => Square((2 * (k % 25)) + 0.5, (2 * (k / 25)) + 0.5))];
        Outline sheet = Shapes.Polygon(loops);
        ContactPlacement[] contacts = [.. Enumerable.Range(0, 500).SelectMany(k => new[]
        {
            new ContactPlacement(null, Square((2 * (k % 25)) + 1.5, (2 * (k / 25)) + 0.75), true),
            new ContactPlacement(null, Square((2 * (k % 25)) + 1.5, (2 * (k / 25)) + 1.5), false),
        })];
        Timed("validate", () => Assert.Empty(sheet.Validate()));
        Domain d = DomainBuilder.Build(sheet, [], []);
        Timed("domain", () => d = DomainBuilder.Build(sheet, contacts, []));
        Assert.Equal(2000 - (1000 * 0.16), DomainChecks.RimArea(d), 9);
        Assert.Equal(500, d.Regions.Count);
    }

    private static Point2[] Square(double x, double y) => Shapes.Rectangle(x, y, x + 0.4, y + 0.4);

    // A coast with bays, rough down to the last corner.
    private static Outline Wavy(int corners)
    {
        var random = new Random(1);
        return Shapes.Simple([.. Enumerable.Range(0, corners).Select(k => 2 * Math.PI * k / corners)
            .Select(a => (1 + (0.1 * Math.Sin(37 * a)) + (1e-4 * random.NextDouble())) * new Point2(1, 0).Turned(a))]);
    }

    private void Timed(string what, Action action)
    {
        var watch = Stopwatch.StartNew();
        action();
        output.WriteLine($"{what}: {watch.Elapsed.TotalSeconds:F2} s");
        Assert.True(watch.Elapsed.TotalSeconds < Bound, what);
    }
}
