using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Solving;

/// <summary>
/// Everything that belongs to one mesh: unknowns, equations and the factor of the Jacobian at zero field, which every wiring and
/// every weak drive shares. Safe for several threads at once.
/// </summary>
public sealed class FieldLevel
{
    private readonly CancellationToken cancel;
    private readonly Lock gate = new();
    private RestState? atZero;
    private readonly ConcurrentBag<JacobianRoom> spare = [];

    private FieldLevel(SheetEquations equations, SparseAnalysis analysis, CancellationToken cancel)
    {
        Space = equations.Space;
        Equations = equations;
        Analysis = analysis;
        this.cancel = cancel;
    }

    private sealed record RestState(SparseLu Factor, double[] Values);

    /// <summary>Nodes and unknowns.</summary>
    public FieldSpace Space { get; }

    /// <summary>Residual and Jacobian.</summary>
    public SheetEquations Equations { get; }

    /// <summary>Ordering and structure of the factors.</summary>
    public SparseAnalysis Analysis { get; }

    /// <summary>Factor of the Jacobian at zero field.</summary>
    public SparseLu AtZero => Rest().Factor;

    /// <summary>Sets up a mesh.</summary>
    /// <param name="device">Gives the contacts.</param>
    /// <param name="mesh">Triangles of the device's domain.</param>
    /// <param name="law">In the lab frame.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <param name="ground">Contact whose metal is the zero of the potential.</param>
    /// <param name="like">A level whose ordering is used again when its unknowns are joined in the same way, as after its nodes were moved; null for none.</param>
    /// <exception cref="FieldSpaceException">A part of the sheet is joined to the rest by no metal.</exception>
    /// <exception cref="PivotException">The Jacobian at zero field is not positive definite.</exception>
    public static FieldLevel Build(SheetDevice device, TriangleMesh mesh, LabLaw law, CancellationToken cancel, int ground = 0, FieldLevel? like = null)
    {
        FieldSpace space = FieldSpace.Build(device, mesh, ground);
        (double[] x, double[] y) = space.Places();
        bool alike = like is not null && like.Space.Pattern.Start.AsSpan().SequenceEqual(space.Pattern.Start)
            && like.Space.Pattern.Column.AsSpan().SequenceEqual(space.Pattern.Column);
        SparseAnalysis analysis = alike ? like!.Analysis : SparseAnalysis.Analyse(space.Pattern, x, y, cancel);
        return AtRest(new SheetEquations(space, law), analysis, cancel);
    }

    /// <summary>The same mesh under another law: equations and factor at zero field are new, unknowns, geometry and ordering are shared.</summary>
    /// <exception cref="PivotException">The Jacobian at zero field is not positive definite.</exception>
    public FieldLevel WithLaw(LabLaw law, CancellationToken cancel) => AtRest(Equations.WithLaw(law), Analysis, cancel);

    /// <summary>The level of a moved mesh or another law: unknowns, pattern and ordering stay; its own factor is made when first asked for.</summary>
    /// <param name="device">Its contacts, ideal and resistive ones as before.</param>
    /// <param name="mesh">Same triangles as this level's mesh, vertices elsewhere; or this level's mesh.</param>
    /// <param name="law">The law.</param>
    public FieldLevel Moved(SheetDevice device, TriangleMesh mesh, LabLaw law) => new(new SheetEquations(Space.Moved(mesh, device), law), Analysis, CancellationToken.None);

    private static FieldLevel AtRest(SheetEquations equations, SparseAnalysis analysis, CancellationToken cancel)
    {
        var level = new FieldLevel(equations, analysis, cancel);
        _ = level.AtZero;
        return level;
    }

    /// <summary>Lets go of all factors, the largest pieces of memory; they are made again, the same, when they are asked for.</summary>
    internal void Forget()
    {
        lock (gate)
        {
            atZero = null;
        }

        spare.Clear();
    }

    private RestState Rest()
    {
        if (Volatile.Read(ref atZero) is { } there)
        {
            return there;
        }

        lock (gate)
        {
            return atZero ??= FactorAtZero();
        }
    }

    private RestState FactorAtZero()
    {
        var factor = new SparseLu(Analysis, Equations.Law.IsSymmetricAtZero);
        double[] values = new double[Space.Pattern.Count + 1];
        Equations.Jacobian(new double[Equations.Length], values);
        SharedCores.Factor(factor, values.AsSpan(0, Space.Pattern.Count), cancel);
        return new(factor, values);
    }

    /// <summary>Room for a Jacobian at any field and its factor: some that was returned, or new.</summary>
    internal JacobianRoom Rent() => spare.TryTake(out JacobianRoom? room)
        ? room
        : new(new double[Space.Pattern.Count + 1], new SparseLu(Analysis, Equations.Law.HasPotential));

    /// <summary>Takes room back for others.</summary>
    internal void Return(JacobianRoom room) => spare.Add(room);

    /// <summary>
    /// Potentials for one ampere from source to drain in the limit of small drive; the zero of the potential at the end.
    /// </summary>
    public double[] UnitSolution(int source, int drain)
    {
        double[] fed = new double[Equations.Length], u = new double[Equations.Length];
        fed[Space.ContactUnknown[source]] += 1;
        fed[Space.ContactUnknown[drain]] -= 1;
        AtZero.Solve(fed.AsSpan(0, Space.Size), u.AsSpan(0, Space.Size));
        return u;
    }

    /// <summary>The Jacobian at zero field times a vector of potentials, A.</summary>
    public void ZeroFieldProduct(ReadOnlySpan<double> u, Span<double> current)
    {
        SparseProduct.Multiply(Space.Pattern, Rest().Values.AsSpan(0, Space.Pattern.Count), u[..Space.Size], current[..Space.Size]);
        current[Space.Size] = 0;
    }

    /// <summary>
    /// Norm of the rounding errors of a residual at u, A: every current between two unknowns is a conductance times potentials that are
    /// themselves rounded. N. J. Higham, Accuracy and Stability of Numerical Algorithms (2002), section 3.5.
    /// </summary>
    internal double ResidualRounding(ReadOnlySpan<double> u)
    {
        int[] start = Space.Pattern.Start, column = Space.Pattern.Column;
        double[] atZeroValues = Rest().Values;
        double squares = 0;
        for (int i = 0; i < Space.Size; i++)
        {
            double sum = 0;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                sum += Math.Abs(atZeroValues[k] * u[column[k]]);
            }

            squares += sum * sum;
        }

        return Math.ScaleB(Math.Sqrt(squares), -52);
    }

    /// <summary>Potential differences V = phi(plus) - phi(minus) as the derivative with respect to the unknowns.</summary>
    public double[] ReadingVector(Terminal plus, Terminal minus)
    {
        double[] j = new double[Equations.Length];
        j[Space.UnknownOf(plus)] += 1;
        j[Space.UnknownOf(minus)] -= 1;
        j[Space.Size] = 0;
        return j;
    }

    /// <summary>The adjoint of a reading at zero field: its response to a current fed in at each unknown, ohm.</summary>
    public double[] Adjoint(ReadOnlySpan<double> reading)
    {
        double[] z = new double[Equations.Length];
        AtZero.SolveTransposed(reading[..Space.Size], z.AsSpan(0, Space.Size));
        return z;
    }
}
