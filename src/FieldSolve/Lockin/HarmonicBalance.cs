using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>
/// The periodic state of a sheet over a gate, c dphi/dt + div K = 0 with a prescribed source current, at an even number of equally spaced phases. The
/// time derivative is that of the trigonometric interpolant (harmonic balance by collocation: geometric convergence, no start-up to wait for, and at low
/// frequency exactly the quasi-static states). The iteration solves harmonic by harmonic with the Jacobian averaged over the cycle,
/// (J + i k w C) x = residual, and combines its steps (<see cref="StepMixer"/>). K. S. Kundert, A. Sangiovanni-Vincentelli, IEEE Trans. CAD 5, 521 (1986).
/// </summary>
internal sealed class HarmonicBalance
{
    private const double Tolerance = 1e-10;
    private const int MostSweeps = 100;
    private const double Hopeless = 1e3;

    // Behind a large contact resistance the residual itself is rounded more than that.
    private const double Roundings = 10;

    // Factors are kept between sweeps up to this much memory; beyond it they are made anew.
    private const long MostKept = 800L << 20;

    private readonly ChargedSheet sheet;
    private readonly int source;
    private readonly int drain;
    private readonly double omega;
    private readonly int phases;
    private readonly int n;
    private readonly double[] jacobian;   // mean over the cycle
    private readonly SparseLu?[] kept;
    private readonly bool keep;

    /// <summary>Prepares the mean Jacobian over given states.</summary>
    public HarmonicBalance(ChargedSheet sheet, int source, int drain, double omega, IReadOnlyList<double[]> start)
    {
        (this.sheet, this.source, this.drain, this.omega) = (sheet, source, drain, omega);
        FieldLevel level = sheet.Level;
        phases = start.Count;
        n = level.Space.Size;
        jacobian = new double[level.Space.Pattern.Count + 1];
        double[] one = new double[jacobian.Length];
        foreach (double[] u in level.Equations.Law.IsLinear ? start.Take(1) : start)
        {
            level.Equations.Jacobian(u, one);
            for (int k = 0; k < one.Length; k++)
            {
                jacobian[k] += one[k] / (level.Equations.Law.IsLinear ? 1 : phases);
            }
        }

        kept = new SparseLu?[(phases / 2) + 1];
        keep = 0.5 * phases * sheet.Complex.MemoryBytes < MostKept;
    }

    /// <summary>Sweeps of the last solve.</summary>
    public int Sweeps { get; private set; }

    /// <summary>Residual of the last solve, relative to the current.</summary>
    public double RelativeResidual { get; private set; }

    /// <summary>Solves from the quasi-static states; false when the iteration fails.</summary>
    /// <param name="u">By phase: in, quasi-static potentials; out, the periodic state, V.</param>
    /// <param name="currents">By phase, A.</param>
    /// <param name="cancel">Checked at every sweep.</param>
    public bool Solve(double[][] u, IReadOnlyList<double> currents, CancellationToken cancel)
    {
        double scale = Math.Sqrt(currents.Sum(i => 2 * i * i) / phases);
        if (scale == 0)
        {
            return true;
        }

        double[,] derivative = CycleTransform.Derivative(phases);
        double[][] residual = [.. Enumerable.Range(0, phases).Select(_ => new double[n + 1])];
        double[] place = new double[phases * n], step = new double[place.Length], slope = new double[n + 1], scratch = new double[n];
        var mixer = new StepMixer(place.Length);
        double first = 0;
        for (Sweeps = 0; Sweeps < MostSweeps; Sweeps++)
        {
            cancel.ThrowIfCancellationRequested();
            double squares = 0;
            for (int m = 0; m < phases; m++)
            {
                try
                {
                    sheet.Level.Equations.Residual(u[m], source, drain, currents[m], residual[m]);
                }
                catch (LawRefusedException)
                {
                    return false;
                }

                Array.Clear(slope);
                for (int l = 0; l < phases; l++)
                {
                    double d = derivative[m, l];
                    for (int i = 0; i < n && d != 0; i++)
                    {
                        slope[i] += d * u[l][i];
                    }
                }

                sheet.AddCharge(omega, slope, residual[m], scratch);
                for (int i = 0; i < n; i++)
                {
                    squares += residual[m][i] * residual[m][i];
                }
            }

            double norm = Math.Sqrt(squares / phases) / scale;
            RelativeResidual = norm;
            first = Sweeps == 0 ? norm : first;
            if (norm <= Math.Max(Tolerance, Roundings * u.Max(v => sheet.Level.ResidualRounding(v)) / scale))
            {
                return true;
            }

            if (!double.IsFinite(norm) || norm > Hopeless * Math.Max(first, 1))
            {
                return false;
            }

            Steps(residual, step, norm <= 10 * Tolerance ? 0 : 0.02 * Tolerance * scale, cancel);
            for (int m = 0; m < phases; m++)
            {
                u[m].AsSpan(0, n).CopyTo(place.AsSpan(m * n, n));
            }

            mixer.Mix(place, step);
            for (int m = 0; m < phases; m++)
            {
                for (int i = 0; i < n; i++)
                {
                    u[m][i] += step[(m * n) + i];
                }
            }
        }

        return false;
    }

