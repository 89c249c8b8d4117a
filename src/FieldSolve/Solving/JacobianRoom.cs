using FieldSolve.Sparse;

namespace FieldSolve.Solving;

/// <summary>Storage for one Jacobian and its factor, the largest pieces of memory of a solve.</summary>
/// <param name="Values">One per place of the pattern, and a scrap place behind.</param>
/// <param name="Factor">The factor.</param>
internal sealed record JacobianRoom(double[] Values, SparseLu Factor);
