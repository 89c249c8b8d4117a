using System.Reflection;
using System.Security.Cryptography;
using System.Text;

namespace FieldSolve.Pictures;

/// <summary>
/// Script and style of the report, from the files in the folder Page, and the policy that lets exactly these two run: nothing else is executed and
/// nothing is fetched.
/// </summary>
internal static class LiveScript
{
    // In the order in which they use one another.
    private static readonly string[] Parts = ["base.js", "plane.js", "colours.js", "packed.js", "mesh.js", "law.js", "lines.js", "canvas.js", "bars.js", "matrix.js", "chart.js", "share.js", "sections.js", "frames.js", "overlay.js", "map.js", "compare.js", "page.js"];

    /// <summary>The script.</summary>
    public static string Script { get; } = "'use strict';\n(() => {\n" + string.Concat(Parts.Select(Read)) + "})();\n";

    /// <summary>The style sheet.</summary>
    public static string Style { get; } = Read("page.css");

    /// <summary>Content of the policy's meta element.</summary>
    public static string Policy { get; } =
        $"default-src 'none'; img-src data:; script-src '{Hash(Script)}'; style-src '{Hash(Style)}'; base-uri 'none'; form-action 'none'";

    internal static string Read(string name)
    {
        using Stream stream = Assembly.GetExecutingAssembly().GetManifestResourceStream("Page." + name)
            ?? throw new InvalidOperationException($"The embedded file {name} is missing from the assembly.");
        using StreamReader reader = new(stream);
        return reader.ReadToEnd().ReplaceLineEndings("\n");
    }

    private static string Hash(string text) => "sha256-" + Convert.ToBase64String(SHA256.HashData(Encoding.UTF8.GetBytes(text)));
}
