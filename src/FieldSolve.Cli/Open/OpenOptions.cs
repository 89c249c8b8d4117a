namespace FieldSolve.Cli.Open;

/// <summary>How a page is served.</summary>
internal sealed record OpenOptions
{
    /// <summary>How long the server outlives its last page; a page that is loaded anew is away for a moment.</summary>
    public TimeSpan Grace { get; init; } = TimeSpan.FromSeconds(6);

    /// <summary>How long a layout rests after its last answer before memory is given back.</summary>
    public TimeSpan Rest { get; init; } = TimeSpan.FromSeconds(5);

    /// <summary>How often it looks whether the file was changed by somebody else.</summary>
    public TimeSpan DiskCheck { get; init; } = TimeSpan.FromSeconds(1);
}
