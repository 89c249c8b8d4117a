namespace FieldSolve.Device;

/// <summary>Pipes and devices show no length: opening a pipe may block for ever, and a device may have no end.</summary>
internal static class PlainFile
{
    /// <summary>Whether a path names a file without bytes, or something that is no plain file.</summary>
    /// <param name="path">May be a link.</param>
    public static bool HasNoLength(string path)
    {
        FileInfo info = new(path);
        info = info.ResolveLinkTarget(true) as FileInfo ?? info;
        return info is { Exists: true, Length: 0 };
    }
}
