using System.Globalization;

namespace FieldSolve.Meshing.SizeFields;

/// <summary>
/// Edge length that grows from given places up to a background value: h(x) = min(background, min over s of (h_s + g_s |x - x_s|)).
/// </summary>
/// <remarks>
/// The places are kept in a balanced tree of boxes with the smallest h and g in each, so that a look-up passes over every box
/// that cannot hold the minimum. Immutable, so it may be read from several threads.
/// </remarks>
public sealed class GradedSize : ISizeField
{
    private const int LeafSize = 4;
    private readonly double background;
    private readonly SizePoint[] points;
    private readonly Node[] nodes;

    /// <summary>Builds the tree, O(n log² n).</summary>
    /// <param name="background">Largest edge length, metres.</param>
    /// <param name="points">Places that want smaller triangles; may be empty.</param>
    /// <exception cref="ArgumentOutOfRangeException">A length is not finite and positive, a growth is negative, or a coordinate is not finite.</exception>
    public GradedSize(double background, IEnumerable<SizePoint> points)
    {
        ArgumentNullException.ThrowIfNull(points);
        if (!(background > 0) || double.IsInfinity(background))
        {
            throw new ArgumentOutOfRangeException(nameof(background), background, "The edge length must be finite and greater than zero.");
        }

        this.background = background;
        this.points = points.ToArray();
        foreach (SizePoint p in this.points)
        {
            if (!(p.Size > 0) || !double.IsFinite(p.Size) || !(p.Growth >= 0) || !double.IsFinite(p.Growth) || !double.IsFinite(p.X) || !double.IsFinite(p.Y))
            {
                throw new ArgumentOutOfRangeException(nameof(points), string.Create(CultureInfo.InvariantCulture,
                    $"The size {p.Size:G6} m with growth {p.Growth:G6} at ({p.X:G6}, {p.Y:G6}) m must be positive, the growth not negative, all finite."));
            }
        }

        // A complete binary tree over the sorted points: node k has children 2k+1 and 2k+2.
        int depth = 0;
        while ((this.points.Length >> depth) > LeafSize)
        {
            depth++;
        }

        nodes = new Node[(1 << (depth + 1)) - 1];
        Build(0, 0, this.points.Length, depth);
    }

    /// <inheritdoc/>
    public double At(double x, double y)
    {
        double best = background;
        if (points.Length == 0)
        {
            return best;
        }

        Span<int> stack = stackalloc int[64];
        int top = 0;
        stack[top++] = 0;
        while (top > 0)
        {
            int k = stack[--top];
            ref readonly Node node = ref nodes[k];
            if (node.Bound(x, y) >= best)
            {
                continue;
            }

            int child = (2 * k) + 1;
            if (child < nodes.Length)
            {
                bool nearFirst = nodes[child].Bound(x, y) <= nodes[child + 1].Bound(x, y);
                stack[top++] = nearFirst ? child + 1 : child;
                stack[top++] = nearFirst ? child : child + 1;
                continue;
            }

            for (int i = node.From; i < node.To; i++)
            {
                ref readonly SizePoint p = ref points[i];
                double dx = x - p.X, dy = y - p.Y;
                best = Math.Min(best, p.Size + (p.Growth * Math.Sqrt((dx * dx) + (dy * dy))));
            }
        }

        return best;
    }

    private void Build(int k, int from, int to, int depth)
    {
        Node node = new() { From = from, To = to, X0 = double.MaxValue, X1 = double.MinValue, Y0 = double.MaxValue, Y1 = double.MinValue, Size = double.MaxValue, Growth = double.MaxValue };
        for (int i = from; i < to; i++)
        {
            SizePoint p = points[i];
            (node.X0, node.X1) = (Math.Min(node.X0, p.X), Math.Max(node.X1, p.X));
            (node.Y0, node.Y1) = (Math.Min(node.Y0, p.Y), Math.Max(node.Y1, p.Y));
            (node.Size, node.Growth) = (Math.Min(node.Size, p.Size), Math.Min(node.Growth, p.Growth));
        }

        nodes[k] = node;
        if (depth == 0)
        {
            return;
        }

        bool wide = node.X1 - node.X0 >= node.Y1 - node.Y0;
        Array.Sort(points, from, to - from, Comparer<SizePoint>.Create(wide
            ? (a, b) => (a.X, a.Y, a.Size, a.Growth).CompareTo((b.X, b.Y, b.Size, b.Growth))
            : (a, b) => (a.Y, a.X, a.Size, a.Growth).CompareTo((b.Y, b.X, b.Size, b.Growth))));
        int middle = (from + to) / 2;
        Build((2 * k) + 1, from, middle, depth - 1);
        Build((2 * k) + 2, middle, to, depth - 1);
    }

    private struct Node
    {
        public int From, To;
        public double X0, X1, Y0, Y1, Size, Growth;

        // No point of the box gives less than this.
        public readonly double Bound(double x, double y)
        {
            double dx = Math.Max(0, Math.Max(X0 - x, x - X1));
            double dy = Math.Max(0, Math.Max(Y0 - y, y - Y1));
            return Size + (Growth * Math.Sqrt((dx * dx) + (dy * dy)));
        }
    }
}
