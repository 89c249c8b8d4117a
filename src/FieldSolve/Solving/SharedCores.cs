using FieldSolve.Sparse;

namespace FieldSolve.Solving;

/// <summary>
/// Who gets the processors. Wirings and signs run side by side, one thread each; a large factorisation that runs while no other does takes all
/// processors. Results are the same bits either way.
/// </summary>
internal static class SharedCores
{
    /// <summary>Additions and multiplications from which on more threads are worth their room for work space.</summary>
    private const double WorthThreads = 3e8;

    // From here on every factor takes so much memory (some 1.2 GB for a million unknowns) that wirings and signs wait for each other.
    private const int Large = 250_000;

    private static int running;

    /// <summary>Whether factors are so large that memory decides what is done side by side.</summary>
    public static bool IsLarge(int unknowns) => unknowns > Large;

    /// <summary>How many wirings and signs are followed side by side.</summary>
    /// <param name="unknowns">Of the finest mesh.</param>
    public static int Jobs(int unknowns) => IsLarge(unknowns) ? 1 : Environment.ProcessorCount;

    /// <summary>Factors a matrix.</summary>
    /// <param name="factor">Where the factor goes.</param>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="PivotException">A pivot is not finite, not positive or negligible.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static void Factor(SparseLu factor, ReadOnlySpan<double> values, CancellationToken cancel)
    {
        bool alone = Interlocked.Increment(ref running) == 1;
        try
        {
            factor.Factor(values, alone && factor.Analysis.Flops > WorthThreads ? Environment.ProcessorCount : 1, cancel);
        }
        finally
        {
            Interlocked.Decrement(ref running);
        }
    }
}
