using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Sensitivity;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Runs;

/// <summary>
/// The data as the sheet gives them: every state solved with the full law on one mesh that moves with the contacts, plus what is known of the error of that mesh.
/// Derivatives are the exact ones of the discrete equations.
/// </summary>
internal sealed class FitModel : IFitFunction
{
    private readonly FitProblem problem;
    private readonly FieldLevel reference;
    private readonly MeshMover mover;
    private readonly NodeMotion motion;
    private readonly double[] missing;
    private readonly int[][] byCircuit;
    private readonly double[]?[] potentials;   // of the last accepted state, as guesses
    private Trial? last;

    private sealed record Trial(double[] P, SheetDevice Device, FieldLevel Level, double[][] U, double[][] Readings);

    /// <param name="problem">States and data.</param>
    /// <param name="level">Of the device at the numbers the mesh was made for.</param>
    /// <param name="missing">Per datum: what the mesh lacks, V.</param>
    /// <param name="before">A model of the same states on the same triangles that lay a little differently: its solutions are good guesses. May be null.</param>
    public FitModel(FitProblem problem, FieldLevel level, double[] missing, FitModel? before = null)
    {
        this.problem = problem;
        this.missing = missing;
        reference = level;
        mover = new MeshMover(level.Space.Mesh);
        motion = new NodeMotion(mover, level.Space);
        potentials = before is not null && before.problem == problem && before.reference.Space.Size == level.Space.Size ? before.potentials : new double[problem.States.Count][];
        byCircuit = [.. Enumerable.Range(0, problem.Plans.Length).Select(c => Enumerable.Range(0, problem.States.Count)
            .Where(s => problem.States[s].Circuit == c).OrderByDescending(s => problem.States[s].Current > 0).ThenBy(s => Math.Abs(problem.States[s].Current)).ToArray())];
    }

    /// <summary>Solves, for the record.</summary>
    public int Solves { get; private set; }

    /// <summary>Adjoint solves, for the record.</summary>
    public int Adjoints { get; private set; }

    /// <summary>The mesh at some numbers; null when it must be made anew.</summary>
    public TriangleMesh? MeshAt(SheetDevice device) => mover.Move(device.Domain);

    /// <inheritdoc/>
    public double[]? Values(double[] p, CancellationToken cancel)
    {
        try
        {
            SheetDevice device = problem.DeviceAt(p);
            if (MeshAt(device) is not { } mesh)
            {
                return null;
            }

            FieldLevel level = reference.Moved(device, mesh, new LabLaw(device.Law, device.Axis));
            double[][] u = new double[problem.States.Count][], readings = new double[problem.States.Count][];
            bool good = true;
            Parallel.For(0, byCircuit.Length, Threads(cancel), (c, loop) =>
            {
                if (!Solve(level, c, u, readings, cancel))
                {
                    good = false;
                    loop.Stop();
                }
            });
            if (!good)
            {
                return null;
            }

            Solves += problem.States.Count;
            last = new(p, device, level, u, readings);
            return [.. problem.Data.Select((_, i) => missing[i] + problem.Terms[i].Sum(t => t.Weight * readings[t.State][problem.Reading[i]]))];
        }
        catch (Exception e) when (e is LayoutException or LawException or PivotException or LawRefusedException or FieldSpaceException)
        {
            return null;
        }
        catch (AggregateException e) when (e.InnerExceptions.All(x => x is PivotException or LawRefusedException))
        {
            return null;
        }
    }

    /// <inheritdoc/>
    public double[,] Jacobian(double[] p, CancellationToken cancel)
    {
        Trial trial = At(p, cancel);
        for (int s = 0; s < potentials.Length; s++)
        {
            potentials[s] = trial.U[s];
        }

        MotionField?[] fields = Fields(p);
        double[][,] slopes = new double[problem.States.Count][,];
        bool[][] wanted = Wanted();
        int[] states = [.. Enumerable.Range(0, slopes.Length).Where(s => wanted[s].Contains(true))];
        Parallel.For(0, states.Length, Threads(cancel), k => slopes[states[k]] = Slopes(trial, states[k], wanted[states[k]], fields, cancel));
        Adjoints += wanted.Sum(w => w.Count(x => x));
        double[,] jacobian = new double[problem.Data.Count, problem.Parameters.Count];
        for (int i = 0; i < problem.Data.Count; i++)
        {
            foreach (FitTerm t in problem.SlopeTerms[i])
            {
                for (int j = 0; j < problem.Parameters.Count; j++)
                {
                    jacobian[i, j] += t.Weight * slopes[t.State][problem.Reading[i], j];
                }
            }
        }

        return jacobian;
    }

    /// <summary>Readings of every state at some numbers, V.</summary>
    public double[][] ReadingsAt(double[] p, CancellationToken cancel) => At(p, cancel).Readings;

    /// <summary>Mesh, equations and device at some numbers.</summary>
    public (SheetDevice Device, FieldLevel Level) LevelAt(double[] p, CancellationToken cancel) => At(p, cancel) is var t ? (t.Device, t.Level) : default;

    /// <summary>Derivatives of some readings of one solved state, those that the parameters need.</summary>
    public StateSensitivity Measure(FieldLevel level, double[] u, IReadOnlyList<double[]> vectors, CancellationToken cancel) => StateSensitivity.Of(
        level, u, vectors, [.. problem.Parameters.Where(q => q.Kind.Effect == CauseEffect.Law).Select(q => q.Kind.Key)],
        problem.Parameters.Any(q => q.Kind.Effect == CauseEffect.Motion), cancel);

