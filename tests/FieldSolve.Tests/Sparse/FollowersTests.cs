using FieldSolve.Sparse;

namespace FieldSolve.Tests.SparseTests;

public class FollowersTests
{
    [Fact]
    public void Middles_of_edges_follow_the_corners()
    {
        Sample disc = DiscWorkload.Build(5_000);
        int[] number = [.. Enumerable.Range(0, disc.Size)];
        int[] followers = Followers.Find(disc.Pattern, number, default);
        Assert.InRange(followers.Length, 0.7 * disc.Size, 0.8 * disc.Size);
        foreach (int i in followers)
        {
            HashSet<int> own = Row(i);
            Assert.Contains(own, j => number[j] != Followers.Mark && own.IsSubsetOf(Row(j)));
        }

        HashSet<int> Row(int i) => [.. disc.Pattern.Column[disc.Pattern.Start[i]..disc.Pattern.Start[i + 1]]];
    }

    [Fact]
    public void A_graph_without_followers_keeps_all_rows()
    {
        Sample sample = Samples.Random(300, 3, 1);
        int[] number = [.. Enumerable.Range(0, 300)];
        Assert.Empty(Followers.Find(sample.Pattern, number, default));
        Assert.Equal(Enumerable.Range(0, 300), number);
    }

    [Fact]
    public void Order_is_a_permutation_for_any_graph()
    {
        foreach (Sample sample in new[] { DiscWorkload.Build(3_000), Samples.Mesh(20, hub: true), Samples.Random(700, 1, 2, denseRows: 3), Samples.Random(40, 0, 3) })
        {
            int[] order = DissectionOrdering.Order(sample.Pattern, sample.X, sample.Y, CancellationToken.None);
            Assert.Equal(Enumerable.Range(0, sample.Size), order.Order());
        }
    }
}
