using FieldSolve.Sparse;

namespace FieldSolve.Tests.SparseTests;

public class ThreadTests
{
    private static readonly Lazy<Sample> Disc = new(() => DiscWorkload.Build(25_000));

    [Theory]
    [InlineData(2, false)]
    [InlineData(3, false)]
    [InlineData(8, false)]
    [InlineData(2, true)]
    [InlineData(8, true)]
    public void Any_number_of_threads_gives_the_same_bits(int degree, bool symmetric)
    {
        Sample disc = symmetric ? Disc.Value.Symmetrised() : Disc.Value;
        SparseAnalysis analysis = SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y);
        Assert.True(analysis.Plan.Roots.Length > degree, "no work to divide");
        double[] b = Samples.Vector(disc.Size, 1), one = new double[disc.Size], many = new double[disc.Size];
        var lu = new SparseLu(analysis, symmetric);
        lu.Factor(disc.Values);
        lu.Solve(b, one);
        for (int run = 0; run < 3; run++)
        {
            lu.Factor(disc.Values, degree);
            lu.Solve(b, many);
            Assert.Equal(one, many);
        }
    }

    [Fact]
    public void Every_supernode_belongs_to_one_job()
    {
        Sample disc = Disc.Value;
        SparseAnalysis analysis = SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y);
        ParallelPlan plan = analysis.Plan;
        int[] jobs = new int[analysis.Tree.Count];
        foreach (int root in plan.Roots)
        {
            for (int t = plan.First[root]; t <= root; t++)
            {
                jobs[t]++;
            }
        }
        Assert.All(Enumerable.Range(0, jobs.Length), t => Assert.Equal(1, jobs[t] + (plan.IsAbove[t] ? 1 : 0)));
    }

    [Fact]
    public void Threads_refuse_the_same_pivot_as_one()
    {
        Sample disc = Disc.Value;
        SparseAnalysis analysis = SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y);
        double[] values = [.. disc.Values];
        for (int i = 100; i < disc.Size; i += 1000)
        {
            values[Samples.Place(disc.Pattern, i, i)] = -1;
        }
        PivotException one = Assert.Throws<PivotException>(() => new SparseLu(analysis).Factor(values));
        PivotException many = Assert.Throws<PivotException>(() => new SparseLu(analysis).Factor(values, 3));
        Assert.Equal((one.Unknown, one.Pivot), (many.Unknown, many.Pivot));
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    public void A_cancelled_factorisation_ends_and_its_factor_is_refused(int degree)
    {
        Sample disc = Disc.Value;
        var lu = new SparseLu(SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y));
        lu.Factor(disc.Values, degree);
        using var cancel = new CancellationTokenSource();
        // Until the moment of cancelling the factorisation is repeated. From a thread of its own: a timer needs a free thread of the pool, and all of them may wait or work here.
        var hand = new Thread(() =>
        {
            Thread.Sleep(30);
            cancel.Cancel();
        });
        hand.Start();
        Assert.ThrowsAny<OperationCanceledException>(() =>
        {
            for (int k = 0; k < 100_000; k++)
            {
                lu.Factor(disc.Values, degree, cancel.Token);
            }
        });
        hand.Join();
        Assert.Throws<InvalidOperationException>(() => lu.Solve(new double[disc.Size], new double[disc.Size]));
    }

    // How long it takes where the work is large is in benchmarks/performance.md: a clock would judge the machine here.
    [Theory]
    [InlineData("factor")]
    [InlineData("factor, symmetric")]
    [InlineData("analyse")]
    public void Cancelled_work_stops_and_can_be_done_again(string work)
    {
        Sample disc = Disc.Value;
        SparseAnalysis analysis = SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y);
        bool symmetric = work.EndsWith("symmetric", StringComparison.Ordinal);
        var lu = new SparseLu(analysis, symmetric);
        double[] values = symmetric ? disc.Symmetrised().Values : disc.Values;
        lu.Factor(values);
        using var cancel = new CancellationTokenSource();
        cancel.Cancel();
        Assert.Throws<OperationCanceledException>(() =>
        {
            if (work == "analyse")
            {
                SparseAnalysis.Analyse(disc.Pattern, disc.X, disc.Y, cancel.Token);
            }
            else
            {
                lu.Factor(values, cancel.Token);
            }
        });
        lu.Factor(values);
        lu.Solve(new double[disc.Size], new double[disc.Size]);
    }
}
