namespace FieldSolve.Tests.EndToEndTests;

/// <summary>A folder that goes away with the test.</summary>
internal sealed class TempFolder : IDisposable
{
    public TempFolder(string name = "fieldsolve")
    {
        // The unusual name is the rule here: every run through this class goes through blanks and letters beyond ASCII.
        Path = Directory.CreateTempSubdirectory(name + " \u00fc\u00b5 ").FullName;
    }

    public string Path { get; }

    public string this[string name] => System.IO.Path.Combine(Path, name);

    public string Write(string name, string text)
    {
        File.WriteAllText(this[name], text);
        return this[name];
    }

    /// <summary>Everything in it, with relative names.</summary>
    public IReadOnlyList<string> Files => FilesIn(Path);

    public static IReadOnlyList<string> FilesIn(string folder) =>
    [
        .. Directory.EnumerateFiles(folder, "*", SearchOption.AllDirectories)
            .Select(f => System.IO.Path.GetRelativePath(folder, f).Replace('\\', '/')).Order(StringComparer.Ordinal),
    ];

    public void Dispose() => Directory.Delete(Path, true);
}
