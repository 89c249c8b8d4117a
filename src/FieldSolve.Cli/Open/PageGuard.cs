using System.Security.Cryptography;
using System.Text;
using FieldSolve.Pictures;
using Microsoft.AspNetCore.Http;

namespace FieldSolve.Cli.Open;

/// <summary>
/// Who may ask: only requests to this very address (so that no other name can be made to point here), from this very page (so that no other site can write through a
/// browser), with the token of this run in the path.
/// </summary>
internal sealed class PageGuard
{
    private readonly byte[] token;

    public PageGuard()
    {
        Token = Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(24));
        token = Encoding.ASCII.GetBytes(Token);
    }

    /// <summary>The secret part of the address.</summary>
    public string Token { get; }

    /// <summary>Set once the port is known.</summary>
    public int Port { get; set; }

    /// <summary>Why a request is refused; null when it is not.</summary>
    public string? Refusal(HttpRequest request)
    {
        string here = $"127.0.0.1:{Port}";
        if (request.Headers.Host.Count != 1 || request.Headers.Host[0] != here)
        {
            return "wrong host";
        }

        bool writes = !HttpMethods.IsGet(request.Method) && !HttpMethods.IsHead(request.Method);
        string? origin = request.Headers.Origin.Count == 0 ? null : request.Headers.Origin.ToString();
        if (origin is null ? writes : origin != "http://" + here)
        {
            return "wrong origin";
        }

        if (request.Headers["Sec-Fetch-Site"] is { Count: > 0 } site && site.ToString() is not ("same-origin" or "none"))
        {
            return "wrong origin";
        }

        string path = request.Path.Value ?? "";
        string[] parts = path.Split('/', 3);
        return parts.Length >= 2 && CryptographicOperations.FixedTimeEquals(Encoding.UTF8.GetBytes(parts[1]), token) ? null : "wrong token";
    }

    /// <summary>Headers of every answer.</summary>
    public static void Harden(HttpResponse response)
    {
        response.Headers.ContentSecurityPolicy = LayoutPage.Policy;
        response.Headers.XContentTypeOptions = "nosniff";
        response.Headers["Referrer-Policy"] = "no-referrer";
        response.Headers["Cross-Origin-Resource-Policy"] = "same-origin";
        response.Headers["Cross-Origin-Opener-Policy"] = "same-origin";
        response.Headers.CacheControl = "no-store";
    }
}
