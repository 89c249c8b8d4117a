using FieldSolve.Laws;

namespace FieldSolve.Turning;

/// <summary>A conductance tensor by its principal values. The label a goes to the principal axis nearest to a given angle.</summary>
/// <param name="A">Conductance along a, S.</param>
/// <param name="B">Conductance along b, S.</param>
/// <param name="Axis">From lab x to a, radians.</param>
/// <param name="Hall">Hall conductance, S.</param>
public sealed record PrincipalSheet(double A, double B, double Axis, double Hall)
{
    /// <summary>sqrt(rho_a rho_b) of the symmetric part of the resistivity, ohm.</summary>
    public double SheetResistance => Math.Sqrt(A * B) / Determinant;

    /// <summary>Resistivity along a, ohm.</summary>
    public double RhoA => B / Determinant;

    /// <summary>Resistivity along b, ohm.</summary>
    public double RhoB => A / Determinant;

    /// <summary>hall / (a b + hall²), ohm: minus V_across / I of an isotropic strip.</summary>
    public double HallResistance => Hall / Determinant;

    private double Determinant => (A * B) + (Hall * Hall);

    /// <summary>Principal values and axis of a tensor.</summary>
    /// <param name="tensor">In the lab frame, S.</param>
    /// <param name="near">The angle that a is to be near to, radians.</param>
    public static PrincipalSheet Of(Tensor2 tensor, double near)
    {
        double half = (tensor.Aa - tensor.Bb) / 2, off = (tensor.Ab + tensor.Ba) / 2, mean = (tensor.Aa + tensor.Bb) / 2;
        double size = Math.Sqrt((half * half) + (off * off));

        // An isotropic sheet has no axis of its own.
        return size < 1e-14 * mean
            ? new(mean, mean, near, (tensor.Ab - tensor.Ba) / 2)
            : new PrincipalSheet(mean + size, mean - size, 0.5 * Math.Atan2(off, half), (tensor.Ab - tensor.Ba) / 2).Labelled(near);
    }

    /// <summary>From resistivities: a mean, and half the difference along and diagonal to lab x, ohm.</summary>
    public static PrincipalSheet OfResistivity(double mean, double along, double diagonal, double hallResistance, double near)
    {
        double size = Math.Sqrt((along * along) + (diagonal * diagonal));
        double high = mean + size, low = mean - size, det = (high * low) + (hallResistance * hallResistance);
        return new PrincipalSheet(low / det, high / det, 0.5 * Math.Atan2(diagonal, along), hallResistance / det).Labelled(near);
    }

    /// <summary>The law of this sheet with its axis turned further, radians.</summary>
    public LabLaw Law(double turn = 0) => new(new OhmicLaw(A, B, Hall), Axis + turn);

    private PrincipalSheet Labelled(double near)
    {
        double quarters = Math.Round((near - Axis) / (Math.PI / 2));
        double axis = Axis + (quarters * Math.PI / 2);
        return Math.Abs(quarters % 2) == 1 ? new(B, A, axis, Hall) : this with { Axis = axis };
    }
}
