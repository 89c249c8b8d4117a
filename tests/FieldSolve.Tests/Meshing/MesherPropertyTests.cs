using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FsCheck;
using FsCheck.Fluent;
using FsCheck.Xunit;

namespace FieldSolve.Tests.MeshingTests;

public class MesherPropertyTests
{
    // Outlines seen whole from their middle, with contacts down to a millionth of a side.
    private static Domain Star(int seed, out ISizeField size)
    {
        Random random = new(seed);
        int n = random.Next(4, 30);
        double depth = random.NextDouble();
        Point2[] corners = new Point2[n];
        for (int i = 0; i < n; i++)
        {
            double angle = 2 * Math.PI * (i + (0.8 * random.NextDouble())) / n, radius = 1 - (depth * random.NextDouble());
            corners[i] = new(radius * Math.Cos(angle), radius * Math.Sin(angle));
        }

        List<(int, double, double)> contacts = [];
        for (int i = 0; i < n; i++)
        {
            if (random.Next(3) == 0)
            {
                double from = 0.9 * random.NextDouble();
                contacts.Add((i, from, from + ((1 - from) * Math.Pow(10, -6 * random.NextDouble()))));
            }
        }

        Domain domain = TestDomains.Polygon(corners, contacts);
        double smallest = Math.Pow(10, -1 - (5 * random.NextDouble()));
        size = MesherTests.Graded(domain, 0.2, smallest, 0.3);
        return domain;
    }

    [Property(MaxTest = 40, Replay = "(1234567,7)")]
    public Property Random_stars_mesh_soundly() => Prop.ForAll(Gen.Choose(0, 1_000_000).ToArbitrary(), seed =>
    {
        Domain domain = Star(seed, out ISizeField size);
        TriangleMesh mesh = Mesher.Generate(domain, size);
        IReadOnlyList<string> faults = MeshChecker.Check(mesh);
        double angle = MeshQuality.Of(mesh).MinimumAngleAwayFromSharpCorners;
        return (faults.Count == 0 && angle >= 25).Label($"seed {seed}: angle {angle}, {faults.Count} faults, {(faults.Count > 0 ? faults[0] : "")}");
    });
}
