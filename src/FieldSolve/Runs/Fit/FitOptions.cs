namespace FieldSolve.Runs;

/// <summary>How a fit is run.</summary>
public sealed record FitOptions
{
    /// <summary>Outliers count less: the loss of Student's t with four degrees of freedom in place of squares.</summary>
    public bool Robust { get; init; }

    /// <summary>Axis angles to start from, spread over half a turn, when the axis is free.</summary>
    public int Starts { get; init; } = 4;

    /// <summary>How many readings to suggest next.</summary>
    public int Suggest { get; init; }

    /// <summary>
    /// What harmonics owe to charge over a gate; needed where the device has a gate and the data hold harmonics. The lock-in run knows it: <c>Lockin.GateMemory</c>.
    /// </summary>
    public ICycleMemory? Memory { get; init; }

    /// <summary>Intervals by profile likelihood for all parameters without a prior, not only for those that ask for one.</summary>
    public bool AllIntervals { get; init; }
}
