using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>Shape, width and middle of a contact from where it sits.</summary>
internal static class ContactShape
{
    /// <summary>The contact on a live rim, with the name and resistances of another.</summary>
    public static Contact On(Outline live, ContactPlacement placement, Contact like) =>
        On(live, placement, like.Name, like.LineResistance, like.Resistivity);

    /// <summary>The contact on a live rim.</summary>
    public static Contact On(Outline live, ContactPlacement placement, string name, double lineResistance, double resistivity)
    {
        if (placement.Span is { } span)
        {
            return new Contact(name, ContactKind.Edge, lineResistance, 0, live.Stretch(span), span.Length)
            {
                Middle = live.At(span.Loop, span.From + (span.Length / 2)),
            };
        }

        IReadOnlyList<Point2> pad = placement.Pad!;
        (double area, Point2 middle) = Measure(pad);
        return new Contact(name, ContactKind.Pad, 0, resistivity, OutlinePolygons.Segments(pad), Math.Sqrt(area)) { Middle = middle };
    }

    /// <summary>Area and centre of mass of a polygon, from its triangles with the first corner.</summary>
    private static (double Area, Point2 Middle) Measure(IReadOnlyList<Point2> corners)
    {
        double twice = 0;
        Point2 moment = default;
        for (int k = 2; k < corners.Count; k++)
        {
            Point2 a = corners[k - 1] - corners[0], b = corners[k] - corners[0];
            double cross = Point2.Cross(a, b);
            twice += cross;
            moment += cross * (a + b);
        }

        return (Math.Abs(twice) / 2, corners[0] + (1 / (3 * twice) * moment));
    }
}
