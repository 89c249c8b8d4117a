using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

/// <summary>Random sheets of size about 2 at the origin, with contacts and tips.</summary>
internal static class RandomLayouts
{
    /// <summary>A star-shaped polygon about the origin.</summary>
    public static Outline Star(Random random, int corners) => Shapes.Polygon(StarLoop(random, corners));

    public static Outline Sheet(Random random) => random.Next(5) switch
    {
        0 => Shapes.Disc(1),
        1 => Shapes.Ring(0.25, 1),
        2 => Shapes.Bar(2, 1),
        3 => PiercedStar(random),
        _ => Shapes.Polygon(
            [
                new(-1, -0.5), new(-0.5, -0.5), new(-0.5, -1), new(-0.25, -1), new(-0.25, -0.5), new(1, -0.5),
                new(1, 0.5), new(0.5, 0.5), new(0.5, 1), new(0.25, 1), new(0.25, 0.5), new(-1, 0.5),
            ],
            Shapes.Rectangle(0.25, -0.25, 0.5, 0.25)),
    };

    /// <summary>
    /// Up to three pads and three edge contacts. Half of the pads have corners on a grid of eighths, which the sheets' corners lie
    /// on too, so that corners, edges and rims coincide often.
    /// </summary>
    public static List<ContactPlacement> Contacts(Random random, Outline sheet)
    {
        var contacts = new List<ContactPlacement>();
        for (int k = random.Next(4); k > 0; k--)
        {
            int loop = random.Next(sheet.Loops.Count);
            double length = sheet.LoopLength(loop);
            contacts.Add(Shapes.Edge(loop, length * random.NextDouble(), length * (0.02 + (0.1 * random.NextDouble()))));
        }

        for (int k = random.Next(4); k > 0; k--)
        {
            Point2[] pad = random.Next(2) == 0 ? GridPad(random) : TurnedPad(random);
            contacts.Add(new(null, random.Next(2) == 0 ? pad : [.. pad.Reverse()], random.Next(2) == 0));
        }

        return contacts;
    }

    private static Outline PiercedStar(Random random)
    {
        while (true)
        {
            Outline star = Shapes.Polygon(StarLoop(random, 3 + random.Next(20)), Shapes.Rectangle(-0.125, -0.125, 0.125, 0.125));
            if (star.Validate().Count == 0)
            {
                return star;
            }
        }
    }

    private static Point2[] StarLoop(Random random, int corners) => [.. Enumerable.Range(0, corners)
        .Select(k => (0.3 + (0.7 * random.NextDouble())) * new Point2(1, 0).Turned((k + (0.8 * random.NextDouble())) * 2 * Math.PI / corners))];

    private static Point2[] GridPad(Random random)
    {
        double x = random.Next(-9, 9) / 8.0, y = random.Next(-9, 9) / 8.0;
        double w = random.Next(1, 9) / 8.0, h = random.Next(1, 9) / 8.0;
        double off = random.Next(-1, 2) * 2e-10; // a tenth of the tolerance
        Point2[] corners = Shapes.Rectangle(x + off, y - off, x + w + off, y + h);
        return random.Next(3) == 0 ? corners[..3] : corners;
    }

    private static Point2[] TurnedPad(Random random)
    {
        Point2 centre = new((2.2 * random.NextDouble()) - 1.1, (2.2 * random.NextDouble()) - 1.1);
        double angle = Math.PI * random.NextDouble(), w = 0.05 + (0.5 * random.NextDouble()), h = 0.05 + (0.5 * random.NextDouble());
        return [.. Shapes.Rectangle(-w, -h, w, h).Select(p => centre + p.Turned(angle))];
    }
}
