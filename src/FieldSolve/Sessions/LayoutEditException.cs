namespace FieldSolve.Sessions;

/// <summary>A change that cannot be made to the device file; the message says why, as a clause.</summary>
public sealed class LayoutEditException : Exception
{
    /// <summary>With a message.</summary>
    public LayoutEditException(string message)
        : base(message)
    {
    }

    /// <summary>With nothing to say; for serialisers.</summary>
    public LayoutEditException()
    {
    }

    /// <summary>With a message and a cause.</summary>
    public LayoutEditException(string message, Exception inner)
        : base(message, inner)
    {
    }
}
