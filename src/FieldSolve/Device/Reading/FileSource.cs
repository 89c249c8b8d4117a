using System.Security;
using System.Text;

namespace FieldSolve.Device;

/// <summary>Reads the files that a device file names, and reports those that cannot be read where they are named.</summary>
/// <param name="folder">Folder that relative paths start from.</param>
/// <param name="faults">Where to report.</param>
internal sealed class FileSource(string folder, FaultList faults)
{
    private const long LargestFile = 64_000_000;

    private static readonly UTF8Encoding Strict = new(false, true);

    private readonly Dictionary<string, string?> texts = [];

    /// <summary>How messages call a file: relative to where the user stands, as the device file itself.</summary>
    public string Shown(string name) => Path.IsPathRooted(name) || folder.Length == 0 ? name : Path.Combine(folder, name);

    /// <summary>The text of a UTF-8 file; null, with a fault at the place that names it, if it cannot be read.</summary>
    public string? Read(TomlText name)
    {
        if (name.Value.Contains('\0', StringComparison.Ordinal))
        {
            faults.Add(name.At, "a file name cannot contain the character U+0000");
            return null;
        }

        string path = Shown(name.Value);
        string? error;
        if (!texts.TryGetValue(path, out string? text))
        {
            text = Load(path, out error);
            texts[path] = text;
        }
        else
        {
            error = text is null ? "cannot be read" : null;
        }

        if (text is null)
        {
            faults.Add(name.At, $"the file '{Values.Short(path)}' {error}");
        }

        return text;
    }

    private static string? Load(string path, out string? error)
    {
        try
        {
            if (Directory.Exists(path))
            {
                error = "is a directory; name a file";
                return null;
            }

            FileInfo info = new(path);
            if (!info.Exists)
            {
                error = "does not exist; paths start from the folder of the device file";
                return null;
            }

            // Pipes and devices show no length: opening a pipe may block for ever, and a device may have no end.
            info = info.ResolveLinkTarget(true) as FileInfo ?? info;
            if (info.Length == 0)
            {
                error = "is empty, or no plain file";
                return null;
            }

            if (info.Length > LargestFile)
            {
                error = "is larger than 64 MB; was another file meant?";
                return null;
            }

            byte[] bytes = File.ReadAllBytes(path);
            int mark = bytes is [0xEF, 0xBB, 0xBF, ..] ? 3 : 0;
            error = null;
            return Strict.GetString(bytes, mark, bytes.Length - mark);
        }
        catch (DecoderFallbackException)
        {
            error = "is not UTF-8 text";
            return null;
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or SecurityException or ArgumentException or NotSupportedException)
        {
            error = $"cannot be read: {e.Message}";
            return null;
        }
    }
}
