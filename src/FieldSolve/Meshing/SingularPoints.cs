using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>A vertex of the domain where the field of an isotropic sheet is not smooth.</summary>
/// <param name="Vertex">Index in the domain.</param>
/// <param name="Exponent">The potential goes like r to this power: pi/(2 w) where a contact meets a free edge, pi/w at a corner of interior angle w.</param>
/// <param name="Reach">Length of the shorter stretch that ends there, metres.</param>
public readonly record struct SingularPoint(int Vertex, double Exponent, double Reach)
{
    /// <summary>Contact and free edge meet here, at whatever angle.</summary>
    internal bool IsContactEnd { get; init; }
}

/// <summary>
/// Finds contact ends and re-entrant corners. The exponents are those of the Laplace equation in a wedge (P. Grisvard, Elliptic Problems in
/// Nonsmooth Domains, 1985); anisotropy and a Hall part change them, so the list is only a first guess for the mesh.
/// </summary>
public static class SingularPoints
{
    /// <summary>All points whose exponent is below <paramref name="below"/>, in the order of the domain's vertices.</summary>
    public static IReadOnlyList<SingularPoint> Of(Domain domain, double below = 1.01)
    {
        var list = new List<SingularPoint>();
        foreach ((int v, DomainEdge before, DomainEdge after, double angle) in RimVertices(domain))
        {
            bool mixed = before.Contact >= 0 != after.Contact >= 0;
            double exponent = mixed ? Math.PI / (2 * angle) : Math.PI / angle;
            if (exponent < below && (mixed || exponent < 0.97))
            {
                list.Add(new(v, exponent, Math.Min(before.Curve.Length, after.Curve.Length)) { IsContactEnd = mixed });
            }
        }

        return list;
    }

    /// <summary>Tips off the rim's corners and vertices of the rim where it runs on without a corner along the same contact or free edge: the field is smooth there.</summary>
    public static IReadOnlyList<int> SmoothVertices(Domain domain)
    {
        const double Straight = 1e-6;
        var rim = RimVertices(domain).ToList();
        var onRim = rim.Select(r => r.Vertex).ToHashSet();
        var inside = domain.Edges.Where(e => !e.IsRim).SelectMany(e => new[] { e.From, e.To }).ToHashSet();
        return
        [
            .. domain.Tips.Where(t => !onRim.Contains(t) && !inside.Contains(t)),
            .. rim.Where(r => r.Before.Contact == r.After.Contact && Math.Abs(r.Angle - Math.PI) < Straight && !inside.Contains(r.Vertex))
                .Select(r => r.Vertex),
        ];
    }

    // Vertices with the rim stretches before and after them and the interior angle.
    private static IEnumerable<(int Vertex, DomainEdge Before, DomainEdge After, double Angle)> RimVertices(Domain domain)
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

        for (int v = 0; v < n; v++)
        {
            if (into[v] < 0 || from[v] < 0)
            {
                continue;
            }

            DomainEdge before = domain.Edges[into[v]], after = domain.Edges[from[v]];
            Point2 back = -before.Curve.Tangent(1), ahead = after.Curve.Tangent(0);
            double angle = Math.Atan2(Point2.Cross(ahead, back), Point2.Dot(ahead, back));
            yield return (v, before, after, angle <= 0 ? angle + (2 * Math.PI) : angle);
        }
    }
}
