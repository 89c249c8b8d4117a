using System.Globalization;

namespace FieldSolve.Bands;

/// <summary>A band model that gives no sheet law; the message says what to change in the bands file.</summary>
public sealed class BandException : Exception
{
    /// <summary>Makes it.</summary>
    /// <param name="message">A clause without a full stop, in the words of the bands file.</param>
    public BandException(string message)
        : base(message)
    {
    }

    private const double NearOne = 1e-6;

    /// <summary>What forbids a cone, in the words of the bands file; null if nothing does.</summary>
    /// <param name="cone">The cone.</param>
    /// <param name="hasCutOff">The file gives a cut-off.</param>
    internal static string? Wrong(Cone cone, bool hasCutOff)
    {
        if (Math.Abs(cone.TiltInPlane - 1) < NearOne || Math.Abs(cone.Tilt - 1) < NearOne)
        {
            return "the tilt equals the velocity, where the contour turns from closed to open and every conductance depends on what lies beyond the cone; "
                + "choose a tilt that differs by more than a millionth";
        }

        return cone.Tilt > 1 && !hasCutOff
            ? string.Create(CultureInfo.InvariantCulture, $"the tilt is {cone.Tilt:0.###} times the velocity, so that the contour is open; say how far the cone reaches, for example cut_off = \"0.5 1/nm\"")
            : null;
    }

    internal static void Check(BandModel model)
    {
        foreach (Cone cone in model.Cones)
        {
            if (Wrong(cone, model.CutOff is not null) is { } wrong)
            {
                throw new BandException($"cone '{cone.Name}': {wrong}");
            }
        }
    }
}
