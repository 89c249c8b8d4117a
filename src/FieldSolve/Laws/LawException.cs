namespace FieldSolve.Laws;

/// <summary>One thing wrong with a file that a law reads.</summary>
/// <param name="Line">1-based.</param>
/// <param name="Column">1-based.</param>
/// <param name="Message">What is wrong and what would be right; one line.</param>
public sealed record LawFileFault(int Line, int Column, string Message);

/// <summary>The parameters of a law make no sense together, or its file is faulty.</summary>
public sealed class LawException : Exception
{
    /// <summary>Faulty parameters.</summary>
    /// <param name="message">What is wrong and what would be right; one line.</param>
    public LawException(string message)
        : base(message)
    {
    }

    /// <summary>A faulty file.</summary>
    /// <param name="file">Path as the law was given it.</param>
    /// <param name="faults">At least one.</param>
    public LawException(string file, IReadOnlyList<LawFileFault> faults)
        : base($"{file}: {faults[0].Message}")
    {
        File = file;
        Faults = faults;
    }

    /// <summary>Path of the faulty file; null when the parameters are at fault.</summary>
    public string? File { get; }

    /// <summary>All faults of the file in the order of their places; empty when the parameters are at fault.</summary>
    public IReadOnlyList<LawFileFault> Faults { get; } = [];
}
