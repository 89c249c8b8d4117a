using System.Diagnostics;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;

namespace FieldSolve.Sessions;

/// <summary>
/// A first answer on a coarse mesh and its split, with twice the difference of the two as error bar: at the ends of ideal contacts the error falls like the
/// size of the elements, so what is missing is about what the split changed. While the layout moves, the nodes of the mesh move along, so that readings glide and do not jump
/// from mesh to mesh, and solutions and factors of the layout before serve as a start. Not for several threads.
/// </summary>
internal sealed class QuickAnswer
{
    // Against the sizes that a drive begins with.
    private const double Stretch = 2;

    // Even parts fall more slowly: they were seen to miss up to 1.3 of that difference (disc with six contacts and a quadratic law).
    private const double Doubt = 2;

    // A difference that happens to change its sign as a contact moves says nothing for a moment: no bar is below this share of the widest among the probes.
    private const double LeastShare = 0.3;

    // A mesh whose triangles have lost more of their shape than this is made anew when there is time.
    private const double WellKept = 0.8;

    private readonly Dictionary<(int Source, int Drain, int Sign), FollowedState> states = [];
    private MeshMover? mover;
    private MeshPair? before;
    private double kept;

    /// <summary>The mesh was moved so far that another one should be made when nobody waits: <see cref="Renew"/>.</summary>
    public bool IsWorn => mover is not null && kept < WellKept;

    /// <summary>Solves the wirings that are looked at, at the largest current; the row at zero current gives a curve its other end.</summary>
    /// <param name="device">With a drive.</param>
    /// <param name="version">Version of the text.</param>
    /// <param name="wirings">Names; others are left out. Empty for the first wiring.</param>
    /// <param name="cancel">Stops the work.</param>
    public LayoutAnswer Of(SheetDevice device, int version, IReadOnlySet<string> wirings, CancellationToken cancel)
    {
        Stopwatch watch = Stopwatch.StartNew();
        Wiring[] chosen = [.. device.Wirings.Where(w => wirings.Contains(w.Name))];
        chosen = chosen.Length > 0 ? chosen : [.. device.Wirings.Take(1)];
        try
        {
            MeshPair meshes = Meshes(device, cancel);
            (CurveRow[] rows, PotentialFrame[] frames) = Solve(device, meshes, chosen, cancel);
            return new(version, device, false, rows, frames, null, watch.Elapsed.TotalMilliseconds, null);
        }
        catch (Exception e) when (NoAnswer.Because(e) is { } why)
        {
            Forget();
            return new(version, device, false, [], [], why, watch.Elapsed.TotalMilliseconds, null);
        }
        catch (OperationCanceledException)
        {
            // Half of the states may be those of this layout, half those of the one before.
            Forget();
            throw;
        }
    }

    /// <summary>Makes a mesh for a layout afresh and solves it, so that the next moves start from there.</summary>
    /// <exception cref="OperationCanceledException">Cancelled; the next answer makes the mesh.</exception>
    public void Renew(SheetDevice device, IReadOnlySet<string> wirings, CancellationToken cancel)
    {
        Forget();
        Of(device, 0, wirings, cancel);
    }

    private void Forget()
    {
        (mover, before) = (null, null);
        states.Clear();
    }

    private (CurveRow[] Rows, PotentialFrame[] Frames) Solve(SheetDevice device, MeshPair meshes, Wiring[] chosen, CancellationToken cancel)
    {
        DriveSpec drive = device.Drive!;
        double largest = MeshRefinement.Largest(drive.Currents);
        bool linear = device.Law.IsLinear;
        int signs = drive.BothSigns && !linear ? 2 : 1;
        ReadingPlan[] plans = [.. chosen.Select(w => new ReadingPlan(w))];
        foreach (ReadingPlan plan in plans)
        {
            for (int s = 0; s < signs; s++)
            {
                states.TryAdd((plan.Wiring.Source, plan.Wiring.Drain, s), new(plan, meshes));
            }
        }

        // Wirings between the same two contacts share a state and are solved one after the other.
        var solved = new StateResult[plans.Length, 2];
        var frames = new PotentialFrame[plans.Length];
        int last = largest == 0 ? 0 : 1;
        var groups = Enumerable.Range(0, plans.Length).GroupBy(w => (plans[w].Wiring.Source, plans[w].Wiring.Drain)).ToArray();
        Parallel.For(0, groups.Length * signs, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, job =>
        {
            int sign = job % signs;
            foreach (int w in groups[job / signs])
            {
                Wiring wiring = plans[w].Wiring;
                FollowedState state = states[(wiring.Source, wiring.Drain, sign)];
                solved[w, sign] = state.Solve(meshes, plans[w], sign == 0 ? largest : -largest, cancel);
                if (sign == 0 && solved[w, 0].Values is not null)
                {
                    frames[w] = PotentialFrame.Of(meshes.Fine.Space, state.Fine, wiring.Drain, wiring.Name, largest, last);
                }
            }
        });

        double along = VoltageScale.Of(device, largest, plans.SelectMany((p, w) => (solved[w, 0].Values ?? []).Select((v, k) => (p.Pairs[k] == p.Wiring.Along, v))));
        var maker = new RowMaker(device, []);
        var rows = new List<CurveRow>();
        for (int w = 0; w < plans.Length; w++)
        {
            StateResult? minus = !drive.BothSigns ? null : linear ? DriveWork.Negated(solved[w, 0]) : solved[w, 1];
            StateResult rest = FollowedState.AtRest(plans[w]);
            if (largest != 0)
            {
                rows.Add(Widened(maker.Make(plans[w], 0, rest, drive.BothSigns ? rest : null, 0)));
            }

            rows.Add(Widened(maker.Make(plans[w], largest, solved[w, 0], minus, along)));
        }

        return ([.. rows], [.. frames.Where(f => f is not null)]);
    }

    private static CurveRow Widened(CurveRow row)
    {
        IEnumerable<Reading> probes = row.Readings.Where(r => r.Pair != ReadingPlan.Source);
        double least = LeastShare * probes.Select(r => r.Error).DefaultIfEmpty(0).Max(), leastEven = LeastShare * probes.Select(r => r.EvenError ?? 0).DefaultIfEmpty(0).Max();
        return row with { Readings = [.. row.Readings.Select(r => r with { Error = Doubt * Math.Max(r.Error, least), EvenError = Doubt * (r.EvenError is { } e ? Math.Max(e, leastEven) : null) })] };
    }

    private MeshPair Meshes(SheetDevice device, CancellationToken cancel)
    {
        var law = new LabLaw(device.Law, device.Axis);
        if (before is not null && before.Serves(device) && mover!.Move(device.Domain, out double shape) is { } moved)
        {
            kept = shape;
            return before = before.Moved(device, moved, law);
        }

        Forget();
        TriangleMesh mesh = Mesher.Generate(device.Domain, new StretchedSize(MeshSizes.First(device), Stretch), null, cancel);
        MeshPair made = MeshPair.Build(device, mesh, law, cancel);
        (mover, before, kept) = (new MeshMover(mesh), made, 1);
        return made;
    }
}
