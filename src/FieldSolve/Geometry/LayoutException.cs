namespace FieldSolve.Geometry;

/// <summary>The layout asked for cannot be made.</summary>
public sealed class LayoutException : Exception
{
    /// <summary>Without a message.</summary>
    public LayoutException()
    {
    }

    /// <summary>With the reason in plain words.</summary>
    public LayoutException(string message)
        : base(message)
    {
    }

    /// <summary>With the reason and what brought it about.</summary>
    public LayoutException(string message, Exception innerException)
        : base(message, innerException)
    {
    }
}
