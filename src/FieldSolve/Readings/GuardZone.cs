using FieldSolve.Fields;
using FieldSolve.Laws;

namespace FieldSolve.Readings;

/// <summary>
/// The zone where a state drives the law beyond its guard, and what the guard does there to each reading: the integral of
/// (K_pure - K_guarded).grad z with the adjoint z (R. Becker, R. Rannacher, Acta Numerica 10, 1 (2001): the model error weighted with the dual).
/// </summary>
/// <param name="Exit">Place, field and size; null when the law was not left.</param>
/// <param name="Share">Signed influence on each reading, V.</param>
internal sealed record GuardZone(LawExit? Exit, double[] Share)
{
    /// <summary>Measures the zone of a state.</summary>
    /// <param name="equations">Equations of the fine mesh.</param>
    /// <param name="u">Potentials, V.</param>
    /// <param name="adjoints">Adjoint of each reading, ohm.</param>
    public static GuardZone Measure(SheetEquations equations, ReadOnlySpan<double> u, IReadOnlyList<double[]> adjoints)
    {
        double[] share = new double[adjoints.Count];
        if (equations.Law.Guard is not { } guard)
        {
            return new(null, share);
        }

        double area = 0, strongest = 0, atX = 0, atY = 0;
        var scratch = new PointScratch();
        equations.VisitStrongField(u, guard.From, (triangle, point, ex, ey, weight) =>
        {
            area += weight;
            double field = Math.Sqrt((ex * ex) + (ey * ey));
            if (field > strongest)
            {
                strongest = field;
                (atX, atY) = PointGradient.Place(equations.Space, triangle, point);
            }

            (double dx, double dy) = scratch.Difference(equations.Law, ex, ey);
            for (int k = 0; k < adjoints.Count; k++)
            {
                (double zx, double zy) = PointGradient.Of(equations.Space, triangle, point, adjoints[k]);
                share[k] += weight * ((dx * zx) + (dy * zy));
            }
        });
        return area == 0
            ? new(null, share)
            : new(new LawExit(atX, atY, strongest, guard.From, Math.Sqrt(area / Math.PI)), share);
    }

    private sealed class PointScratch
    {
        private readonly double[] ex = new double[1], ey = new double[1], kx = new double[1], ky = new double[1], px = new double[1], py = new double[1];

        public (double X, double Y) Difference(LabLaw law, double fieldX, double fieldY)
        {
            (ex[0], ey[0]) = (fieldX, fieldY);
            law.Evaluate(ex, ey, kx, ky);
            law.EvaluatePure(ex, ey, px, py);
            return (px[0] - kx[0], py[0] - ky[0]);
        }
    }
}
