namespace FieldSolve.Benchmarks.Native;

/// <summary>How times grow with the size of a problem, from the smallest to the largest that was run.</summary>
internal sealed class Growth
{
    private readonly List<(string Work, double Size, double Seconds, double? Wanted)> runs = [];

    public void Add(string work, double size, double seconds, double? wanted) => runs.Add((work, size, seconds, wanted));

    /// <summary>Prints the exponents of time ~ size^p.</summary>
    public void Tell(ComparisonTable table)
    {
        foreach (var work in runs.GroupBy(r => r.Work))
        {
            var small = work.MinBy(r => r.Size);
            var large = work.MaxBy(r => r.Size);
            if (large.Size > 2 * small.Size)
            {
                table.Number(
                    ComparisonTable.Text($"{small.Size:F0} to {large.Size:F0}"), $"exponent of growth, {work.Key}", small.Wanted,
                    Math.Log(large.Seconds / small.Seconds) / Math.Log(large.Size / small.Size));
            }
        }
    }
}
