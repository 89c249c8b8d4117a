using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>
/// Solves samples: the device changed by all causes at once, on the coarse mesh of the design moved with its contacts, with the full law, both signs and
/// every wiring. What the fine mesh adds to a reading of the design is added to the same reading of every sample; how well that holds is known from the
/// sensitivities on both meshes. Factors of the design serve the first steps of every sample.
/// </summary>
internal sealed class SampleSolver(ToleranceModel model)
{
    /// <summary>Residual over current at which a sample ends; a reading is then off by about this part of itself.</summary>
    public const double RelativeResidual = 1e-9;

    private readonly SheetCause[] order = [.. model.Causes.OrderBy(c => c.Kind.Scope == CauseScope.Sheet ? 0 : 1)];
    private readonly int[] place = [.. model.Causes.Select((c, i) => (c, i)).OrderBy(p => p.c.Kind.Scope == CauseScope.Sheet ? 0 : 1).Select(p => p.i)];

    /// <summary>Solves one sample.</summary>
    /// <param name="index">Its number.</param>
    /// <param name="x">Value of every cause, SI.</param>
    /// <param name="cancel">Checked at every step.</param>
    public SampleResult Solve(int index, double[] x, CancellationToken cancel)
    {
        SheetDevice device;
        try
        {
            device = Changed(x);
        }
        catch (Exception e) when (e is LayoutException or LawException)
        {
            return new(index, SampleStatus.NoDevice, []);
        }

        TriangleMesh? mesh = ReferenceEquals(device.Domain, model.Device.Domain) ? model.Mover.Mesh : model.Mover.Move(device.Domain);
        try
        {
            return mesh is null ? Anew(index, device, cancel) : OnMoved(index, device, mesh, cancel);
        }
        catch (Exception e) when (e is Fields.FieldSpaceException or MeshException)
        {
            return new(index, SampleStatus.NoDevice, []);
        }
    }

    private SheetDevice Changed(double[] x)
    {
        var draft = new DeviceDraft(model.Device);
        for (int k = 0; k < order.Length; k++)
        {
            if (x[place[k]] != 0)
            {
                order[k].Kind.Apply(draft, order[k].Target, x[place[k]]);
            }
        }

        return draft.Build();
    }

    private SampleResult OnMoved(int index, SheetDevice device, TriangleMesh mesh, CancellationToken cancel)
    {
        FieldLevel level = model.Meshes.Coarse.Moved(device, mesh, new LabLaw(device.Law, device.Axis));
        var newton = new NewtonSolver(level, model.States[0].CoarseFactor[0], RelativeResidual);
        double[][][] readings = new double[model.States.Count][][];
        double[] u = new double[level.Equations.Length];
        for (int w = 0; w < readings.Length; w++)
        {
            DesignState s = model.States[w];
            readings[w] = [[], []];
            for (int sign = 0; sign < 2; sign++)
            {
                if (sign == 1 && level.Equations.Law.IsLinear && model.IsLinear)
                {
                    readings[w][1] = [.. readings[w][0].Select(v => -v)];
                    continue;
                }

                double current = sign == 0 ? model.Current : -model.Current;
                s.CoarseU[sign].CopyTo(u, 0);
                newton.Restart(s.CoarseFactor[sign]);
                if (!newton.Solve(u, s.Plan.Wiring.Source, s.Plan.Wiring.Drain, current, cancel).Converged
                    && !new DrivePath(level, s.Plan.Wiring.Source, s.Plan.Wiring.Drain).Solve(current, u, null, cancel).Converged)
                {
                    return new(index, SampleStatus.NotConverged, []);
                }

                double[] v = s.Plan.Read(level, u);
                for (int k = 0; k < v.Length; k++)
                {
                    v[k] += s.FineValues[sign][k] - s.CoarseValues[sign][k];
                }

                readings[w][sign] = v;
            }
        }

        return Of(index, SampleStatus.Ok, readings);
    }

    private SampleResult Anew(int index, SheetDevice device, CancellationToken cancel)
    {
        ReadingPlan[] plans = [.. model.States.Select(s => s.Plan)];
        MeshRefinement refinement = MeshRefinement.Run(
            device, new LabLaw(device.Law, device.Axis), plans, model.Current, true, _ => { }, new StageClock(), cancel);
        var peaks = new PeakFinder(refinement.Meshes.Fine.Equations);
        var maker = new RowMaker(device, refinement.Goals);
        double[][][] readings = new double[plans.Length][][];
        for (int w = 0; w < plans.Length; w++)
        {
            StateResult plus = new DriveTask(refinement.Meshes, plans[w], peaks).Solve(model.Current, null, cancel);
            StateResult minus = new DriveTask(refinement.Meshes, plans[w], peaks).Solve(-model.Current, null, cancel);
            if (plus.Values is null || minus.Values is null)
            {
                return new(index, SampleStatus.NotConverged, []);
            }

            readings[w] = ToleranceModel.BothSigns(maker.Make(plans[w], model.Current, plus, minus, 0));
        }

        return Of(index, SampleStatus.Remeshed, readings);
    }

    // A ratio to an along voltage of exactly zero has no value.
    private SampleResult Of(int index, SampleStatus status, double[][][] readings)
    {
        double[] values = Values(readings);
        return values.All(double.IsFinite) ? new(index, status, values) : new(index, SampleStatus.NotConverged, []);
    }

    private double[] Values(double[][][] readings) => [.. model.Quantities.Select(q =>
        q.Value(model.States[q.WiringIndex].Plan, readings[q.WiringIndex][0], readings[q.WiringIndex][1]))];
}
