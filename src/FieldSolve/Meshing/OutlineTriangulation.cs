using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Constrained Delaunay triangulation of a divided outline inside a rectangle about it.</summary>
internal static class OutlineTriangulation
{
    /// <summary>
    /// Vertices: those of the domain in order, then the division points edge by edge. The rectangle's corners come right after
    /// the domain's vertices.
    /// </summary>
    public static Triangulation Build(Domain domain, List<double>[] division, CancellationToken cancel)
    {
        Triangulation mesh = new();
        List<Point2> points = [.. domain.Vertices];
        int corners = points.Count;
        points.AddRange(new Point2[4]);
        for (int e = 0; e < division.Length; e++)
        {
            DomainEdge edge = domain.Edges[e];
            int last = edge.From;
            double lastT = 0;
            foreach (double t in division[e].Skip(1))
            {
                int v = edge.To;
                if (t < 1)
                {
                    v = points.Count;
                    points.Add(edge.Curve.At(t));
                }

                mesh.Pieces.Add(last, v, e, lastT, t);
                (last, lastT) = (v, t);
            }
        }

        double x0 = double.MaxValue, x1 = double.MinValue, y0 = double.MaxValue, y1 = double.MinValue;
        for (int v = 0; v < points.Count; v++)
        {
            if (v < corners || v >= corners + 4)
            {
                (x0, x1) = (Math.Min(x0, points[v].X), Math.Max(x1, points[v].X));
                (y0, y1) = (Math.Min(y0, points[v].Y), Math.Max(y1, points[v].Y));
            }
        }

        double margin = Math.Max(x1 - x0, y1 - y0);
        if (!(margin > 0))
        {
            throw new MeshException("The outline has no area. Give at least three corners that are not in one place.");
        }

        mesh.BeginAt(corners, points, x0 - margin, y0 - margin, x1 + margin, y1 + margin);
        int[] order = SpatialOrder.Of(points, x0, y0, margin);
        int at = 0;
        foreach (int v in order)
        {
            if (v >= corners && v < corners + 4)
            {
                continue;
            }

            Point2 p = points[v];
            at = mesh.Locate(p.X, p.Y, at);
            if (mesh.Coincides(at, p))
            {
                throw new MeshException($"Two points of the outline fall together at {mesh.Place(v)}. Edges may meet only at their ends.");
            }

            mesh.FindCavity(at, p.X, p.Y);
            mesh.FillCavity(v);
            at = mesh.At[v];
        }

        cancel.ThrowIfCancellationRequested();
        for (int s = 0; s < mesh.Pieces.Count; s++)
        {
            mesh.Force(s);
        }

        mesh.LegaliseAll();
        mesh.Touched.Clear();
        return mesh;
    }
}
