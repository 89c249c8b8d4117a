using FieldSolve.Laws;

namespace FieldSolve.Bands;

/// <summary>The sheet law that goes into a device file.</summary>
/// <param name="Axis">From lab x to crystal a, rad.</param>
/// <param name="A">Sheet conductance along a, S.</param>
/// <param name="B">Sheet conductance along b, S.</param>
/// <param name="Hall">Hall sheet conductance, S.</param>
/// <param name="Second">Second-order part, A m/V²; all zero for an ohmic law.</param>
/// <param name="FieldLimit">V/m; null for an ohmic law.</param>
public sealed record BandLaw(double Axis, double A, double B, double Hall, SecondOrder Second, double? FieldLimit)
{
    /// <summary>True when the law has a second-order part.</summary>
    public bool IsQuadratic => Second != default;

    /// <summary>The law of a response: what is zero within its error is zero.</summary>
    /// <param name="r">The response.</param>
    public static BandLaw Of(BandResponse r)
    {
        ArgumentNullException.ThrowIfNull(r);
        return new(
            r.Axis, r.A.Value, r.B.Value, r.Hall is { IsZero: false } hall ? hall.Value : 0, r.LawPart, r.IsQuadratic ? r.FieldLimit : null);
    }

    /// <summary>The ohmic law of a fitted profile.</summary>
    /// <param name="fit">Of sheet conductances in S or sheet resistances in ohm.</param>
    /// <param name="isResistance">Resistances.</param>
    /// <param name="axis">Angle of crystal a as the file has it, rad; the principal axis nearest to it is called a.</param>
    /// <exception cref="BandException">The fitted tensor is not positive.</exception>
    public static BandLaw Of(TensorFit fit, bool isResistance, double axis)
    {
        ArgumentNullException.ThrowIfNull(fit);
        (Estimate a, Estimate b, double turned) = fit.Principal(axis);
        if (!(Math.Min(a.Value, b.Value) > 0))
        {
            throw new BandException("the fitted tensor has a principal value that is not positive; a profile this anisotropic is not that of a sheet conductance, or the table mixes directions");
        }

        return isResistance ? new(turned, 1 / a.Value, 1 / b.Value, 0, default, null) : new(turned, a.Value, b.Value, 0, default, null);
    }
}
