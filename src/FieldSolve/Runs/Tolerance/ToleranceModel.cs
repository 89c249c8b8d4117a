using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Sensitivity;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Runs;

/// <summary>One wiring of the device as designed at +I and -I: states on both meshes of the pair, what they read, and their sensitivities.</summary>
internal sealed class DesignState
{
    public required ReadingPlan Plan { get; init; }

    /// <summary>Coarse solution at +I and -I.</summary>
    public required double[][] CoarseU { get; init; }

    /// <summary>Factor of the coarse Jacobian at +I and -I.</summary>
    public required SparseLu[] CoarseFactor { get; init; }

    /// <summary>Readings on the coarse mesh at +I and -I, V.</summary>
    public required double[][] CoarseValues { get; init; }

    /// <summary>Readings at +I and -I, from the fine mesh and with what it is known to lack, V.</summary>
    public required double[][] FineValues { get; init; }

    /// <summary>Sensitivities on the coarse mesh.</summary>
    public required StateSensitivity[] Coarse { get; init; }

    /// <summary>Sensitivities on the fine mesh.</summary>
    public required StateSensitivity[] Fine { get; init; }

    /// <summary>Values with error bars and status.</summary>
    public required CurveRow Row { get; init; }

    /// <summary>The along voltage cannot be told from zero, so that nothing is a share of it.</summary>
    public bool AlongIsZero => Row.Of("along") is { } along && !(Math.Abs(along.Odd!.Value) > along.Error);
}

/// <summary>
/// The device as designed, solved at the largest current of its drive with both signs, and the derivatives of everything it reads with respect to the
/// causes of its [tolerance].
/// </summary>
internal sealed class ToleranceModel
{
    private ToleranceModel(SheetDevice device, IReadOnlyList<SheetCause> causes, MeshRefinement refinement, double current)
    {
        Device = device;
        Causes = causes;
        Refinement = refinement;
        Current = current;
        Meshes = refinement.Meshes;
        Mover = new MeshMover(Meshes.Coarse.Space.Mesh);
    }

    public SheetDevice Device { get; }

    public IReadOnlyList<SheetCause> Causes { get; }

    public MeshRefinement Refinement { get; }

    public MeshPair Meshes { get; }

    public MeshMover Mover { get; }

    /// <summary>A, with its sign in the device file.</summary>
    public double Current { get; }

    public bool IsLinear => Device.Law.IsLinear;

    public required IReadOnlyList<DesignState> States { get; init; }

    public required IReadOnlyList<ToleranceQuantity> Quantities { get; init; }

    /// <summary>Value of each quantity as designed.</summary>
    public required double[] Values { get; init; }

    /// <summary>Numerical error of <see cref="Values"/>.</summary>
    public required double[] Errors { get; init; }

    /// <summary>Per quantity and cause: derivative on the fine mesh, per SI unit; NaN-free, 0 where there is none.</summary>
    public required double[,] Slopes { get; init; }

    /// <summary>The same on the coarse mesh.</summary>
    public required double[,] CoarseSlopes { get; init; }

    /// <summary>Causes that change the domain in more than places however small they are, so that they have no derivative here.</summary>
    public required bool[] WithoutSlope { get; init; }

    /// <summary>Solves the device as designed.</summary>
    /// <exception cref="ToleranceException">A wiring has no solution at the largest current.</exception>
    public static ToleranceModel Build(SheetDevice device, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        IReadOnlyList<SheetCause> causes = device.Tolerance?.Causes ?? [];
        double current = MeshRefinement.Largest(device.Drive!.Currents);
        if (current == 0)
        {
            throw new ToleranceException("The largest current of [drive] is zero; a tolerance needs one to read something.");
        }

        var law = new LabLaw(device.Law, device.Axis);
        ReadingPlan[] plans = [.. device.Wirings.Select(w => new ReadingPlan(w))];
        MeshRefinement refinement = MeshRefinement.Run(device, law, plans, current, true, tell, clock, cancel);
        tell("solving the device as designed");
        var maker = new RowMaker(device, refinement.Goals);
        DesignState[] states = clock.Time("design", () => SolveStates(refinement.Meshes, plans, maker, current, cancel));
        var bare = new ToleranceModel(device, causes, refinement, current)
        {
            States = states,
            Quantities = [.. ToleranceQuantity.Of(plans, device.Law.IsLinear).Where(q => !q.IsRatio || !states[q.WiringIndex].AlongIsZero)],
            Values = [],
            Errors = [],
            Slopes = new double[0, 0],
            CoarseSlopes = new double[0, 0],
            WithoutSlope = [],
        };
        tell("sensitivities");
        return clock.Time("sensitivities", bare.WithSlopes);
    }

