using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Sensitivity;

/// <summary>
/// What a converged state says about small changes: the exact derivative of each reading with respect to every parameter of the law, the axis, every
/// contact's resistance or resistivity, and the place of every node. With the adjoint z of a reading, J' z = dV/du, all of them are integrals over the
/// sheet: dV/dp = -z.dR/dp (M. B. Giles, N. A. Pierce, Flow Turbul. Combust. 65, 393 (2000)); a motion of the nodes with velocity t changes
/// grad u by -(grad t)' grad u and areas by div t (J. Sokolowski, J.-P. Zolésio, Introduction to Shape Optimization (1992), chapter 2), here of the discrete
/// equations themselves. One adjoint solve per reading serves all causes.
/// </summary>
public sealed class StateSensitivity
{
    private readonly string[] keys;
    private readonly bool hasPlaces;
    private readonly double[,] law;        // reading, 0 = axis, then the keys
    private readonly double[,] contact;    // reading, contact
    private readonly double[][] nodeX;     // reading: gradient with respect to the nodes
    private readonly double[][] nodeY;
    private readonly Dictionary<(NodeMotion, int), (double[] X, double[] Y)> pulled = [];

    private StateSensitivity(FieldLevel level, double[][] adjoints, SparseLu factor, IReadOnlyCollection<string>? only, bool places)
    {
        hasPlaces = places;
        Level = level;
        Adjoints = adjoints;
        Factor = factor;
        keys = [.. LawSensitivity.Parameters(level.Equations.Law.Law).Select(p => p.Key).Where(k => only is null || only.Contains(k))];
        law = new double[adjoints.Length, keys.Length + 1];
        contact = new double[adjoints.Length, level.Space.Contacts.Count];
        nodeX = [.. adjoints.Select(_ => new double[level.Space.NodeCount])];
        nodeY = [.. adjoints.Select(_ => new double[level.Space.NodeCount])];
    }

    /// <summary>The mesh and equations.</summary>
    public FieldLevel Level { get; }

    /// <summary>The adjoint of each reading, ohm: its response to a current fed in at each unknown.</summary>
    public IReadOnlyList<double[]> Adjoints { get; }

    /// <summary>The factor of the state's Jacobian.</summary>
    public SparseLu Factor { get; }

    /// <summary>Number of readings.</summary>
    public int ReadingCount => Adjoints.Count;

    /// <summary>Measures a state.</summary>
    /// <param name="level">Mesh and equations.</param>
    /// <param name="u">The converged potentials, V.</param>
    /// <param name="readings">Each reading as a vector over the unknowns, see <see cref="FieldLevel.ReadingVector"/>.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="PivotException">The Jacobian of the state is not positive definite.</exception>
    /// <exception cref="LawRefusedException">A table law was asked beyond its grid.</exception>
    public static StateSensitivity Of(FieldLevel level, ReadOnlySpan<double> u, IReadOnlyList<double[]> readings, CancellationToken cancel) =>
        Of(level, u, readings, null, true, cancel);

    /// <summary>Measures some derivatives of a state.</summary>
    /// <param name="level">Mesh and equations.</param>
    /// <param name="u">The converged potentials, V.</param>
    /// <param name="readings">Each reading as a vector over the unknowns.</param>
    /// <param name="only">Parameters of the law that are wanted; null for all. The axis always is.</param>
    /// <param name="places">Whether the places of nodes are wanted.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="PivotException">The Jacobian of the state is not positive definite.</exception>
    /// <exception cref="LawRefusedException">A table law was asked beyond its grid.</exception>
    internal static StateSensitivity Of(
        FieldLevel level, ReadOnlySpan<double> u, IReadOnlyList<double[]> readings, IReadOnlyCollection<string>? only, bool places, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(level);
        ArgumentNullException.ThrowIfNull(readings);
        int n = level.Space.Size;
        SparseLu factor = level.AtZero;
        if (!level.Equations.Law.IsLinear)
        {
            double[] jacobian = new double[level.Space.Pattern.Count + 1];
            level.Equations.Jacobian(u, jacobian);
            factor = new SparseLu(level.Analysis, level.Equations.Law.HasPotential);
            factor.Factor(jacobian.AsSpan(0, jacobian.Length - 1), cancel);
        }

        double[] many = new double[n * readings.Count];
        for (int r = 0; r < readings.Count; r++)
        {
            readings[r].AsSpan(0, n).CopyTo(many.AsSpan(r * n));
        }

        factor.SolveTransposedMany(many, many, readings.Count);
        double[][] adjoints = [.. Enumerable.Range(0, readings.Count).Select(r => (double[])[.. many.AsSpan(r * n, n), 0])];
        var found = new StateSensitivity(level, adjoints, factor, only, places);
        new TriangleSlopes(level.Equations, found.keys, found.law, found.nodeX, found.nodeY, places).Add(u, adjoints);
        for (int r = 0; r < adjoints.Length; r++)
        {
            MetalSlopes.Add(level.Equations, u, adjoints[r], r, found.contact, found.nodeX[r], found.nodeY[r]);
        }

        return found;
    }

    /// <summary>dV/dp for a parameter of the law, V per SI unit.</summary>
    /// <exception cref="ArgumentException">The law has no such parameter with a finite value.</exception>
    public double ByLaw(int reading, string key)
    {
        int k = Array.IndexOf(keys, key);
        return k >= 0 ? law[reading, k + 1] : throw new ArgumentException($"The law has no parameter '{key}' to vary.", nameof(key));
    }

    /// <summary>dV/d(axis), V/rad.</summary>
    public double ByAxis(int reading) => law[reading, 0];

    /// <summary>
    /// dV/d(line resistance), V/(ohm m), of an edge contact or dV/d(resistivity), V/(ohm m²), of a pad. 0 for an ideal contact, where the change
    /// goes like r ln r and has no derivative.
    /// </summary>
    public double ByContact(int reading, int contactIndex) => contact[reading, contactIndex];

    /// <summary>dV/dp for a cause that moves nodes, V per unit of the cause.</summary>
    /// <param name="reading">Index of the reading.</param>
    /// <param name="field">Velocities; of the level's own mesh.</param>
    public double ByMotion(int reading, MotionField field)
    {
        ArgumentNullException.ThrowIfNull(field);
        if (!hasPlaces)
        {
            throw new InvalidOperationException("The state was measured without the places of its nodes.");
        }

        if (!pulled.TryGetValue((field.Motion, reading), out (double[] X, double[] Y) g))
        {
            pulled[(field.Motion, reading)] = g = (field.Motion.Pull(nodeX[reading]), field.Motion.Pull(nodeY[reading]));
        }

        double sum = 0;
        for (int k = 0; k < g.X.Length; k++)
        {
            sum += (g.X[k] * field.X[k]) + (g.Y[k] * field.Y[k]);
        }

        return sum;
    }
}