    // step = -(inverse of the mean linearisation) residual, harmonic by harmonic.
    private void Steps(double[][] residual, double[] step, double negligible, CancellationToken cancel)
    {
        Array.Clear(step);
        double[] real = new double[n], imaginary = new double[n];
        for (int h = 0; h <= phases / 2; h++)
        {
            // sum over phases of residual exp(-i h theta)
            Array.Clear(real);
            Array.Clear(imaginary);
            for (int m = 0; m < phases; m++)
            {
                (double s, double c) = CycleTransform.At(h, m, phases);
                for (int i = 0; i < n; i++)
                {
                    real[i] += c * residual[m][i] / phases;
                    imaginary[i] -= s * residual[m][i] / phases;
                }
            }

            double size = 0;
            for (int i = 0; i < n; i++)
            {
                size += (real[i] * real[i]) + (imaginary[i] * imaginary[i]);
            }

            if (Math.Sqrt(size) <= negligible)
            {
                continue;
            }

            bool alone = h == 0 || 2 * h == phases;
            Solve(h, alone, real, imaginary, cancel);
            double twice = alone ? 1 : 2;
            for (int m = 0; m < phases; m++)
            {
                (double s, double c) = CycleTransform.At(h, m, phases);
                for (int i = 0; i < n; i++)
                {
                    step[(m * n) + i] -= twice * ((c * real[i]) - (s * imaginary[i]));
                }
            }
        }
    }

    // Replaces a harmonic of the residual by its solution. The mean and the highest harmonic (whose derivative vanishes at the phases) are real.
    private void Solve(int h, bool alone, double[] real, double[] imaginary, CancellationToken cancel)
    {
        SparseLu lu = Factor(h, alone, cancel);
        if (alone)
        {
            lu.Solve(real.AsSpan().ToArray(), real);
            Array.Clear(imaginary);
            return;
        }

        double[] b = new double[2 * n], x = new double[2 * n];
        for (int i = 0; i < n; i++)
        {
            (b[2 * i], b[(2 * i) + 1]) = (real[i], imaginary[i]);
        }

        lu.Solve(b, x);
        for (int i = 0; i < n; i++)
        {
            (real[i], imaginary[i]) = (x[2 * i], x[(2 * i) + 1]);
        }
    }

    private SparseLu Factor(int h, bool alone, CancellationToken cancel)
    {
        int slot = alone ? 0 : h;
        if (kept[slot] is { } known)
        {
            return known;
        }

        var lu = new SparseLu(alone ? sheet.Level.Analysis : sheet.Complex);
        lu.Factor(alone ? jacobian.AsSpan(0, jacobian.Length - 1) : sheet.Interleaved(jacobian, h * omega), cancel);
        kept[slot] = keep || alone ? lu : null;
        return lu;
    }
}
