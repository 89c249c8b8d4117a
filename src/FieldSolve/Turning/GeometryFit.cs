using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Solving;

namespace FieldSolve.Turning;

/// <summary>
/// The tensor and the second-order elements that make this device, with its own shape and contacts, read what it reads: Gauss and Newton's iteration on
/// the finite-element response, with exact derivatives from the adjoints (J. E. Dennis, R. B. Schnabel, Numerical Methods for Unconstrained Optimization and Nonlinear
/// Equations (1983), chapter 10).
/// </summary>
internal sealed class GeometryFit
{
    private const int MostSteps = 25;
    private const int MostHalvings = 8;
    private const double SmallStep = 1e-8;

    private readonly SheetDevice device;
    private readonly FieldLevel level;
    private readonly IReadOnlyList<AngleDatum> data;
    private readonly double[][] basis;   // matrices of the three symmetric unit tensors and of the Hall part
    private readonly CancellationToken cancel;

    /// <summary>Prepares the response.</summary>
    /// <param name="device">Contacts, and the axis that labels a and b.</param>
    /// <param name="level">Any law; the mesh is what counts.</param>
    /// <param name="data">The readings.</param>
    /// <param name="cancel">Checked at every step.</param>
    public GeometryFit(SheetDevice device, FieldLevel level, IReadOnlyList<AngleDatum> data, CancellationToken cancel)
    {
        (this.device, this.level, this.data, this.cancel) = (device, level, data, cancel);
        basis = Basis(level.Equations);
    }

    /// <summary>The tensor; null when the data do not suffice or the iteration fails.</summary>
    /// <param name="start">A first guess.</param>
    public FittedTensor? Linear(PrincipalSheet start)
    {
        double[] at = Unknowns(start);
        Response here = Evaluate(at);
        LeastSquares? fit = null;
        for (int step = 0; step < MostSteps; step++)
        {
            cancel.ThrowIfCancellationRequested();
            fit = LeastSquares.Solve(here.Rows, here.Rest, here.Bars);
            if (fit is not { IsFull: true })
            {
                return null;
            }

            double size = fit.Value.Max(Math.Abs);
            if (size < SmallStep)
            {
                break;
            }

            // Unknowns are logarithms and ratios: steps of more than one would leave the range of the expansion.
            double damp = Math.Min(1, 1 / size);
            Response? next = null;
            for (int k = 0; k < MostHalvings; k++, damp /= 2)
            {
                double[] trial = [.. at.Select((x, i) => x + (damp * fit.Value[i]))];
                Response there = Evaluate(trial);
                if (there.SquaredMisfit < here.SquaredMisfit)
                {
                    (at, next) = (trial, there);
                    break;
                }
            }

            if (next is null)
            {
                // No way down: rounding has been reached.
                break;
            }

            here = next;
        }

        // The last row of steps tells errors in the unknowns; its misfit is that of the data at the solution.
        return TensorErrors.Of(LeastSquares.Solve(here.Rows, here.Rest, here.Bars)!, at, device.Axis, Sheet) with
        {
            Misfit = Math.Sqrt(here.SquaredMisfit / here.Rest.Count),
            Signal = Math.Sqrt(here.SquaredSignal / here.Rest.Count),
        };
    }

    /// <summary>
    /// The second-order elements. To leading order the even part is the integral of K2(E, E) . grad z over the sheet, E of one ampere and z the adjoint of the
    /// reading, both at zero field; the integral comes from the residual of a law that has one element only.
    /// </summary>
    public FittedSecondOrder? Second(PrincipalSheet sheet)
    {
        var responses = new (double[] Along, double[] Across)[data.Count];
        ForEachDatum(sheet, (index, datum, at) =>
        {
            double[] u = at.UnitSolution(datum.Wiring.Source, datum.Wiring.Drain), minus = [.. u.Select(v => -v)];
            double[]? along = Adjoint(at, datum.Along is null ? null : datum.Wiring.Along), across = Adjoint(at, datum.Across is null ? null : datum.Wiring.Across);
            double[] forward = new double[u.Length], back = new double[u.Length];
            (double[] Along, double[] Across) response = (new double[6], new double[6]);
            for (int k = 0; k < 6; k++)
            {
                double[] d = new double[6];
                d[k] = 1;
                SheetEquations one = at.Equations.WithLaw(new(
                    new QuadraticLaw(1, 1, 0, new(d[0], d[1], d[2], d[3], d[4], d[5])), sheet.Axis + datum.Turn));
                one.Residual(u, 0, 0, 0, forward);
                one.Residual(minus, 0, 0, 0, back);
                for (int i = 0; i < forward.Length; i++)
                {
                    // The residual holds minus the integral; the part odd in E cancels.
                    double even = -(forward[i] + back[i]) / 2;
                    response.Along[k] += along is null ? 0 : along[i] * even;
                    response.Across[k] += across is null ? 0 : across[i] * even;
                }
            }

            responses[index] = response;
        });
        return SecondOrderFit.Solve(data, (k, isAlong) => isAlong ? responses[k].Along : responses[k].Across);
    }

    private static double[]? Adjoint(FieldLevel at, Pair? pair) => pair is null ? null : at.Adjoint(at.ReadingVector(pair.Plus, pair.Minus));

    // ln of the geometric mean conductance; half the logarithm of the ratio as a vector at twice the axis angle; Hall part over the mean.
    private static double[] Unknowns(PrincipalSheet sheet)
    {
        double mean = Math.Sqrt(sheet.A * sheet.B), half = 0.5 * Math.Log(sheet.A / sheet.B);
        return [Math.Log(mean), half * Math.Cos(2 * sheet.Axis), half * Math.Sin(2 * sheet.Axis), sheet.Hall / mean];
    }

