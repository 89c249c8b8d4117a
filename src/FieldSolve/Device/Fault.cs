using System.Globalization;
using System.Text;

namespace FieldSolve.Device;

/// <summary>One thing that is wrong with an input file.</summary>
/// <param name="File">Path as the user gave it.</param>
/// <param name="Line">1-based; 1 when the fault is about the whole file.</param>
/// <param name="Column">1-based.</param>
/// <param name="Message">What is wrong and what would be right; one line. Control characters, which a file may bring in, become their numbers.</param>
public sealed record Fault(string File, int Line, int Column, string Message)
{
    /// <summary>What is wrong and what would be right; one line.</summary>
    public string Message { get; init => field = Visible(value); } = Visible(Message);

    /// <summary>FILE:LINE:COLUMN: message.</summary>
    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"{File}:{Line}:{Column}: {Message}");

    /// <summary>One line without control characters, so that a message cannot steer a terminal.</summary>
    private static string Visible(string message)
    {
        StringBuilder? clean = null;
        for (int k = 0; k < message.Length; k++)
        {
            char c = message[k];
            if (char.IsControl(c) || c is '\u2028' or '\u2029')
            {
                clean ??= new StringBuilder(message, 0, k, message.Length + 16);
                clean.Append(CultureInfo.InvariantCulture, $"\\u{(int)c:X4}");
            }
            else
            {
                clean?.Append(c);
            }
        }

        return clean?.ToString() ?? message;
    }
}
