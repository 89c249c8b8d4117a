using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Sessions;

/// <summary>Faults that a layout may cause and that are told on the page instead of readings.</summary>
internal static class NoAnswer
{
    /// <summary>What to say, on one line; null for a fault of the program.</summary>
    public static string? Because(Exception e)
    {
        Exception cause = e is AggregateException many ? many.Flatten().InnerExceptions[0] : e;
        return cause is FieldSpaceException or MeshException or PivotException or LawRefusedException ? cause.Message.ReplaceLineEndings(" ") : null;
    }
}
