namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// A disc with four equal ideal arcs at 0, 90, 180 and 270 degrees, in units of the sheet resistance. The conductance matrix is circulant; its eigenvalues follow
/// from two symmetric drives. Background: R. Chwang, B. J. Smith, C. R. Crowell, Solid-State Electron. 17 (1974) 1217; W. Versnel, Solid-State Electron. 22 (1979) 911.
/// </summary>
internal sealed class FourArcs
{
    /// <summary>Arcs of one half angle in degrees.</summary>
    public FourArcs(double half)
    {
        double a = RimChords.Radians(half), high = Math.Pow(Math.Tan((Math.PI / 4) + (a / 2)), 2), low = Math.Pow(Math.Tan(a / 2), 2);

        // 1 - m in closed form, so that no digits are lost where m is near 1.
        double complement1 = Math.Pow(((high * low) - 1) / (high - low), 2);
        double complement2 = Math.Pow(Math.Tan((Math.PI / 4) - a), 4);
        Dipole = EllipticIntegrals.Complement(complement1) / EllipticIntegrals.Complete(complement1);
        Quadrupole = EllipticIntegrals.Complement(complement2) / EllipticIntegrals.Complete(complement2);
    }

    /// <summary>Eigenvalue for the potentials +, 0, -, 0.</summary>
    public double Dipole { get; }

    /// <summary>Eigenvalue for the potentials +, -, +, -.</summary>
    public double Quadrupole { get; }

    /// <summary>Current through two neighbours, voltage between the other two.</summary>
    public double VanDerPauw => (1 / Dipole) - (1 / Quadrupole);

    /// <summary>Current and voltage between opposite arcs, the others floating.</summary>
    public double Opposite => 2 / Dipole;

    /// <summary>Current and voltage between neighbours, the others floating.</summary>
    public double Adjacent => (1 / Dipole) + (1 / Quadrupole);
}
