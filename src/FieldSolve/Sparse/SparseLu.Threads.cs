namespace FieldSolve.Sparse;

public sealed unsafe partial class SparseLu
{
    /// <summary>Flops below which threads are not worth starting.</summary>
    private const double WorthThreads = 2e7;

    // Subtrees first, the most work first; a supernode above them when all its children are done. Every front adds its children in their own sequence,
    // whoever made them, and every element is one chain of operations, whoever computes it: same bits as on one thread.
    private void FactorTogether(int degree, double* values, CancellationToken cancel)
    {
        SparseAnalysis a = analysis;
        ParallelPlan plan = a.Plan;
        if (parallelStore.Length == 0)
        {
            parallelStore = Allocate(plan.UpdateLength);
        }
        var team = new WorkTeam();
        var alone = new Room(Aligned(parallelStore), plan.UpdateStart, values, null, cancel);
        var helped = new Room(Aligned(parallelStore), plan.UpdateStart, values, team, cancel);
        int[] waiting = [.. plan.Waiting];
        try
        {
            team.Run(degree, plan.Roots.Select(root => (Action)(() => Subtree(root))));
        }
        catch (AggregateException e) when (e.InnerException is PivotException)
        {
            // Which pivot was met first depends on the threads: the one that counts is the first of the elimination.
            FactorAlone(values, cancel);
        }
        catch (AggregateException e) when (e.InnerException is OperationCanceledException)
        {
            throw new OperationCanceledException(cancel);
        }
        GC.KeepAlive(parallelStore);

        void Subtree(int root)
        {
            double[] front = RentFront();
            for (int t = plan.First[root]; t <= root; t++)
            {
                if ((t & 63) == 0)
                {
                    cancel.ThrowIfCancellationRequested();
                }
                Front(t, alone, Aligned(front));
            }
            spareFronts.Add(front);
            Finished(root);
        }

        void Finished(int t)
        {
            int parent = a.Tree.Parent[t];
            if (parent >= 0 && Interlocked.Decrement(ref waiting[parent]) == 0)
            {
                team.Add(() =>
                {
                    double[] front = RentFront();
                    Front(parent, helped, Aligned(front));
                    spareFronts.Add(front);
                    Finished(parent);
                });
            }
            team.Done();
        }
    }

    // Where update matrices lie, what is factored, and who helps.
    private sealed class Room(double* updates, long[] updateStart, double* values, WorkTeam? team, CancellationToken cancel)
    {
        public double* Updates { get; } = updates;

        public long[] UpdateStart { get; } = updateStart;

        public double* Values { get; } = values;

        public WorkTeam? Team { get; } = team;

        public CancellationToken Cancel { get; } = cancel;
    }
}
