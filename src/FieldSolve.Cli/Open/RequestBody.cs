using System.Text.Json;
using Microsoft.AspNetCore.Http;

namespace FieldSolve.Cli.Open;

/// <summary>
/// Reads the JSON of a request. One that is too long is read to its end and dropped before it is answered: a browser that is still sending would see a broken
/// connection in place of the answer.
/// </summary>
internal static class RequestBody
{
    /// <summary>Longest request that is taken, bytes.</summary>
    public const int Longest = 1 << 20;

    /// <summary>What is read of a longer one for the sake of a clear answer, bytes; the connection of one that is longer still is closed.</summary>
    public const long LargestRead = 1 << 28;

    /// <summary>Reads a request.</summary>
    /// <exception cref="BadHttpRequestException">It is too long (status 413).</exception>
    /// <exception cref="JsonException">It is something else.</exception>
    public static async Task<T> Read<T>(HttpContext context)
    {
        using MemoryStream whole = new();
        byte[] part = new byte[1 << 14];
        for (int n; (n = await context.Request.Body.ReadAsync(part, context.RequestAborted)) > 0;)
        {
            // Counted on, kept no further.
            if (whole.Length <= Longest)
            {
                whole.Write(part, 0, n);
            }
        }

        return whole.Length > Longest
            ? throw new BadHttpRequestException("too long", StatusCodes.Status413PayloadTooLarge)
            : JsonSerializer.Deserialize<T>(whole.GetBuffer().AsSpan(0, (int)whole.Length), EditJson.Options) ?? throw new JsonException();
    }
}
