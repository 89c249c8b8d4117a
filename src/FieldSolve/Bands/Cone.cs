namespace FieldSolve.Bands;

/// <summary>
/// One (possibly tilted, gapped) cone: E = offset + ħ w·k ± √((ħ v_a k_a)² + (ħ v_b k_b)² + (ħ v_c k_c)² + (gap/2)²), with k
/// counted from its node, along the cone's own axes.
/// </summary>
public sealed record Cone
{
    /// <summary>Name for tables and pictures.</summary>
    public required string Name { get; init; }

    /// <summary>Velocity v_a, m/s, &gt; 0.</summary>
    public required double VelocityA { get; init; }

    /// <summary>Velocity v_b, m/s, &gt; 0.</summary>
    public required double VelocityB { get; init; }

    /// <summary>Velocity v_c of a three-dimensional cone, m/s; 0 for a two-dimensional one.</summary>
    public double VelocityC { get; init; }

    /// <summary>Tilt velocity w_a, m/s.</summary>
    public double TiltA { get; init; }

    /// <summary>Tilt velocity w_b, m/s.</summary>
    public double TiltB { get; init; }

    /// <summary>Tilt velocity w_c, m/s.</summary>
    public double TiltC { get; init; }

    /// <summary>Energy of the node (the middle of the gap), J.</summary>
    public double Offset { get; init; }

    /// <summary>Gap: twice the mass term, J, ≥ 0.</summary>
    public double Gap { get; init; }

    /// <summary>How many equal cones this stands for (spin, valleys that are alike), &gt; 0.</summary>
    public double Degeneracy { get; init; } = 1;

    /// <summary>
    /// +1 or -1: the sign of the Berry curvature. H = ħ(v_a k_a χ σ_x + v_b k_b σ_y) + (gap/2) σ_z, so that the upper band has
    /// Ω = -χ ħ² v_a v_b gap / (4 ε³). Partners under time reversal have opposite chirality and opposite tilt.
    /// </summary>
    public int Chirality { get; init; } = 1;

    /// <summary>Angle from crystal a to the cone's own first axis, rad.</summary>
    public double Angle { get; init; }

    /// <summary>In-plane tilt over velocity: the contour of a slice is closed below one.</summary>
    public double TiltInPlane => Math.Sqrt(Square(TiltA / VelocityA) + Square(TiltB / VelocityB));

    /// <summary>Tilt over velocity with the third direction: the Fermi line or surface is closed below one.</summary>
    public double Tilt => VelocityC > 0 ? Math.Sqrt(Square(TiltInPlane) + Square(TiltC / VelocityC)) : TiltInPlane;

    /// <summary>Least |E - offset| at which a closed cone has states, J; 0 for an over-tilted one.</summary>
    public double BandEdge => Tilt >= 1 ? 0 : 0.5 * Gap * Math.Sqrt((1 - Tilt) * (1 + Tilt));

    private static double Square(double x) => x * x;
}
