using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Sensitivity;

/// <summary>Derivatives of readings with respect to causes of error, whatever they change.</summary>
public static class CauseSlope
{
    /// <summary>Velocities of the mesh under a cause of the kind <see cref="CauseEffect.Motion"/>.</summary>
    /// <returns>Null for other causes, and where the domain changes in more than places however small the cause.</returns>
    public static MotionField? Field(SheetDevice device, SheetCause cause, NodeMotion motion)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(cause);
        ArgumentNullException.ThrowIfNull(motion);
        return cause.Kind.Effect != CauseEffect.Motion ? null : MotionScale.Velocity(motion, device, cause.Kind, cause.Target, by => Moved(device, cause, by));
    }

    /// <summary>The domain at a value of a cause; null where that makes no device.</summary>
    internal static Domain? Moved(SheetDevice device, SheetCause cause, double by)
    {
        try
        {
            return cause.Applied(device, by).Domain;
        }
        catch (LayoutException)
        {
            return null;
        }
    }

    /// <summary>dV/dx of one reading, V per SI unit of the cause.</summary>
    /// <param name="state">The state.</param>
    /// <param name="reading">Index of the reading.</param>
    /// <param name="cause">The cause.</param>
    /// <param name="field">From <see cref="Field"/> on the state's mesh; null for causes that move nothing. A motion without a field counts as 0.</param>
    public static double Of(StateSensitivity state, int reading, SheetCause cause, MotionField? field)
    {
        ArgumentNullException.ThrowIfNull(state);
        ArgumentNullException.ThrowIfNull(cause);
        return cause.Kind.Effect switch
        {
            CauseEffect.Axis => state.ByAxis(reading),
            CauseEffect.Law => state.ByLaw(reading, cause.Kind.Key),
            CauseEffect.Resistance => state.ByContact(reading, cause.Target.Contacts[0]),
            _ => field is null ? 0 : state.ByMotion(reading, field),
        };
    }

    /// <summary>The velocities under every cause, for all states on one mesh; null where <see cref="Field"/> is.</summary>
    public static MotionField?[] Fields(SheetDevice device, IReadOnlyList<SheetCause> causes, NodeMotion motion)
    {
        ArgumentNullException.ThrowIfNull(causes);
        return [.. causes.Select(c => Field(device, c, motion))];
    }

    /// <summary>Gradient matrix: one row per reading, one column per cause, V per SI unit.</summary>
    /// <param name="state">The state.</param>
    /// <param name="causes">The causes.</param>
    /// <param name="fields">From <see cref="Fields"/>, on the state's mesh.</param>
    public static double[,] Gradient(StateSensitivity state, IReadOnlyList<SheetCause> causes, IReadOnlyList<MotionField?> fields)
    {
        ArgumentNullException.ThrowIfNull(state);
        ArgumentNullException.ThrowIfNull(causes);
        ArgumentNullException.ThrowIfNull(fields);
        double[,] gradient = new double[state.ReadingCount, causes.Count];
        for (int c = 0; c < causes.Count; c++)
        {
            for (int r = 0; r < state.ReadingCount; r++)
            {
                gradient[r, c] = Of(state, r, causes[c], fields[c]);
            }
        }

        return gradient;
    }

    /// <summary>Gradient matrix of one state alone: one row per reading, one column per cause, V per SI unit.</summary>
    /// <param name="device">The device at the state.</param>
    /// <param name="state">The state.</param>
    /// <param name="causes">The causes.</param>
    /// <param name="motion">Of the state's mesh.</param>
    public static double[,] Gradient(SheetDevice device, StateSensitivity state, IReadOnlyList<SheetCause> causes, NodeMotion motion) =>
        Gradient(state, causes, Fields(device, causes, motion));
}
