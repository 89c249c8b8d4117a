namespace FieldSolve.Runs;

/// <summary>A tolerance cannot be worked out for this device; the message says why and what helps.</summary>
public sealed class ToleranceException : Exception
{
    /// <summary>Without a message.</summary>
    public ToleranceException()
    {
    }

    /// <summary>With the reason in plain words.</summary>
    public ToleranceException(string message)
        : base(message)
    {
    }

    /// <summary>With the reason and what brought it about.</summary>
    public ToleranceException(string message, Exception innerException)
        : base(message, innerException)
    {
    }
}
