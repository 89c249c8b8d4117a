using System.Diagnostics;
using System.Text;
using System.Text.RegularExpressions;

namespace FieldSolve.Files;

/// <summary>
/// Writes a file so that a reader sees either the old one or the whole new one, never a part: the bytes go to a temporary
/// name in the same folder, are flushed to the disk and then moved into place.
/// </summary>
public static partial class WholeFile
{
    private static readonly UTF8Encoding Utf8 = new(encoderShouldEmitUTF8Identifier: false);
    private static int counter;

    /// <summary>Writes a file from a stream writer; makes the folder when it is missing.</summary>
    /// <param name="path">Where the file ends up; an old file there is replaced.</param>
    /// <param name="write">Writes the bytes. When it throws, the old file stays and nothing else is left behind.</param>
    /// <exception cref="IOException">The folder or the file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The folder or the file may not be written.</exception>
    public static void Write(string path, Action<Stream> write)
    {
        ArgumentException.ThrowIfNullOrEmpty(path);
        ArgumentNullException.ThrowIfNull(write);

        string full = Path.GetFullPath(path);
        string folder = Path.GetDirectoryName(full) ?? throw new IOException($"'{path}' names a folder, not a file.");
        Directory.CreateDirectory(folder);
        int serial = Interlocked.Increment(ref counter);
        string temporary = Path.Combine(folder, $".{Path.GetFileName(full)}.{Environment.ProcessId}-{serial}.part");
        try
        {
            using (FileStream stream = new(temporary, FileMode.Create, FileAccess.Write, FileShare.None, 1 << 16))
            {
                write(stream);
                stream.Flush(flushToDisk: true);
            }

            File.Move(temporary, full, overwrite: true);
        }
        catch
        {
            TryDelete(temporary);
            throw;
        }
    }

    /// <summary>Writes text as UTF-8 without a byte order mark; line ends are written as they stand in the text.</summary>
    /// <param name="path">Where the file ends up.</param>
    /// <param name="text">The whole text.</param>
    /// <exception cref="IOException">The folder or the file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The folder or the file may not be written.</exception>
    public static void WriteText(string path, string text)
    {
        ArgumentNullException.ThrowIfNull(text);
        Write(path, stream => stream.Write(Utf8.GetBytes(text)));
    }

    /// <summary>
    /// Removes what killed writers of this file left beside it: temporary files by the name that <see cref="Write"/> gives, last written before this program started.
    /// One that is being written now is younger.
    /// </summary>
    internal static void RemoveLeftovers(string path)
    {
        try
        {
            string full = Path.GetFullPath(path), prefix = $".{Path.GetFileName(full)}.";
            using Process here = Process.GetCurrentProcess();
            DateTime start = here.StartTime.ToUniversalTime();
            foreach (string file in Directory.EnumerateFiles(Path.GetDirectoryName(full) ?? ".", ".*.part"))
            {
                string name = Path.GetFileName(file);
                if (name.StartsWith(prefix, StringComparison.Ordinal) && WriterMark().IsMatch(name.AsSpan(prefix.Length)) && File.GetLastWriteTimeUtc(file) < start)
                {
                    TryDelete(file);
                }
            }
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // Tidying up is no part of the work.
        }
    }

    [GeneratedRegex(@"\A[0-9]+-[0-9]+\.part\z", RegexOptions.CultureInvariant)]
    private static partial Regex WriterMark();

    private static void TryDelete(string path)
    {
        try
        {
            File.Delete(path);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // The first failure is the one to report.
        }
    }
}