    private PrincipalSheet Sheet(double[] at) => PrincipalSheet.Of(Tensor(at), device.Axis);

    // g exp(p Z + q X) with the traceless matrices Z, X: positive definite for any p, q.
    private static Tensor2 Tensor(double[] at)
    {
        double g = Math.Exp(at[0]), m = Math.Sqrt((at[1] * at[1]) + (at[2] * at[2])), share = m > 0 ? Math.Sinh(m) / m : 1;
        double z = g * share * at[1], x = g * share * at[2], mean = g * Math.Cosh(m), hall = g * at[3];
        return new(mean + z, x + hall, x - hall, mean - z);
    }

    // Values of the matrices that belong to dK/dE = xx, yy, xy symmetric, xy antisymmetric; metal cancels in the differences.
    private static double[][] Basis(SheetEquations equations)
    {
        double[] Matrix(double a, double b, double hall, double axis)
        {
            double[] values = new double[equations.Space.Pattern.Count + 1];
            equations.WithLaw(new(new OhmicLaw(a, b, hall), axis)).Jacobian(new double[equations.Length], values);
            return values;
        }

        static double[] Less(double[] a, double[] b, double factor) => [.. a.Zip(b, (x, y) => factor * (x - y))];
        double[] one = Matrix(1, 1, 0, 0);
        return
        [
            Less(Matrix(2, 1, 0, 0), one, 1), Less(Matrix(1, 2, 0, 0), one, 1),
            Less(Matrix(2, 1, 0, Math.PI / 4), Matrix(1.5, 1.5, 0, 0), 2), Less(Matrix(1, 1, 1, 0), one, 1),
        ];
    }

    private sealed record Response(List<double[]> Rows, List<double> Rest, List<double> Bars, double SquaredMisfit, double SquaredSignal);

    private Response Evaluate(double[] at)
    {
        // dV/dt = -z . (dJ/dt) u for each parameter of the tensor.
        double[][] slope = [.. at.Select((_, k) =>
        {
            const double Step = 1e-5;
            double[] up = [.. at], down = [.. at];
            up[k] += Step;
            down[k] -= Step;
            Tensor2 a = Tensor(up), b = Tensor(down);
            return new[]
            {
                (a.Aa - b.Aa) / (2 * Step), (a.Bb - b.Bb) / (2 * Step), (a.Ab + a.Ba - b.Ab - b.Ba) / (4 * Step), (a.Ab - a.Ba - b.Ab + b.Ba) / (4 * Step),
            };
        })];
        var found = new (double Value, double[] Row)?[data.Count, 2];
        ForEachDatum(Sheet(at), (index, datum, here) =>
        {
            int n = here.Space.Size;
            double[] u = here.UnitSolution(datum.Wiring.Source, datum.Wiring.Drain);
            double[][] products = [.. basis.Select(values =>
            {
                double[] y = new double[n];
                Sparse.SparseProduct.Multiply(here.Space.Pattern, values.AsSpan(0, here.Space.Pattern.Count), u.AsSpan(0, n), y);
                return y;
            })];
            (double s, double c) = Math.SinCos(2 * datum.Turn);
            for (int p = 0; p < 2; p++)
            {
                Pair? pair = p == 0 ? datum.Along is null ? null : datum.Wiring.Along : datum.Across is null ? null : datum.Wiring.Across;
                if (pair is null)
                {
                    continue;
                }

                double[] z = Adjoint(here, pair)!;
                double[] by = [.. products.Select(y => -Dot(z, y, n))];

                // A tensor turned by t: its traceless symmetric part turns by 2t.
                double[] turned = [.. slope.Select(t =>
                {
                    double mean = (t[0] + t[1]) / 2, half = (t[0] - t[1]) / 2, off = t[2];
                    double h = (c * half) - (s * off), o = (s * half) + (c * off);
                    return ((mean + h) * by[0]) + ((mean - h) * by[1]) + (o * by[2]) + (t[3] * by[3]);
                })];
                found[index, p] = (u[here.Space.UnknownOf(pair.Plus)] - u[here.Space.UnknownOf(pair.Minus)], turned);
            }
        });
        Response sum = new([], [], [], 0, 0);
        for (int k = 0; k < data.Count; k++)
        {
            for (int p = 0; p < 2; p++)
            {
                if (found[k, p] is { } f && (p == 0 ? data[k].Along : data[k].Across) is { } reading)
                {
                    double rest = reading.Odd - f.Value;
                    sum.Rows.Add(f.Row);
                    sum.Rest.Add(rest);
                    sum.Bars.Add(reading.OddError);
                    sum = sum with { SquaredMisfit = sum.SquaredMisfit + (rest * rest), SquaredSignal = sum.SquaredSignal + (reading.Odd * reading.Odd) };
                }
            }
        }

        return sum;
    }

    // Data that share a turn share a factor.
    private void ForEachDatum(PrincipalSheet sheet, Action<int, AngleDatum, FieldLevel> work)
    {
        var options = new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount };
        (int Index, AngleDatum Datum)[][] groups = [.. data.Select((d, k) => (k, d)).GroupBy(p => p.d.Turn).Select(g => g.ToArray())];
        Parallel.ForEach(groups, options, group =>
        {
            FieldLevel at = level.WithLaw(sheet.Law(group[0].Datum.Turn), cancel);
            Parallel.ForEach(group, options, p => work(p.Index, p.Datum, at));
        });
    }

    private static double Dot(double[] a, double[] b, int n)
    {
        double sum = 0;
        for (int i = 0; i < n; i++)
        {
            sum += a[i] * b[i];
        }

        return sum;
    }
}
