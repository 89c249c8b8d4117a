using System.Globalization;
using System.Security;
using System.Security.Cryptography;
using System.Text;

namespace FieldSolve.Device;

/// <summary>The text of a TOML file that a user names on the command line, or the fault that forbids reading on.</summary>
/// <param name="Text">Without a byte order mark.</param>
/// <param name="HasBadBytes">Bytes that are not UTF-8 stand in it as U+FFFD.</param>
/// <param name="Sha256">Of the file's bytes, lower case hexadecimal.</param>
/// <param name="Fault">Null when the text is good to be parsed.</param>
internal sealed record InputFile(string Text, bool HasBadBytes, string Sha256, Fault? Fault)
{
    /// <summary>Input files are written by hand; far larger ones are something else, and take long to say so of.</summary>
    private const int LargestFile = 200_000;

    /// <summary>Control characters that make a file no text: more than one in this many.</summary>
    private const int TextPerControl = 100;

    private const char ByteOrderMark = '\uFEFF';

    /// <summary>Reads a file.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <param name="words">How messages call such a file.</param>
    public static InputFile Read(string path, InputWords words)
    {
        byte[] bytes;
        try
        {
            if (Directory.Exists(path))
            {
                return Bad(path, $"this is a directory; name {words.Kind} (TOML)");
            }

            if (PlainFile.HasNoLength(path))
            {
                return Empty(path, words, " (or no plain file)");
            }

            using FileStream stream = new(path, FileMode.Open, FileAccess.Read, FileShare.ReadWrite);
            if (stream.CanSeek && stream.Length > LargestFile)
            {
                return TooLarge(path, words);
            }

            bytes = ReadAtMost(stream, LargestFile + 1);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            return Bad(path, "the file does not exist");
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or SecurityException or ArgumentException or NotSupportedException)
        {
            return Bad(path, $"the file cannot be read: {e.Message}");
        }

        if (bytes.Length > LargestFile)
        {
            return TooLarge(path, words);
        }

        string text = Encoding.UTF8.GetString(bytes);
        bool hasBadBytes = text.Contains('\uFFFD', StringComparison.Ordinal) && !Encoding.UTF8.GetBytes(text).AsSpan().SequenceEqual(bytes);
        return Checked(text, hasBadBytes, path, words, Convert.ToHexStringLower(SHA256.HashData(bytes)));
    }

    /// <summary>Takes a text that is at hand.</summary>
    /// <param name="text">The text; a byte order mark in front is passed over.</param>
    /// <param name="path">What faults call the file.</param>
    /// <param name="words">How messages call such a file.</param>
    public static InputFile Of(string text, string path, InputWords words) => text.Length > LargestFile
        ? TooLarge(path, words)
        : Checked(text, false, path, words, Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(text))));

    private static InputFile Checked(string text, bool hasBadBytes, string path, InputWords words, string sha256)
    {
        text = text.StartsWith(ByteOrderMark) ? text[1..] : text;
        if (string.IsNullOrWhiteSpace(text))
        {
            return Empty(path, words, "");
        }

        return text.Count(c => char.IsControl(c) && c is not ('\n' or '\r' or '\t')) > text.Length / TextPerControl
            ? Bad(path, $"this is not a text file; {words.Kind} is TOML text in UTF-8")
            : new(text, hasBadBytes, sha256, null);
    }

    private static byte[] ReadAtMost(FileStream stream, int most)
    {
        byte[] buffer = new byte[most];
        int count = stream.ReadAtLeast(buffer, most, throwOnEndOfStream: false);
        return buffer[..count];
    }

    private static InputFile TooLarge(string path, InputWords words) => Bad(path, string.Create(
        CultureInfo.InvariantCulture, $"the file is larger than {LargestFile / 1000} kB, which no {words.Kind[2..]} is; {words.Large}"));

    private static InputFile Empty(string path, InputWords words, string orElse) => Bad(path, $"the file is empty{orElse}; {words.Least}");

    private static InputFile Bad(string path, string message) => new("", false, "", new Fault(path, 1, 1, message));
}

/// <summary>How messages call a kind of input file.</summary>
/// <param name="Kind">With its article: "a device file".</param>
/// <param name="Least">What it holds at least, for the message about an empty one.</param>
/// <param name="Large">Where large data belongs.</param>
internal sealed record InputWords(string Kind, string Least, string Large);
