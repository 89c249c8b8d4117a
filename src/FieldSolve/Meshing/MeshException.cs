namespace FieldSolve.Meshing;

/// <summary>The domain cannot be meshed as asked. The message says where, why, and what to change.</summary>
public sealed class MeshException : Exception
{
    /// <summary>With a message for the user.</summary>
    public MeshException(string message)
        : base(message)
    {
    }

    /// <summary>With a message for the user and its cause.</summary>
    public MeshException(string message, Exception innerException)
        : base(message, innerException)
    {
    }

    /// <summary>Without a message.</summary>
    public MeshException()
    {
    }

    /// <summary>More triangles are needed than allowed.</summary>
    internal bool IsTooMany { get; init; }
}
