namespace FieldSolve.Meshing;

/// <summary>Wanted edge length as a function of place.</summary>
public interface ISizeField
{
    /// <summary>Wanted edge length in metres at (x, y); finite and positive.</summary>
    double At(double x, double y);
}
