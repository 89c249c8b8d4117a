using FieldSolve.Geometry;

namespace FieldSolve.Tests;

/// <summary>Small domains for tests. Contacts are numbered in the order given.</summary>
public static class TestDomains
{
    /// <summary>Disc about a centre; each contact is an arc about an angle, with a width in radians. Contacts must not overlap.</summary>
    public static Domain Disc(double radius, IEnumerable<(double Angle, double Width)> contacts, Point2 centre = default, IEnumerable<Point2>? tips = null)
    {
        Builder b = new();
        b.Circle(centre, radius, contacts, false, 0);
        return b.Build(tips);
    }

    /// <summary>Ring between two circles. Contacts on the outer circle come first.</summary>
    public static Domain Ring(
        double inner, double outer, IEnumerable<(double Angle, double Width)>? onOuter = null, IEnumerable<(double Angle, double Width)>? onInner = null)
    {
        Builder b = new();
        List<(double, double)> first = [.. onOuter ?? []];
        b.Circle(default, outer, first, false, 0);
        b.Circle(default, inner, onInner ?? [], true, first.Count);
        return b.Build(null);
    }

    /// <summary>
    /// Polygon, counter-clockwise; each contact is a stretch of one side from fraction From to fraction To of it.
    /// Holes are polygons given clockwise.
    /// </summary>
    public static Domain Polygon(
        IReadOnlyList<Point2> corners,
        IEnumerable<(int Side, double From, double To)>? contacts = null,
        IEnumerable<IReadOnlyList<Point2>>? holes = null,
        IEnumerable<Point2>? tips = null)
    {
        Builder b = new();
        b.Polygon(corners, contacts ?? []);
        foreach (IReadOnlyList<Point2> hole in holes ?? [])
        {
            b.Polygon(hole, []);
        }

        return b.Build(tips);
    }

    /// <summary>Puts a domain together vertex by vertex.</summary>
    public sealed class Builder
    {
        private readonly List<Point2> vertices = [];
        private readonly List<DomainEdge> edges = [];
        private readonly List<DomainRegion> regions = [];

        /// <summary>Index of a vertex, new or old.</summary>
        public int Vertex(Point2 p)
        {
            int i = vertices.IndexOf(p);
            if (i < 0)
            {
                i = vertices.Count;
                vertices.Add(p);
            }

            return i;
        }

        /// <summary>A straight edge.</summary>
        public void Segment(Point2 a, Point2 b, bool isRim = true, int contact = -1) =>
            edges.Add(new(Vertex(a), Vertex(b), Curve.Segment(a, b), isRim, contact));

        /// <summary>An arc edge of the rim.</summary>
        public void Arc(Curve arc, int contact = -1) => edges.Add(new(Vertex(arc.Start), Vertex(arc.End), arc, true, contact));

        /// <summary>A resistive pad wholly inside the sheet: inner edges and a region.</summary>
        public void Pad(IReadOnlyList<Point2> corners, int contact)
        {
            for (int i = 0; i < corners.Count; i++)
            {
                Segment(corners[i], corners[(i + 1) % corners.Count], false);
            }

            regions.Add(new(contact, corners));
        }

        /// <summary>A closed polygon of rim.</summary>
        public void Polygon(IReadOnlyList<Point2> corners, IEnumerable<(int Side, double From, double To)> contacts)
        {
            (int Side, double From, double To)[] all = [.. contacts];
            for (int i = 0; i < corners.Count; i++)
            {
                Curve side = Curve.Segment(corners[i], corners[(i + 1) % corners.Count]);
                double at = 0;
                foreach (int k in Enumerable.Range(0, all.Length).Where(k => all[k].Side == i).OrderBy(k => all[k].From))
                {
                    if (all[k].From > at)
                    {
                        Segment(side.At(at), side.At(all[k].From));
                    }

                    Segment(side.At(all[k].From), side.At(all[k].To), true, k);
                    at = all[k].To;
                }

                if (at < 1)
                {
                    Segment(side.At(at), side.At(1));
                }
            }
        }

        /// <summary>A circle of rim, clockwise for a hole.</summary>
        public void Circle(Point2 centre, double radius, IEnumerable<(double Angle, double Width)> contacts, bool isHole, int firstContact)
        {
            List<(double From, double To, int Contact)> arcs = [];
            int index = firstContact;
            foreach ((double angle, double width) in contacts)
            {
                arcs.Add((angle - (width / 2), angle + (width / 2), index++));
            }

            arcs.Sort();
            List<(double From, double To, int Contact)> all = [];
            for (int i = 0; i < arcs.Count; i++)
            {
                all.Add(arcs[i]);
                double next = i + 1 < arcs.Count ? arcs[i + 1].From : arcs[0].From + (2 * Math.PI);
                if (next > arcs[i].To)
                {
                    all.Add((arcs[i].To, next, -1));
                }
            }

            if (arcs.Count == 0)
            {
                all = [(0, Math.PI, -1), (Math.PI, 2 * Math.PI, -1)];
            }

            Point2[] ends = all.Select(a => centre + (radius * new Point2(Math.Cos(a.From), Math.Sin(a.From)))).ToArray();
            for (int i = 0; i < all.Count; i++)
            {
                Curve arc = Curve.Arc(centre, radius, all[i].From, all[i].To - all[i].From, ends[i], ends[(i + 1) % ends.Length]);
                Arc(isHole ? arc.Reversed() : arc, all[i].Contact);
            }
        }

        /// <summary>The domain; tips become vertices.</summary>
        public Domain Build(IEnumerable<Point2>? tips)
        {
            List<int> tipVertices = (tips ?? []).Select(Vertex).ToList();
            return new(vertices, edges, regions, tipVertices);
        }
    }
}
