namespace FieldSolve.Runs;

/// <summary>A fit or an overlay cannot be made of what was given; the message says why and what to do.</summary>
public sealed class FitException : Exception
{
    /// <summary>Makes one without a message.</summary>
    public FitException()
    {
    }

    /// <summary>Makes one.</summary>
    public FitException(string message)
        : base(message)
    {
    }

    /// <summary>Makes one with its cause.</summary>
    public FitException(string message, Exception innerException)
        : base(message, innerException)
    {
    }

    /// <summary>The measured data are at fault, not the device file.</summary>
    public bool IsOfData { get; init; }
}
