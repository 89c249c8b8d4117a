using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>What a run of the command left behind.</summary>
/// <param name="Exit">Exit status.</param>
/// <param name="Out">Standard output.</param>
/// <param name="Error">Standard error.</param>
internal sealed record CommandResult(int Exit, string Out, string Error)
{
    public IReadOnlyList<string> ErrorLines => Error.Split('\n', StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries);
}

/// <summary>Runs the built command in a process of its own.</summary>
internal static class Command
{
    private static readonly TimeSpan Patience = TimeSpan.FromMinutes(3);

    // A shell gives what it runs in the background a SIGINT that is ignored, and children inherit that; env (GNU) takes it back and keeps the process number.
    private static readonly bool IgnoresInterrupts = OperatingSystem.IsLinux()
        && File.ReadLines("/proc/self/status").FirstOrDefault(l => l.StartsWith("SigIgn:", StringComparison.Ordinal)) is { } line
        && (Convert.ToUInt64(line[7..].Trim(), 16) & 2) != 0;

    public static string Assembly { get; } = Path.Combine(AppContext.BaseDirectory, "FieldSolve.Cli.dll");

    public static CommandResult Run(params string[] arguments) => Run(arguments, null);

    /// <summary>Runs it to its end.</summary>
    /// <param name="arguments">As typed.</param>
    /// <param name="environment">Variables to set.</param>
    /// <param name="folder">Where to run; the repository's root by default.</param>
    public static CommandResult Run(string[] arguments, IReadOnlyDictionary<string, string>? environment, string? folder = null)
    {
        using Process process = Start(arguments, environment, folder);
        return Finish(process);
    }

    /// <summary>Starts it.</summary>
    public static Process Start(string[] arguments, IReadOnlyDictionary<string, string>? environment = null, string? folder = null)
    {
        var start = new ProcessStartInfo(IgnoresInterrupts ? "env" : "dotnet", [.. IgnoresInterrupts ? (string[])["--default-signal=INT", "dotnet"] : [], Assembly, .. arguments])
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
            UseShellExecute = false,
            WorkingDirectory = folder ?? Repository.Root,
            StandardOutputEncoding = System.Text.Encoding.UTF8,
            StandardErrorEncoding = System.Text.Encoding.UTF8,
        };
        foreach ((string name, string value) in environment ?? new Dictionary<string, string>())
        {
            start.Environment[name] = value;
        }

        return Process.Start(start) ?? throw new InvalidOperationException("The command did not start.");
    }

    /// <summary>Waits for the end and collects the output.</summary>
    public static CommandResult Finish(Process process)
    {
        Task<string> output = process.StandardOutput.ReadToEndAsync(), error = process.StandardError.ReadToEndAsync();
        if (!process.WaitForExit(Patience))
        {
            process.Kill(entireProcessTree: true);
            throw new TimeoutException("The command did not end.");
        }

        return new(process.ExitCode, output.GetAwaiter().GetResult(), error.GetAwaiter().GetResult());
    }
}