    /// <summary>Velocities of the mesh under the parameters that move something; null for the others.</summary>
    /// <exception cref="FitException">A parameter stands where the sheet changes in more than places, so that there is no derivative.</exception>
    public MotionField?[] Fields(double[] p)
    {
        var fields = new MotionField?[problem.Parameters.Count];
        Parallel.For(0, fields.Length, j =>
        {
            CauseKind kind = problem.Parameters[j].Kind;
            if (kind.Effect == CauseEffect.Motion)
            {
                fields[j] = MotionScale.Velocity(motion, problem.DeviceAt(p), kind, problem.Parameters[j].Target, by => problem.DomainAt(p, j, by));
            }
        });
        int jump = Enumerable.Range(0, fields.Length).FirstOrDefault(j => fields[j] is null && problem.Parameters[j].Kind.Effect == CauseEffect.Motion, -1);
        return jump < 0 ? fields : throw problem.Jump(p, jump);
    }

    /// <summary>
    /// What the guarded zone of the law does to the data at the largest currents of each circuit: where the law is left, and per datum the influence, V; null for no exit
    /// and for weaker currents.
    /// </summary>
    public (LawExit? Exit, double?[] Influence) Guarded(double[] p, CancellationToken cancel)
    {
        Trial trial = At(p, cancel);
        var influence = new double?[problem.Data.Count];
        LawExit? worst = null;
        if (trial.Level.Equations.Law.Guard is null)
        {
            return (null, influence);
        }

        foreach (int[] states in byCircuit)
        {
            // The ends of the range of currents: the first and last of either sign.
            foreach (int s in states.Where(s => states.All(o => Math.Abs(problem.States[o].Current) <= Math.Abs(problem.States[s].Current) * (1 + 1e-9)
                || (problem.States[o].Current > 0) != (problem.States[s].Current > 0))))
            {
                ReadingPlan plan = problem.Plans[problem.States[s].Circuit];
                StateSensitivity state = Measure(trial.Level, trial.U[s], plan.Vectors(trial.Level), cancel);
                GuardZone zone = GuardZone.Measure(trial.Level.Equations, trial.U[s], state.Adjoints);
                worst = zone.Exit is { } exit && !(exit.Field <= worst?.Field) ? exit : worst;
                for (int i = 0; i < influence.Length && zone.Exit is not null; i++)
                {
                    if (problem.Terms[i].FirstOrDefault(t => t.State == s) is { Weight: not 0 } term)
                    {
                        influence[i] = (influence[i] ?? 0) + (term.Weight * zone.Share[problem.Reading[i]]);
                    }
                }
            }
        }

        return (worst, influence);
    }

    /// <summary>Derivatives from the sensitivities of a state.</summary>
    public double[,] Slopes(StateSensitivity state, int[] rows, int count, MotionField?[] fields)
    {
        double[,] slopes = new double[count, problem.Parameters.Count];
        for (int k = 0; k < rows.Length; k++)
        {
            for (int j = 0; j < problem.Parameters.Count; j++)
            {
                FitParameter q = problem.Parameters[j];
                slopes[rows[k], j] = q.Kind.Effect switch
                {
                    CauseEffect.Axis => state.ByAxis(k),
                    CauseEffect.Law => state.ByLaw(k, q.Kind.Key),
                    CauseEffect.Resistance => state.ByContact(k, q.Target.Contacts[0]),
                    _ => state.ByMotion(k, fields[j]!),
                };
            }
        }

        return slopes;
    }

    private static ParallelOptions Threads(CancellationToken cancel) => new() { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount };

    private Trial At(double[] p, CancellationToken cancel)
    {
        if (last is null || !last.P.AsSpan().SequenceEqual(p))
        {
            if (Values(p, cancel) is null)
            {
                throw new FitException("The model has no solution at the fitted values.");
            }
        }

        return last!;
    }

    private bool Solve(FieldLevel level, int circuit, double[][] u, double[][] readings, CancellationToken cancel)
    {
        ReadingPlan plan = problem.Plans[circuit];
        if (byCircuit[circuit].Length == 0)
        {
            return true;
        }

        var path = new DrivePath(level, plan.Wiring.Source, plan.Wiring.Drain);
        foreach (int s in byCircuit[circuit])
        {
            cancel.ThrowIfCancellationRequested();
            u[s] = new double[level.Equations.Length];
            if (!path.Solve(problem.States[s].Current, u[s], potentials[s], cancel).Converged)
            {
                return false;
            }

            readings[s] = plan.Read(level, u[s]);
        }

        return true;
    }

    private bool[][] Wanted()
    {
        bool[][] wanted = [.. problem.States.Select(s => new bool[problem.Plans[s.Circuit].Count])];
        for (int i = 0; i < problem.Data.Count; i++)
        {
            foreach (FitTerm t in problem.SlopeTerms[i])
            {
                wanted[t.State][problem.Reading[i]] = true;
            }
        }

        return wanted;
    }

    private double[,] Slopes(Trial trial, int state, bool[] wanted, MotionField?[] fields, CancellationToken cancel)
    {
        (FieldLevel level, double[] u) = (trial.Level, trial.U[state]);
        double[][] vectors = problem.Plans[problem.States[state].Circuit].Vectors(level);
        int[] rows = [.. Enumerable.Range(0, vectors.Length).Where(k => wanted[k])];
        return Slopes(Measure(level, u, [.. rows.Select(k => vectors[k])], cancel), rows, vectors.Length, fields);
    }
}
