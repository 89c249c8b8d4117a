namespace FieldSolve.PageTests;

/// <summary>A test that needs a browser; skipped, with a message, where none is installed.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class BrowserFactAttribute : FactAttribute
{
    /// <summary>Marks a test.</summary>
    public BrowserFactAttribute() => Skip = Chromium.Missing;
}

/// <summary>The same with data.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class BrowserTheoryAttribute : TheoryAttribute
{
    /// <summary>Marks a test.</summary>
    public BrowserTheoryAttribute() => Skip = Chromium.Missing;
}

/// <summary>The browser of the machine.</summary>
internal static class Chromium
{
    private static readonly string[] Names = ["chromium", "chromium-browser", "google-chrome", "google-chrome-stable"];

    /// <summary>Path of the program, or null.</summary>
    public static string? Program { get; } = (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator)
        .Where(folder => folder.Length > 0).SelectMany(folder => Names.Select(name => Path.Combine(folder, name))).FirstOrDefault(File.Exists);

    /// <summary>Why tests are skipped; null when they run.</summary>
    public static string? Missing => Program is null ? "No Chromium was found on the PATH; on Debian: apt-get install chromium." : null;
}
