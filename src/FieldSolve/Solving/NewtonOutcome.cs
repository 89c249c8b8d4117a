namespace FieldSolve.Solving;

/// <summary>How a solve ended.</summary>
/// <param name="Converged">The relative residual reached its tolerance.</param>
/// <param name="Steps">Steps taken, with a new factor or with a kept one.</param>
/// <param name="RelativeResidual">2-norm of the residual over the current fed in.</param>
/// <param name="Factorisations">Jacobians factored.</param>
/// <param name="Solves">Forward and backward substitutions.</param>
/// <param name="Refusal">Why the law could not be evaluated, if that is what stopped the solve.</param>
public readonly record struct NewtonOutcome(
    bool Converged, int Steps, double RelativeResidual, int Factorisations, int Solves, string? Refusal)
{
    /// <summary>Outcome of two solves one after the other; the last one decides how it ended.</summary>
    public NewtonOutcome Then(NewtonOutcome next) => new(
        next.Converged, Steps + next.Steps, next.RelativeResidual, Factorisations + next.Factorisations, Solves + next.Solves, next.Refusal);
}
