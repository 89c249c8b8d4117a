using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Orders points along a curve that fills the plane, so that neighbours in the list are neighbours in the sheet.</summary>
internal static class SpatialOrder
{
    private const int Bits = 26;

    /// <summary>Indices of the points in order; points in the same cell keep their order.</summary>
    public static int[] Of(IReadOnlyList<Point2> points, double x0, double y0, double side)
    {
        ulong[] keys = new ulong[points.Count];
        int[] order = new int[points.Count];
        for (int i = 0; i < order.Length; i++)
        {
            keys[i] = Key(points[i].X, points[i].Y, x0, y0, side);
            order[i] = i;
        }

        // Ties must not depend on the sorting method: (key, index) pairs are all different.
        (ulong, int)[] pairs = new (ulong, int)[order.Length];
        for (int i = 0; i < order.Length; i++)
        {
            pairs[i] = (keys[i], i);
        }

        Array.Sort(pairs, order);
        return order;
    }

    /// <summary>Position on D. Hilbert's curve (Math. Ann. 38 (1891) 459) through a square grid of 2^26 cells a side.</summary>
    public static ulong Key(double x, double y, double x0, double y0, double side)
    {
        double scale = (1 << Bits) / side;
        uint u = (uint)Math.Clamp((x - x0) * scale, 0, (1 << Bits) - 1);
        uint v = (uint)Math.Clamp((y - y0) * scale, 0, (1 << Bits) - 1);
        ulong key = 0;
        for (int b = Bits - 1; b >= 0; b--)
        {
            uint ub = (u >> b) & 1, vb = (v >> b) & 1;
            key = (key << 2) | ((3 * ub) ^ vb);
            if (vb == 0)
            {
                if (ub == 1)
                {
                    u = ~u;
                    v = ~v;
                }

                (u, v) = (v, u);
            }
        }

        return key;
    }
}
