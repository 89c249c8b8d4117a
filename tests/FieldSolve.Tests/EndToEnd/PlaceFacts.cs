using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>A test that needs Linux: signals as kill sends them, /proc, locks. Elsewhere it is skipped and says so.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class LinuxFactAttribute : FactAttribute
{
    public LinuxFactAttribute() => Skip = OperatingSystem.IsLinux() ? null : "Needs Linux.";
}

/// <summary>A test that needs a POSIX shell, named pipes or devices with paths.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class PosixFactAttribute : FactAttribute
{
    public PosixFactAttribute() => Skip = OperatingSystem.IsWindows() ? "Needs a POSIX system." : null;
}

/// <summary>The same with data.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class PosixTheoryAttribute : TheoryAttribute
{
    public PosixTheoryAttribute() => Skip = OperatingSystem.IsWindows() ? "Needs a POSIX system." : null;
}

/// <summary>A test that needs a user whom permissions bind.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class BoundUserFactAttribute : FactAttribute
{
    public BoundUserFactAttribute() => Skip = OperatingSystem.IsWindows() || Environment.UserName == "root" ? "root may write into every folder; the test with a read-only file system stands in." : null;
}

/// <summary>A test that needs a small file system of its own: root, and a kernel that lets it mount.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class MountFactAttribute : FactAttribute
{
    public MountFactAttribute() => Skip = SmallDisk.Missing;
}

/// <summary>A file system in memory, gone with the test.</summary>
internal sealed class SmallDisk : IDisposable
{
    private SmallDisk(string path) => Path = path;

    /// <summary>Why there can be none; null when there can.</summary>
    public static string? Missing { get; } = Try();

    public string Path { get; }

    public string this[string name] => System.IO.Path.Combine(Path, name);

    /// <summary>Mounts one.</summary>
    /// <param name="folder">Where; made.</param>
    /// <param name="options">Of tmpfs, for example "size=64k".</param>
    public static SmallDisk Mount(string folder, string options)
    {
        Directory.CreateDirectory(folder);
        Assert.True(Quietly("mount", "-t", "tmpfs", "-o", options, "tmpfs", folder), "could not mount");
        return new(folder);
    }

    public void Remount(string options) => Assert.True(Quietly("mount", "-o", "remount," + options, Path), "could not mount again");

    // Lazily: a process that was just killed may still be letting go of it.
    public void Dispose() => Quietly("umount", "-l", Path);

    internal static bool Quietly(string program, params string[] arguments)
    {
        try
        {
            using Process process = Process.Start(new ProcessStartInfo(program, arguments) { RedirectStandardError = true, RedirectStandardOutput = true })!;
            process.StandardError.ReadToEnd();
            process.WaitForExit();
            return process.ExitCode == 0;
        }
        catch (System.ComponentModel.Win32Exception)
        {
            return false; // no such program
        }
    }

    private static string? Try()
    {
        if (!OperatingSystem.IsLinux())
        {
            return "Needs Linux.";
        }

        string folder = Directory.CreateTempSubdirectory("mount").FullName;
        try
        {
            return Quietly("mount", "-t", "tmpfs", "-o", "size=16k", "tmpfs", folder) && Quietly("umount", folder) ? null : "Needs root and a kernel that lets it mount a file system in memory.";
        }
        finally
        {
            Directory.Delete(folder);
        }
    }
}
