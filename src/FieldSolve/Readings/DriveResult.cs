using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;

namespace FieldSolve.Readings;

/// <summary>One level of the mesh refinement.</summary>
/// <param name="Level">Counted from 0.</param>
/// <param name="Triangles">Triangles of the mesh the readings come from.</param>
/// <param name="Unknowns">Unknowns on it.</param>
/// <param name="Estimates">Per wiring and pair: name, value at the largest current and its estimated error, V.</param>
public sealed record RefinementLevel(int Level, int Triangles, int Unknowns, IReadOnlyList<LevelEstimate> Estimates);

/// <summary>A reading and its estimated error at one level.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Pair">Name.</param>
/// <param name="Part">"value" or "even".</param>
/// <param name="Value">With the correction, V.</param>
/// <param name="Error">What the correction may miss, V.</param>
/// <param name="Wanted">V.</param>
public sealed record LevelEstimate(string Wiring, string Pair, string Part, double Value, double Error, double Wanted)
{
    /// <summary>What the mesh lacked and was added: the estimated error of the uncorrected value, V.</summary>
    public double Correction { get; init; }
}

/// <summary>Wall time of a stage.</summary>
/// <param name="Name">For example "mesh", "factor", "solve".</param>
/// <param name="Seconds">Wall time.</param>
public sealed record StageTime(string Name, double Seconds);

/// <summary>Counts of the numerical work.</summary>
/// <param name="Unknowns">Unknowns of the finest mesh.</param>
/// <param name="Triangles">Triangles of the finest mesh.</param>
/// <param name="FactorNonZeros">Stored entries of its factors L and U.</param>
/// <param name="Factorisations">Numeric factorisations in all.</param>
/// <param name="Solves">Forward and transposed solves in all.</param>
/// <param name="NewtonSteps">Newton steps in all.</param>
/// <param name="LargestResidual">Largest relative residual at the end of a Newton iteration.</param>
public sealed record SolverFigures(
    int Unknowns, int Triangles, long FactorNonZeros, int Factorisations, int Solves, int NewtonSteps, double LargestResidual);

/// <summary>Numerical work for one wiring at one current, on both meshes.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Current">A.</param>
/// <param name="Factorisations">Numeric factorisations.</param>
/// <param name="Solves">Forward and backward substitutions.</param>
public sealed record PointWork(string Wiring, double Current, int Factorisations, int Solves);

/// <summary>What a drive produced.</summary>
public sealed record DriveResult
{
    /// <summary>The device.</summary>
    public required SheetDevice Device { get; init; }

    /// <summary>Rows in the order of wirings, then currents.</summary>
    public required IReadOnlyList<CurveRow> Rows { get; init; }

    /// <summary>Rows at the reversed currents, in the same order; empty when one sign was solved.</summary>
    public required IReadOnlyList<CurveRow> ReversedRows { get; init; }

    /// <summary>One per wiring.</summary>
    public required IReadOnlyList<WiringSummary> Summaries { get; init; }

    /// <summary>Maps that were asked for (at least the last current of each wiring when pictures are wanted).</summary>
    public required IReadOnlyList<FieldMap> Maps { get; init; }

    /// <summary>Potentials for the live maps of the report, by wiring and then current; empty when no pictures were asked for.</summary>
    public IReadOnlyList<PotentialFrame> Frames { get; init; } = [];

    /// <summary>The mesh (before the last uniform split) for pictures.</summary>
    public required TriangleMesh Mesh { get; init; }

    /// <summary>Refinement history.</summary>
    public required IReadOnlyList<RefinementLevel> Levels { get; init; }

    /// <summary>Cautions for the user, each one sentence or two.</summary>
    public required IReadOnlyList<string> Cautions { get; init; }

    /// <summary>Warnings about the computation, each one sentence or two.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Counts of the numerical work.</summary>
    public required SolverFigures Figures { get; init; }

    /// <summary>Work per wiring and current, in the order of the rows, each sign by itself.</summary>
    public IReadOnlyList<PointWork> Points { get; init; } = [];

    /// <summary>Wall time per stage.</summary>
    public required IReadOnlyList<StageTime> Stages { get; init; }

    /// <summary>True when the run was cancelled; the rows are those that were finished.</summary>
    public bool Cancelled { get; init; }

    /// <summary>True when every row is ok.</summary>
    public bool AllOk => Rows.All(r => r.Status == RowStatus.Ok);
}
