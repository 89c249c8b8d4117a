using System.ComponentModel;
using System.Diagnostics;

namespace FieldSolve.Tests.FilesTests;

/// <summary>A test that lets another reader of VTU files look at what was written; skipped, with a message, where it is not to be had.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class MeshioTheoryAttribute : TheoryAttribute
{
    public MeshioTheoryAttribute() => Skip = Meshio.Missing;
}

/// <summary>The Python package meshio (Debian: python3-meshio).</summary>
internal static class Meshio
{
    private static readonly string Interpreter = File.Exists("/usr/bin/python3") ? "/usr/bin/python3" : "python3";

    /// <summary>Why there is none; null when there is.</summary>
    public static string? Missing { get; } = Find();

    /// <summary>What a script prints.</summary>
    public static string Run(string script, string argument)
    {
        (int code, string text, string error) = Start("-c", script, argument);
        Assert.True(code == 0, error);
        return text.Trim();
    }

    private static string? Find()
    {
        try
        {
            return Start("-c", "import meshio").Code == 0 ? null : "The Python package meshio is not installed (Debian: python3-meshio).";
        }
        catch (Win32Exception)
        {
            return "Python is not installed.";
        }
    }

    private static (int Code, string Output, string Error) Start(params string[] arguments)
    {
        using Process process = Process.Start(new ProcessStartInfo(Interpreter, arguments) { RedirectStandardOutput = true, RedirectStandardError = true })!;
        Task<string> error = process.StandardError.ReadToEndAsync();
        string text = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        return (process.ExitCode, text, error.Result);
    }
}
