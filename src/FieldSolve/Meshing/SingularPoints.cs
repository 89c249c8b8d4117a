using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>A vertex of the domain where the field of an isotropic sheet is not smooth.</summary>
/// <param name="Vertex">Index in the domain.</param>
/// <param name="Exponent">The potential goes like r to this power: pi/(2 w) where a contact meets a free edge, pi/w at a corner of interior angle w.</param>
/// <param name="Reach">Length of the shorter stretch that ends there, metres.</param>
public readonly record struct SingularPoint(int Vertex, double Exponent, double Reach);

/// <summary>
/// Finds contact ends and re-entrant corners. The exponents are those of the Laplace equation in a wedge (P. Grisvard, Elliptic Problems in
/// Nonsmooth Domains, 1985); anisotropy and a Hall part change them, so the list is only a first guess for the mesh.
/// </summary>
public static class SingularPoints
{
    /// <summary>All points whose exponent is below <paramref name="below"/>, in the order of the domain's vertices.</summary>
    public static IReadOnlyList<SingularPoint> Of(Domain domain, double below = 1.01)
    {
        ArgumentNullException.ThrowIfNull(domain);
        int n = domain.Vertices.Count;
        int[] into = new int[n], from = new int[n];
        Array.Fill(into, -1);
        Array.Fill(from, -1);
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            if (domain.Edges[e].IsRim)
            {
                from[domain.Edges[e].From] = e;
                into[domain.Edges[e].To] = e;
            }
        }

        var list = new List<SingularPoint>();
        for (int v = 0; v < n; v++)
        {
            if (into[v] < 0 || from[v] < 0)
            {
                continue;
            }

            DomainEdge before = domain.Edges[into[v]], after = domain.Edges[from[v]];
            Point2 back = -before.Curve.Tangent(1), ahead = after.Curve.Tangent(0);
            double angle = Math.Atan2(Point2.Cross(ahead, back), Point2.Dot(ahead, back));
            angle = angle <= 0 ? angle + (2 * Math.PI) : angle;
            bool mixed = before.Contact >= 0 != after.Contact >= 0;
            double exponent = mixed ? Math.PI / (2 * angle) : Math.PI / angle;
            if (exponent < below && (mixed || exponent < 0.97))
            {
                list.Add(new(v, exponent, Math.Min(before.Curve.Length, after.Curve.Length)));
            }
        }

        return list;
    }
}
