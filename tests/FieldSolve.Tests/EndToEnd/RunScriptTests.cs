using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>run.ps1 in a real PowerShell: each job calls the right tool in the right folder, hands arguments on, and ends with the tool's status.</summary>
public class RunScriptTests
{
    // One start of PowerShell takes seconds, so one session runs all jobs. A stand-in for the tool writes down how it was called.
    [PowerShellFact]
    public void Every_job_calls_its_tool_and_hands_on_the_status()
    {
        using var folder = new TempFolder();
        Directory.CreateDirectory(folder["bin"]);
        string calls = folder["calls.txt"], tool = folder.Write("bin/dotnet", $"#!/bin/sh\necho \"$PWD|$*\" >> '{calls}'\n[ \"$1\" = test ] && exit 7\nexit 0\n");
        if (OperatingSystem.IsWindows())
        {
            throw new PlatformNotSupportedException("The stand-in is a shell script.");
        }

        File.SetUnixFileMode(tool, UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.UserExecute);
        string script = folder.Write("all.ps1", """
            param($run)
            & $run demo --quick; "demo $LASTEXITCODE"
            & $run test --filter Laws; "test $LASTEXITCODE"
            & $run bench --list flat; "bench $LASTEXITCODE"
            & $run pack; "pack $LASTEXITCODE"
            try { & $run nothing; "not refused" } catch { "refused" }
            """);
        (int exit, string output) = PowerShell.Run(script, Path.Combine(Repository.Root, "run.ps1"), folder["bin"], folder.Path);
        Assert.True(exit == 0, output);
        Assert.Equal(["demo 0", "test 7", "bench 0", "pack 0", "refused"], output.Split('\n', StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries));
        Assert.Equal(
            [
                $"{Repository.Root}|run --project src/FieldSolve.Cli -c Release -- drive meshes/disc-12.toml --out results --quick",
                $"{Repository.Root}|test --filter Laws",
                $"{Repository.Root}|run --project benchmarks/FieldSolve.Benchmarks -c Release -- --list flat",
                $"{Repository.Root}|pack src/FieldSolve.Cli -c Release --output artifacts",
            ],
            File.ReadAllLines(calls));
    }
}

/// <summary>A test that needs PowerShell; skipped, with a message, where it is not to be had.</summary>
[AttributeUsage(AttributeTargets.Method)]
internal sealed class PowerShellFactAttribute : FactAttribute
{
    public PowerShellFactAttribute() => Skip = PowerShell.Missing;
}

/// <summary>The PowerShell of the machine, or the one of the tool manifest.</summary>
internal static class PowerShell
{
    private static readonly string? OnPath = (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator)
        .Where(f => f.Length > 0).Select(f => Path.Combine(f, "pwsh")).FirstOrDefault(File.Exists);

    private static readonly string Packages = Environment.GetEnvironmentVariable("NUGET_PACKAGES") is { Length: > 0 } set
        ? set : Path.Combine(Environment.GetFolderPath(Environment.SpecialFolder.UserProfile), ".nuget", "packages");

    public static string? Missing =>
        OperatingSystem.IsWindows() ? "No PowerShell test on Windows: its stand-in for dotnet is a shell script."
        : OnPath is null && !Directory.Exists(Path.Combine(Packages, "powershell")) ? "No PowerShell was found; 'dotnet tool restore' fetches it."
        : null;

    /// <summary>Runs a script with one argument.</summary>
    /// <param name="script">The file.</param>
    /// <param name="argument">Its argument.</param>
    /// <param name="before">Folder that comes first on the PATH inside.</param>
    /// <param name="home">Folder for what PowerShell keeps.</param>
    public static (int Exit, string Output) Run(string script, string argument, string before, string home)
    {
        string[] words = ["-NoProfile", "-NonInteractive", "-Command", $"$env:PATH = '{before}' + [IO.Path]::PathSeparator + $env:PATH; & '{script}' '{argument}'"];
        if (OnPath is not null)
        {
            return Run(new ProcessStartInfo(OnPath, words), home);
        }

        // From the package cache; without it the next line says what is missing.
        Run(new ProcessStartInfo("dotnet", ["tool", "restore"]), home);
        return Run(new ProcessStartInfo("dotnet", ["tool", "run", "pwsh", "--", .. words]), home);
    }

    private static (int Exit, string Output) Run(ProcessStartInfo start, string home)
    {
        (start.RedirectStandardOutput, start.RedirectStandardError, start.UseShellExecute, start.WorkingDirectory) = (true, true, false, Repository.Root);
        start.Environment["XDG_CACHE_HOME"] = start.Environment["XDG_CONFIG_HOME"] = start.Environment["XDG_DATA_HOME"] = home;
        start.Environment["POWERSHELL_TELEMETRY_OPTOUT"] = start.Environment["POWERSHELL_UPDATECHECK"] = "Off";
        start.Environment["NO_COLOR"] = "1";
        using Process process = Process.Start(start) ?? throw new InvalidOperationException("PowerShell did not start.");
        Task<string> output = process.StandardOutput.ReadToEndAsync(), error = process.StandardError.ReadToEndAsync();
        process.WaitForExit();
        return (process.ExitCode, output.GetAwaiter().GetResult() + error.GetAwaiter().GetResult());
    }
}
