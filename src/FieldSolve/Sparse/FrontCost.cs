namespace FieldSolve.Sparse;

/// <summary>Model of the time one front takes, for the decision which supernodes to merge.</summary>
internal static class FrontCost
{
    /// <summary>Nanoseconds, fitted on one current core; only ratios matter. Zeros count a little more than their time, for their room.</summary>
    /// <param name="width">Steps eliminated in the front.</param>
    /// <param name="height">Order of the front.</param>
    public static double Of(int width, int height)
    {
        double s = width, m = height + 4, r = height - width + 4;
        return 100 + 4 * m + 2 * s * m + (0.9 + 0.05 * s) * r * r + 0.07 * s * s * m;
    }
}
