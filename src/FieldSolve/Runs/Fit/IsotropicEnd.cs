using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Laws;
using MathNet.Numerics.LinearAlgebra.Double;
using MathNet.Numerics.LinearAlgebra.Factorization;

namespace FieldSolve.Runs;

/// <summary>
/// What the data say of a, b and the axis where the sheet may be isotropic. There the three are polar coordinates at their origin: the axis has no derivative, and whether a
/// and b can be told apart depends on where the axis happens to stand. The two parts of the traceless tensor, (a - b)/2 cos 2t and (a - b)/2 sin 2t, have derivatives everywhere:
/// where one of them is open, the fit is moved to a = b with the axis along it, so that the derivatives say what is open and what is not. Ohmic laws only.
/// </summary>
internal static class IsotropicEnd
{
    // Of the sum of squares, by which a = b may be worse than where the fit ended: one standard deviation.
    private const double MostRise = 1;

    /// <summary>The same end, or the one at a = b with its axis along the open part, and that axis in rad.</summary>
    public static (FitEnd End, double? Axis) Of(FitProblem problem, FitModel model, FitTask task, FitEnd end, CancellationToken cancel)
    {
        List<FitParameter> q = [.. problem.Parameters];
        int a = q.FindIndex(x => x.Key == "a"), b = q.FindIndex(x => x.Key == "b"), axis = q.FindIndex(x => x.Kind.Effect == CauseEffect.Axis);
        if (!problem.Proportional || a < 0 || b < 0 || axis < 0 || q[a].PriorSigma is not null || q[b].PriorSigma is not null || q[axis].PriorSigma is not null)
        {
            return (end, null);
        }

        double mean = Math.Sqrt(end.P[a] * end.P[b]);
        double[] At(double turn)
        {
            double[] p = [.. end.P];
            (p[a], p[b], p[axis]) = (mean, mean, turn);
            return p;
        }

        double[] along = At(end.P[axis]), askew = At(end.P[axis] + (Math.PI / 4));
        if (!Inside(task, along) || model.Values(along, cancel) is not { } values || LeastSquares.Objective(task, along, values) > end.Objective + MostRise)
        {
            return (end, null);
        }

        double[,] first = model.Jacobian(along, cancel), second = model.Jacobian(askew, cancel);
        double turn = end.P[axis] + (Open(problem, task, end, first, second, (a, b, axis), mean) is { } angle ? angle / 2 : double.NaN);
        double[] to = [.. new[] { 0, 1, -1 }.Select(k => At(turn + (k * Math.PI / 2))).Where(p => Inside(task, p)).OrderBy(p => Math.Abs(p[axis])).FirstOrDefault() ?? along];
        if (!double.IsFinite(turn) || to == along || model.Values(to, cancel) is not { } there)
        {
            // The model's last values and guesses are those of the end again.
            _ = model.Jacobian(end.P, cancel);
            return (end, null);
        }

        double[,] jacobian = model.Jacobian(to, cancel);
        return (
            end with
            {
                P = to,
                Values = there,
                Jacobian = jacobian,
                Objective = LeastSquares.Objective(task, to, there),
                Weights = [.. there.Select((v, i) => task.Weight((task.Value[i] - v) / task.Sigma[i]))],
            },
            to[axis]);
    }

    /// <summary>Adds to the words of a direction along a against b which anisotropy it is that no reading sees.</summary>
    public static IReadOnlyList<FitDirection> Explain(IReadOnlyList<FitDirection> directions, IReadOnlyList<FitParameter> parameters, double axis)
    {
        int a = parameters.ToList().FindIndex(x => x.Key == "a"), b = parameters.ToList().FindIndex(x => x.Key == "b");
        double degrees = axis * 180 / Math.PI;
        degrees = Math.Round(degrees - (90 * Math.Floor((degrees + 0.05) / 90)), 1) + 0.0;
        string words = string.Create(
            CultureInfo.InvariantCulture,
            $"; isotropic or not, with its axis along {Math.Max(0, degrees):0.#} or {Math.Max(0, degrees) + 90:0.#} deg the sheet gives the same readings");
        return [.. directions.Select(d => !d.Determined && d.Direction[a] * d.Direction[b] < 0 && Math.Abs(d.Direction[a]) > 0.5 ? d with { Words = d.Words + words } : d)];
    }

    private static bool Inside(FitTask task, double[] p) => p.Select((v, j) => v >= task.Least[j] && v <= task.Most[j]).All(x => x);

    // Angle in the plane of the two parts along which the data know least, if that is too little for a number; null where both are known.
    private static double? Open(FitProblem problem, FitTask task, FitEnd end, double[,] first, double[,] second, (int A, int B, int Axis) at, double mean)
    {
        int n = task.Sigma.Length, m = problem.Parameters.Count;
        double[] scales = FitScales.Of(problem.DeviceAt(end.P), problem.Parameters, end.P, problem.Data.Max(d => Math.Abs(d.Value)));

        // The column of a becomes the mean, that of b the part along the axis, that of the axis the part askew; per logarithm.
        var s = DenseMatrix.Create(n + m, m, (i, j) =>
        {
            if (i >= n)
            {
                return i - n == j ? (problem.Parameters[j].PriorSigma is { } prior ? scales[j] / prior : 1 / Identifiability.NoInformation) : 0;
            }

            double slope = j == at.A ? mean * (first[i, at.A] + first[i, at.B])
                : j == at.B ? mean * (first[i, at.A] - first[i, at.B])
                : j == at.Axis ? mean * (second[i, at.A] - second[i, at.B])
                : scales[j] * first[i, j];
            return Math.Sqrt(end.Weights[i]) * slope / task.Sigma[i];
        });
        var inverse = s.QR(QRMethod.Thin).R.Inverse();
        var covariance = inverse * inverse.Transpose();
        double xx = covariance[at.B, at.B], yy = covariance[at.Axis, at.Axis], xy = covariance[at.B, at.Axis];
        double largest = ((xx + yy) / 2) + double.Hypot((xx - yy) / 2, xy);

        // With a = b by its own scale the deviation of ln a is that of the part itself.
        return Math.Sqrt(largest) > Identifiability.MostDeviation ? 0.5 * Math.Atan2(2 * xy, xx - yy) : null;
    }
}
