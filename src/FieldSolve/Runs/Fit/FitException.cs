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

    /// <summary>Makes one about a place of the device file.</summary>
    /// <param name="message">What is wrong and what to do.</param>
    /// <param name="line">Line, 1-based.</param>
    /// <param name="column">Column, 1-based.</param>
    public FitException(string message, int line, int column)
        : base(message)
    {
        (Line, Column) = (line, column);
    }

    /// <summary>Makes one with its cause.</summary>
    public FitException(string message, Exception innerException)
        : base(message, innerException)
    {
    }

    /// <summary>Line of the device file that it is about, 1-based; 1 for the file as a whole.</summary>
    public int Line { get; } = 1;

    /// <summary>Column, 1-based.</summary>
    public int Column { get; } = 1;

    /// <summary>The measured data are at fault, not the device file.</summary>
    public bool IsOfData { get; init; }
}
