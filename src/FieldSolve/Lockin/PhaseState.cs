using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>The steady state of a wiring at the current of one phase, on the coarse mesh and, where wanted, on the fine one.</summary>
internal sealed record PhaseState
{
    /// <summary>A.</summary>
    public required double Current { get; init; }

    /// <summary>Potentials on the coarse mesh, V.</summary>
    public required double[] Coarse { get; init; }

    /// <summary>Readings on the coarse mesh, V.</summary>
    public required double[] CoarseValues { get; init; }

    /// <summary>How the solves ended.</summary>
    public required NewtonOutcome Outcome { get; init; }

    /// <summary>Potentials on the fine mesh, V; empty where it was not solved.</summary>
    public double[] Fine { get; init; } = [];

    /// <summary>Readings on the fine mesh, V.</summary>
    public double[] FineValues { get; init; } = [];

    /// <summary>Fine residual of the coarse solution, A; empty where errors are not measured.</summary>
    public double[] Residual { get; init; } = [];

    /// <summary>Influence of the law's guard on each reading, V.</summary>
    public double[] GuardShare { get; init; } = [];

    /// <summary>Where the law was left.</summary>
    public LawExit? Exit { get; init; }

    /// <summary>Largest |K| and E.K.</summary>
    public (double SheetCurrent, double Power) Peak { get; init; }

    /// <summary>The state at another current of a sheet for which it is proportional (a linear law, or the opposite sign of an odd one).</summary>
    public PhaseState Times(double factor) => this with
    {
        Current = factor * Current,
        Coarse = Scaled(Coarse, factor),
        CoarseValues = Scaled(CoarseValues, factor),
        Outcome = Outcome with { Steps = 0, Factorisations = 0, Solves = 0 },
        Fine = Scaled(Fine, factor),
        FineValues = Scaled(FineValues, factor),
        Residual = Scaled(Residual, factor),
        GuardShare = Scaled(GuardShare, factor),
        Peak = (Math.Abs(factor) * Peak.SheetCurrent, factor * factor * Peak.Power),
    };

    private static double[] Scaled(double[] values, double factor) => [.. values.Select(v => factor * v)];
}