    private static DesignState[] SolveStates(
        MeshPair meshes, ReadingPlan[] plans, RowMaker maker, double current, CancellationToken cancel)
    {
        var peaks = new PeakFinder(meshes.Fine.Equations);
        var solved = new (StateResult Result, double[] Fine, double[] Coarse)?[plans.Length, 2];
        Parallel.For(0, 2 * plans.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, job =>
        {
            (int w, int sign) = (job / 2, job % 2);
            double at = sign == 0 ? current : -current;
            double[] fine = [], coarse = new double[meshes.Coarse.Equations.Length];
            StateResult result = new DriveTask(meshes, plans[w], peaks).Solve(at, u => fine = [.. u], cancel);
            if (result.Values is not null)
            {
                new DrivePath(meshes.Coarse, plans[w].Wiring.Source, plans[w].Wiring.Drain).Solve(at, coarse, null, cancel);
                solved[w, sign] = (result, fine, coarse);
            }
        });

        for (int w = 0; w < plans.Length; w++)
        {
            if (solved[w, 0] is null || solved[w, 1] is null)
            {
                throw new ToleranceException(
                    $"Wiring '{plans[w].Wiring.Name}' has no solution at the largest current of [drive]; drive less or extend the law.");
            }
        }

        double along = VoltageScale.Of(maker.Device, current, plans.SelectMany((p, w) =>
            solved[w, 0]!.Value.Result.Values!.Select((v, k) => (p.Pairs[k] == p.Wiring.Along, v))));
        var sensitivity = new StateSensitivity[plans.Length, 2, 2];
        Parallel.For(0, 4 * plans.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, job =>
        {
            (int w, int sign, bool fine) = (job / 4, job / 2 % 2, job % 2 == 0);
            (_, double[] uFine, double[] uCoarse) = solved[w, sign]!.Value;
            FieldLevel level = fine ? meshes.Fine : meshes.Coarse;
            sensitivity[w, sign, fine ? 1 : 0] = StateSensitivity.Of(level, fine ? uFine : uCoarse, plans[w].Vectors(level), cancel);
        });
        return [.. plans.Select((plan, w) =>
        {
            CurveRow row = maker.Make(plan, current, solved[w, 0]!.Value.Result, solved[w, 1]!.Value.Result, along);
            return new DesignState
            {
                Plan = plan,
                CoarseU = [solved[w, 0]!.Value.Coarse, solved[w, 1]!.Value.Coarse],
                CoarseFactor = [sensitivity[w, 0, 0].Factor, sensitivity[w, 1, 0].Factor],
                CoarseValues = [plan.Read(meshes.Coarse, solved[w, 0]!.Value.Coarse), plan.Read(meshes.Coarse, solved[w, 1]!.Value.Coarse)],
                FineValues = BothSigns(row),
                Coarse = [sensitivity[w, 0, 0], sensitivity[w, 1, 0]],
                Fine = [sensitivity[w, 0, 1], sensitivity[w, 1, 1]],
                Row = row,
            };
        })];
    }

    /// <summary>Readings of a row at +I and -I, with what the mesh is known to lack.</summary>
    internal static double[][] BothSigns(CurveRow row) =>
        [[.. row.Readings.Select(r => r.Odd!.Value + r.Even!.Value)], [.. row.Readings.Select(r => r.Even!.Value - r.Odd!.Value)]];

    private ToleranceModel WithSlopes()
    {
        int n = Quantities.Count;
        double[] values = new double[n], errors = new double[n];
        double[,] fine = new double[n, Causes.Count], coarse = new double[n, Causes.Count];
        bool[] without = new bool[Causes.Count];
        var fineMotion = new NodeMotion(Mover, Meshes.Fine.Space);
        var coarseMotion = new NodeMotion(Mover, Meshes.Coarse.Space);
        for (int q = 0; q < n; q++)
        {
            DesignState s = States[Quantities[q].WiringIndex];
            values[q] = Quantities[q].Value(s.Plan, s.FineValues[0], s.FineValues[1]);
            errors[q] = ErrorOf(Quantities[q], s, values[q]);
        }

        var fields = new (MotionField? Fine, MotionField? Coarse)[Causes.Count];
        Parallel.For(0, Causes.Count, new ParallelOptions { MaxDegreeOfParallelism = Environment.ProcessorCount }, c =>
        {
            if (Causes[c].Kind.Effect == CauseEffect.Motion)
            {
                fields[c] = (Field(Causes[c], fineMotion), Field(Causes[c], coarseMotion));
                without[c] = fields[c].Fine is null;
            }
        });
        for (int q = 0; q < n; q++)
        {
            DesignState s = States[Quantities[q].WiringIndex];
            for (int c = 0; c < Causes.Count; c++)
            {
                fine[q, c] = Quantities[q].Slope(
                    s.Plan, s.FineValues[0], s.FineValues[1],
                    k => CauseSlope.Of(s.Fine[0], k, Causes[c], fields[c].Fine), k => CauseSlope.Of(s.Fine[1], k, Causes[c], fields[c].Fine));
                coarse[q, c] = Quantities[q].Slope(
                    s.Plan, s.CoarseValues[0], s.CoarseValues[1],
                    k => CauseSlope.Of(s.Coarse[0], k, Causes[c], fields[c].Coarse), k => CauseSlope.Of(s.Coarse[1], k, Causes[c], fields[c].Coarse));
            }
        }

        return new(Device, Causes, Refinement, Current)
        {
            States = States,
            Quantities = Quantities,
            Values = values,
            Errors = errors,
            Slopes = fine,
            CoarseSlopes = coarse,
            WithoutSlope = without,
        };
    }

    private MotionField? Field(SheetCause cause, NodeMotion motion) => CauseSlope.Field(Device, cause, motion);

    private static double ErrorOf(ToleranceQuantity q, DesignState s, double value)
    {
        if (!q.IsRatio)
        {
            Reading r = s.Row.Readings[q.PairIndex];
            return q.Part == ReadingPart.Odd ? r.Error : r.EvenError ?? 0;
        }

        Reading along = s.Row.Of("along")!, across = s.Row.Of("across")!;
        return (across.Error + (Math.Abs(value) * along.Error)) / Math.Abs(along.Odd!.Value);
    }
}
