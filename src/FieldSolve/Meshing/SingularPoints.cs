using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Meshing;

/// <summary>A vertex of the domain where the field is not smooth.</summary>
/// <param name="Vertex">Index in the domain.</param>
/// <param name="Exponent">The potential goes like r to this power: pi/(2 w) where a contact meets a free edge, pi/w at a corner of interior angle w, as it is after the
/// sheet was stretched so that it conducts alike along all directions.</param>
/// <param name="Reach">Length of the shorter stretch that ends there, metres.</param>
public readonly record struct SingularPoint(int Vertex, double Exponent, double Reach)
{
    /// <summary>Contact and free edge meet here, at whatever angle.</summary>
    internal bool IsContactEnd { get; init; }
}

/// <summary>
/// Finds contact ends and re-entrant corners. The exponents are those of the Laplace equation in a wedge (P. Grisvard, Elliptic Problems in
/// Nonsmooth Domains, 1985), for an anisotropic sheet in the plane where it is isotropic (L. J. van der Pauw, Philips Res. Rep. 16, 187 (1961)): there a corner has another angle,
/// so that the end of a bar is singular where the crystal axis lies askew. A Hall part takes from the exponent of the potential what it gives to that of the adjoint.
/// </summary>
public static class SingularPoints
{
    private const double Below = 1.01;

    /// <summary>All points of an isotropic sheet whose exponent is below <paramref name="below"/>, in the order of the domain's vertices.</summary>
    public static IReadOnlyList<SingularPoint> Of(Domain domain, double below = Below) => Of(domain, new Tensor2(1, 0, 0, 1), below);

    /// <summary>All points whose exponent is below <paramref name="below"/>, in the order of the domain's vertices.</summary>
    /// <param name="domain">The sheet.</param>
    /// <param name="conductance">Conductance tensor in the frame of the domain; its symmetric part is positive definite, its unit does not matter.</param>
    /// <param name="below">Largest exponent.</param>
    public static IReadOnlyList<SingularPoint> Of(Domain domain, Tensor2 conductance, double below = Below)
    {
        // S = L Lᵀ, and L⁻¹ maps to the plane where the sheet is isotropic.
        double first = Math.Sqrt(conductance.Aa), off = (conductance.Ab + conductance.Ba) / 2 / first, second = Math.Sqrt(conductance.Bb - (off * off));
        Point2 Mapped(Point2 p) => new(p.X / first, (p.Y - (off * p.X / first)) / second);
        var list = new List<SingularPoint>();
        foreach ((int v, DomainEdge before, DomainEdge after, _) in RimVertices(domain))
        {
            double angle = Angle(Mapped(-before.Curve.Tangent(1)), Mapped(after.Curve.Tangent(0)));
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
            yield return (v, before, after, Angle(-before.Curve.Tangent(1), after.Curve.Tangent(0)));
        }
    }

    // From the way ahead to the way back, in (0, 2 pi].
    private static double Angle(Point2 back, Point2 ahead)
    {
        double angle = Math.Atan2(Point2.Cross(ahead, back), Point2.Dot(ahead, back));
        return angle <= 0 ? angle + (2 * Math.PI) : angle;
    }
}
