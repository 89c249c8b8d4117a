using System.Globalization;
using FieldSolve.Bands;

namespace FieldSolve.Runs;

/// <summary>From a band model, or from a measured profile, to a sheet law.</summary>
public static class BandsRun
{
    /// <summary>Residual of the tensor's description, over the mean, from which a caution is given.</summary>
    private const double NotableResidual = 0.01;

    /// <summary>Runs it.</summary>
    /// <param name="input">A valid bands file.</param>
    /// <param name="cancel">Stops the quadrature.</param>
    /// <exception cref="BandException">Nothing conducts, or the fitted tensor is not positive.</exception>
    /// <exception cref="OperationCanceledException">Cancelled; there is nothing to keep.</exception>
    public static BandsResult Execute(BandInput input, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(input);
        var clock = new StageClock();
        if (input.Profile is { } profile)
        {
            TensorFit measured = clock.Time("fit", () => TensorFit.Of(profile.Directions, profile.Values, profile.Errors));
            return new BandsResult
            {
                Input = input,
                Fit = measured,
                Law = BandLaw.Of(measured, profile.IsResistance, input.Axis),
                Cautions = [.. OfResidual(measured)],
                Stages = clock.Times,
            };
        }

        BandModel model = input.Model ?? throw new ArgumentException("The input has neither cones nor a profile.", nameof(input));
        BandResponse response = clock.Time("integrals", () => BandSolver.Solve(model, cancel));
        TensorFit fit = TensorFit.Of([.. response.Profile.Select(p => p.Direction)], [.. response.Profile.Select(p => p.Ballistic.Value)]);
        IReadOnlyList<BandContour> contours = BandContour.Of(model);
        return new BandsResult
        {
            Input = input,
            Response = response,
            Fit = fit,
            Law = BandLaw.Of(response),
            Contours = contours,
            Cautions = [.. OfModel(model, response, contours), .. OfResidual(fit)],
            Warnings = response.Reached ? [] : [Text($"A quadrature missed the wanted relative error of {model.Error:G2}; the error of each number holds as it stands. A larger 'error' accepts it.")],
            Stages = clock.Times,
        };
    }

    private static IEnumerable<string> OfResidual(TensorFit fit)
    {
        if (fit.ResidualLargest > NotableResidual)
        {
            yield return Text($"A tensor carries only the cos 2θ part of the profile: up to {100 * fit.ResidualLargest:G2} % of its mean is left ({100 * fit.ResidualRms:G2} % rms). A local sheet law is an approximation here.");
        }
    }

    private static IEnumerable<string> OfModel(BandModel model, BandResponse response, IReadOnlyList<BandContour> contours)
    {
        foreach (string name in contours.Where(c => !c.IsClosed).Select(c => c.Name).Distinct())
        {
            bool open = model.Cones.First(c => c.Name == name).Tilt > 1;
            yield return open
                ? $"The Fermi contour of {name} is open and ends at 'cut_off': all numbers depend on it, and the second-order elements need not be symmetric. Vary 'cut_off'."
                : $"'cut_off' cuts the closed Fermi contour of {name}; leave it out, or raise it.";
        }

        foreach (ConeShare s in response.Shares.Where(s => s.HalfWidth > 0 && s.HalfWidth * s.MeanFreePath < 1))
        {
            yield return Text($"{s.Name}: half width of the contour times mean free path is {s.HalfWidth * s.MeanFreePath:G2}, less than one, where the Boltzmann equation is in doubt (A. F. Ioffe, A. R. Regel, 1960).");
        }

        if (model.Thickness is { } d && response.Shares.Any(s => s.HalfWidth > 0 && s.HalfWidth * d < 2 * Math.PI))
        {
            yield return "The film is thinner than the Fermi wavelength of a cone: its states are sub-bands rather than a three-dimensional contour.";
        }

        if (response.Hall is null)
        {
            yield return "The Hall part of the Berry curvature depends on states outside this model (an open or cut contour, or Weyl nodes without their partners): hall is left at zero.";
        }
        else if (!response.Hall.Value.IsZero)
        {
            yield return "The cones are not balanced in chirality, which gives a Hall part without a magnetic field. It counts the listed cones alone; partners under time reversal (opposite chirality and tilt) cancel it.";
        }
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
