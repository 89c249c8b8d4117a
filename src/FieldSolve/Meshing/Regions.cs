using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Finds the resistive pad over each triangle.</summary>
internal static class Regions
{
    /// <summary>
    /// Contact of the pad over each triangle, or -1. Triangles not parted by a domain edge share the answer, which the largest of
    /// them gives: its centre is in no doubt. Where pads overlap the first counts.
    /// </summary>
    public static int[] Find(Domain domain, double[] x, double[] y, int[] corners, int[] neighbours, MeshEdge[] edges)
    {
        int count = corners.Length / 3;
        int[] region = new int[count];
        if (domain.Regions.Count == 0)
        {
            Array.Fill(region, -1);
            return region;
        }

        bool[] wall = new bool[3 * count];
        foreach (MeshEdge e in edges)
        {
            Wall(e.LeftTriangle, e);
            Wall(e.RightTriangle, e);
        }

        bool[] seen = new bool[count];
        List<int> part = [];
        for (int start = 0; start < count; start++)
        {
            if (seen[start])
            {
                continue;
            }

            part.Clear();
            part.Add(start);
            seen[start] = true;
            int largest = start;
            double largestArea = 0;
            for (int i = 0; i < part.Count; i++)
            {
                int t = part[i];
                double area = Area(t);
                if (area > largestArea)
                {
                    (largest, largestArea) = (t, area);
                }

                for (int k = 3 * t; k < (3 * t) + 3; k++)
                {
                    int n = neighbours[k];
                    if (n >= 0 && !wall[k] && !seen[n])
                    {
                        seen[n] = true;
                        part.Add(n);
                    }
                }
            }

            int contact = At(domain, Centre(largest));
            foreach (int t in part)
            {
                region[t] = contact;
            }
        }

        return region;

        void Wall(int t, MeshEdge e)
        {
            for (int k = 3 * t; t >= 0 && k < (3 * t) + 3; k++)
            {
                wall[k] |= corners[k] != e.A && corners[k] != e.B;
            }
        }

        double Area(int t)
        {
            int a = corners[3 * t], b = corners[(3 * t) + 1], c = corners[(3 * t) + 2];
            return ((x[b] - x[a]) * (y[c] - y[a])) - ((y[b] - y[a]) * (x[c] - x[a]));
        }

        Point2 Centre(int t)
        {
            int a = corners[3 * t], b = corners[(3 * t) + 1], c = corners[(3 * t) + 2];
            return new(x[a] + (((x[b] - x[a]) + (x[c] - x[a])) / 3), y[a] + (((y[b] - y[a]) + (y[c] - y[a])) / 3));
        }
    }

    /// <summary>Contact of the first pad whose polygon holds the point, or -1.</summary>
    public static int At(Domain domain, Point2 p)
    {
        foreach (DomainRegion r in domain.Regions)
        {
            if (Holds(r.Corners, p))
            {
                return r.Contact;
            }
        }

        return -1;
    }

    private static bool Holds(IReadOnlyList<Point2> polygon, Point2 p)
    {
        // Counts the edges that cross the ray from p to the right.
        bool inside = false;
        for (int i = 0; i < polygon.Count; i++)
        {
            Point2 a = polygon[i], b = polygon[(i + 1) % polygon.Count];
            if ((a.Y > p.Y) != (b.Y > p.Y))
            {
                double side = Predicates.Orient(a, b, p);
                inside ^= b.Y > a.Y ? side > 0 : side < 0;
            }
        }

        return inside;
    }
}
