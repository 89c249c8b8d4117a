using FieldSolve.Laws;

namespace FieldSolve.Fields;

/// <summary>
/// The discrete equations of a sheet: the residual R(u) and its exact Jacobian. For a test function v,
/// R(v) = -(integral of K(-grad u).grad v) + (currents into resistive metal) - (current fed into the contact that v belongs to);
/// the Jacobian is then positive definite as long as the symmetric part of dK/dE is. Units: amperes, siemens.
/// Vectors of unknowns have length <see cref="FieldSpace.Size"/> + 1; the last entry is the zero of the potential.
/// Safe for several threads at once.
/// </summary>
public sealed class SheetEquations
{
    private readonly StraightTriangles straight;
    private readonly CurvedTriangles curved;
    private readonly MetalCoupling[] metals;
    private readonly int[][] metalPlaces;

    /// <summary>Prepares the geometry of all triangles and the places of their entries in the matrix.</summary>
    public SheetEquations(FieldSpace space, LabLaw law)
    {
        ArgumentNullException.ThrowIfNull(space);
        ArgumentNullException.ThrowIfNull(law);
        Space = space;
        Law = law;
        var places = new MatrixPlaces(space);
        straight = new StraightTriangles(space);
        curved = new CurvedTriangles(space);
        metals = MetalCoupling.Of(space);
        metalPlaces = [.. metals.Select(m => places.Of(Group(m)))];
    }

    private SheetEquations(SheetEquations other, LabLaw law)
    {
        (Space, Law) = (other.Space, law);
        (straight, curved, metals, metalPlaces) = (other.straight, other.curved, other.metals, other.metalPlaces);
    }

    /// <summary>Couplings between sheet and resistive metal.</summary>
    internal IReadOnlyList<MetalCoupling> Metals => metals;

    /// <summary>Unknowns and nodes.</summary>
    public FieldSpace Space { get; }

    /// <summary>The law in the lab frame.</summary>
    public LabLaw Law { get; }

    /// <summary>Length of a vector of unknowns, with the zero at its end.</summary>
    public int Length => Space.Size + 1;

    /// <summary>The equations of the same sheet under another law; they share everything else.</summary>
    public SheetEquations WithLaw(LabLaw law)
    {
        ArgumentNullException.ThrowIfNull(law);
        return new(this, law);
    }

    /// <summary>
    /// R(u) for a current fed into one contact and taken out of another.
    /// </summary>
    /// <param name="u">Potentials, V.</param>
    /// <param name="source">Contact the current enters the sheet at; with <paramref name="drain"/> equal, no current.</param>
    /// <param name="drain">Contact it leaves at.</param>
    /// <param name="current">A.</param>
    /// <param name="residual">Filled, A; its last entry is set to 0.</param>
    /// <exception cref="LawRefusedException">A table law was asked beyond its grid.</exception>
    public void Residual(ReadOnlySpan<double> u, int source, int drain, double current, Span<double> residual)
    {
        residual.Clear();
        straight.AddResidual(Law, u, residual);
        curved.AddResidual(Law, u, residual);
        AddMetals(u, residual);
        residual[Space.ContactUnknown[source]] -= current;
        residual[Space.ContactUnknown[drain]] += current;
        residual[Space.Size] = 0;
    }

    /// <summary>Values of the Jacobian dR/du in the order of the space's pattern.</summary>
    /// <param name="u">Potentials, V.</param>
    /// <param name="values">Filled; length <c>Pattern.Count + 1</c>, the last entry is scrap.</param>
    /// <exception cref="LawRefusedException">A table law was asked beyond its grid.</exception>
    public void Jacobian(ReadOnlySpan<double> u, Span<double> values)
    {
        values.Clear();
        straight.AddJacobian(Law, u, values);
        curved.AddJacobian(Law, u, values);
        for (int k = 0; k < metals.Length; k++)
        {
            MetalCoupling m = metals[k];
            int n = m.Nodes.Length, w = n + 1;
            int[] place = metalPlaces[k];
            for (int i = 0; i < n; i++)
            {
                for (int j = 0; j < n; j++)
                {
                    double g = m.Conductance[(i * n) + j];
                    values[place[(i * w) + j]] += g;
                    values[place[(i * w) + n]] -= g;
                    values[place[(n * w) + j]] -= g;
                    values[place[(n * w) + n]] += g;
                }
            }
        }
    }

    /// <summary>Visits the points of the quadrature where |E| passes a limit, with the field and the weight (area) there.</summary>
    internal void VisitStrongField(ReadOnlySpan<double> u, double limit, StrongFieldVisitor visit)
    {
        straight.VisitStrongField(u, limit, visit);
        curved.VisitStrongField(u, limit, visit);
    }

    private int[] Group(MetalCoupling m) =>
        [.. m.Nodes.Select(n => Space.Unknown[n]), Space.ContactUnknown[m.Contact]];

    private void AddMetals(ReadOnlySpan<double> u, Span<double> residual)
    {
        foreach (MetalCoupling m in metals)
        {
            int n = m.Nodes.Length, metal = Space.ContactUnknown[m.Contact];
            for (int i = 0; i < n; i++)
            {
                double current = 0;
                for (int j = 0; j < n; j++)
                {
                    current += m.Conductance[(i * n) + j] * (u[Space.Unknown[m.Nodes[j]]] - u[metal]);
                }

                residual[Space.Unknown[m.Nodes[i]]] += current;
                residual[metal] -= current;
            }
        }
    }
}
