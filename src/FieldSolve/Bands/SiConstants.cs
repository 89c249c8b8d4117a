namespace FieldSolve.Bands;

/// <summary>Exact constants of the SI (BIPM, The International System of Units, 9th edition, 2019).</summary>
public static class SiConstants
{
    /// <summary>Elementary charge e, C.</summary>
    public const double Charge = 1.602176634e-19;

    /// <summary>Planck constant h, J s.</summary>
    public const double Planck = 6.62607015e-34;

    /// <summary>h / 2π, J s.</summary>
    public const double ReducedPlanck = Planck / (2 * Math.PI);

    /// <summary>Boltzmann constant k, J/K.</summary>
    public const double Boltzmann = 1.380649e-23;

    /// <summary>e²/h, S.</summary>
    public const double ConductanceQuantum = Charge * Charge / Planck;
}
