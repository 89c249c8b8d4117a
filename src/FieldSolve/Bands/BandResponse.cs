using FieldSolve.Laws;

namespace FieldSolve.Bands;

/// <summary>One direction of the conductance profile.</summary>
/// <param name="Direction">Of transport, from lab x, rad.</param>
/// <param name="Ballistic">Landauer-Sharvin conductance per width, S/m.</param>
/// <param name="Sheet">n·σ·n of the Boltzmann sheet conductance, S.</param>
public readonly record struct ProfilePoint(double Direction, Estimate Ballistic, Estimate Sheet);

/// <summary>What one cone of the list adds, with its degeneracy.</summary>
/// <param name="Name">The cone's name.</param>
/// <param name="States">Density of states, 1/(J m²).</param>
/// <param name="Aa">Its part of σ_aa in the file's crystal frame, S.</param>
/// <param name="Ab">Of σ_ab, S.</param>
/// <param name="Bb">Of σ_bb, S.</param>
/// <param name="HalfWidth">Half the shortest width of its contour, averaged over the occupied edge, 1/m; 0 without states.</param>
/// <param name="MeanFreePath">Relaxation time times root mean square velocity, m; 0 without states.</param>
public readonly record struct ConeShare(string Name, double States, double Aa, double Ab, double Bb, double HalfWidth, double MeanFreePath);

/// <summary>
/// Linear and second-order response of a band model, in the principal frame of its sheet conductance: the law that a device
/// file takes.
/// </summary>
public sealed record BandResponse
{
    /// <summary>Angle from the file's crystal a to the principal axis called a, rad, within ±45 degrees.</summary>
    public required double Rotation { get; init; }

    /// <summary>Angle from lab x to the principal axis called a, rad.</summary>
    public required double Axis { get; init; }

    /// <summary>Sheet conductance along a, S.</summary>
    public required Estimate A { get; init; }

    /// <summary>Sheet conductance along b, S.</summary>
    public required Estimate B { get; init; }

    /// <summary>σ_ab left in the principal frame, S: zero within its error.</summary>
    public required Estimate Ab { get; init; }

    /// <summary>Hall sheet conductance from the Berry curvature of the occupied states, S; null where the model does not give it.</summary>
    public required Estimate? Hall { get; init; }

    /// <summary>Second-order part of the shifted distribution.</summary>
    public required SecondOrderSet Drude { get; init; }

    /// <summary>Part of the Berry curvature dipole.</summary>
    public required SecondOrderSet Dipole { get; init; }

    /// <summary>Both together.</summary>
    public SecondOrderSet Total => Drude + Dipole;

    /// <summary>Berry curvature dipole D along a and b, summed over the cones and (for a film) the thickness, m.</summary>
    public required (Estimate A, Estimate B) BerryDipole { get; init; }

    /// <summary>Field at which the contours shift by the stated share of the smallest half width, V/m.</summary>
    public required double FieldLimit { get; init; }

    /// <summary>The profile, one point per direction around the full circle.</summary>
    public required IReadOnlyList<ProfilePoint> Profile { get; init; }

    /// <summary>Each cone's part.</summary>
    public required IReadOnlyList<ConeShare> Shares { get; init; }

    /// <summary>False when a quadrature missed the wanted error.</summary>
    public required bool Reached { get; init; }

    /// <summary>True when a second-order element differs from zero by more than its error.</summary>
    public bool IsQuadratic => Total.Elements.Any(e => !e.Number.IsZero);

    /// <summary>The second-order part without what is zero within its error.</summary>
    public SecondOrder LawPart
    {
        get
        {
            double[] d = [.. Total.Elements.Select(e => e.Number.IsZero ? 0 : e.Number.Value)];
            return new(d[0], d[1], d[2], d[3], d[4], d[5]);
        }
    }
}
