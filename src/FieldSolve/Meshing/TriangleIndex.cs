using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Finds the triangle at a point in a finished mesh. The triangles' boxes form a balanced tree; the answer depends on the point
/// alone, and several threads may ask at once.
/// </summary>
public sealed class TriangleIndex
{
    private readonly TriangleMesh mesh;
    private readonly int[] order;
    private readonly Box[] boxes;
    private readonly int leaves;
    private readonly int perLeaf;

    /// <summary>Builds the tree, O(n log n).</summary>
    public TriangleIndex(TriangleMesh mesh)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        this.mesh = mesh;
        int count = mesh.TriangleCount;
        order = SortAlongCurve(mesh);

        // Leaves hold runs of triangles along a space-filling curve; node k has children 2k + 1 and 2k + 2.
        leaves = 1;
        while (leaves * 4 < count)
        {
            leaves *= 2;
        }

        perLeaf = (count + leaves - 1) / leaves;
        boxes = new Box[(2 * leaves) - 1];
        Array.Fill(boxes, Box.Empty);
        for (int i = 0; i < count; i++)
        {
            ref Box box = ref boxes[leaves - 1 + (i / perLeaf)];
            for (int j = 0; j < 3; j++)
            {
                int v = mesh.Corners[(3 * order[i]) + j];
                box.Add(mesh.X[v], mesh.Y[v]);
            }
        }

        for (int k = leaves - 2; k >= 0; k--)
        {
            boxes[k] = Box.Union(boxes[(2 * k) + 1], boxes[(2 * k) + 2]);
        }
    }

    /// <summary>The triangle that holds the point; on a shared edge or outside the mesh, the nearest one met first in a fixed order.</summary>
    public int Find(double x, double y)
    {
        Span<int> stack = stackalloc int[80];
        int top = 0, best = -1;
        double bestDistance = double.PositiveInfinity;
        stack[top++] = 0;
        while (top > 0)
        {
            int k = stack[--top];
            if (boxes[k].DistanceSquared(x, y) >= bestDistance)
            {
                continue;
            }

            if (k < leaves - 1)
            {
                int left = (2 * k) + 1;
                bool leftFirst = boxes[left].DistanceSquared(x, y) <= boxes[left + 1].DistanceSquared(x, y);
                stack[top++] = leftFirst ? left + 1 : left;
                stack[top++] = leftFirst ? left : left + 1;
                continue;
            }

            int first = (k - leaves + 1) * perLeaf;
            for (int i = first; i < Math.Min(first + perLeaf, order.Length); i++)
            {
                double d = DistanceSquared(order[i], x, y);
                if (d < bestDistance)
                {
                    (best, bestDistance) = (order[i], d);
                    if (d == 0)
                    {
                        return best;
                    }
                }
            }
        }

        return best;
    }

    private double DistanceSquared(int t, double x, double y)
    {
        double nearest = double.PositiveInfinity;
        bool outside = false;
        for (int i = 0; i < 3; i++)
        {
            int a = mesh.Corners[(3 * t) + i], b = mesh.Corners[(3 * t) + ((i + 1) % 3)];
            if (Predicates.Orient(mesh.X[a], mesh.Y[a], mesh.X[b], mesh.Y[b], x, y) < 0)
            {
                outside = true;
                double dx = mesh.X[b] - mesh.X[a], dy = mesh.Y[b] - mesh.Y[a], px = x - mesh.X[a], py = y - mesh.Y[a];
                double along = Math.Clamp(((px * dx) + (py * dy)) / ((dx * dx) + (dy * dy)), 0, 1);
                (px, py) = (px - (along * dx), py - (along * dy));
                nearest = Math.Min(nearest, (px * px) + (py * py));
            }
        }

        return outside ? nearest : 0;
    }

    private static int[] SortAlongCurve(TriangleMesh mesh)
    {
        double x0 = mesh.X.Min(), x1 = mesh.X.Max(), y0 = mesh.Y.Min(), y1 = mesh.Y.Max();
        double side = Math.Max(x1 - x0, y1 - y0);
        Point2[] centres = new Point2[mesh.TriangleCount];
        for (int t = 0; t < centres.Length; t++)
        {
            int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
            centres[t] = new((mesh.X[a] + mesh.X[b] + mesh.X[c]) / 3, (mesh.Y[a] + mesh.Y[b] + mesh.Y[c]) / 3);
        }

        return SpatialOrder.Of(centres, x0, y0, side);
    }

    private struct Box
    {
        public double X0, X1, Y0, Y1;

        public static readonly Box Empty = new()
        {
            X0 = double.PositiveInfinity,
            X1 = double.NegativeInfinity,
            Y0 = double.PositiveInfinity,
            Y1 = double.NegativeInfinity,
        };

        public static Box Union(in Box a, in Box b) => new()
        {
            X0 = Math.Min(a.X0, b.X0),
            X1 = Math.Max(a.X1, b.X1),
            Y0 = Math.Min(a.Y0, b.Y0),
            Y1 = Math.Max(a.Y1, b.Y1),
        };

        public void Add(double x, double y)
        {
            (X0, X1) = (Math.Min(X0, x), Math.Max(X1, x));
            (Y0, Y1) = (Math.Min(Y0, y), Math.Max(Y1, y));
        }

        public readonly double DistanceSquared(double x, double y)
        {
            double dx = Math.Max(0, Math.Max(X0 - x, x - X1));
            double dy = Math.Max(0, Math.Max(Y0 - y, y - Y1));
            return (dx * dx) + (dy * dy);
        }
    }
}
