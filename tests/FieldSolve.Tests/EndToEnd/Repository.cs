namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Where the sample devices lie.</summary>
internal static class Repository
{
    public static string Root { get; } = Find();

    public static string Sample(string name) => Path.Combine(Root, "meshes", name);

    private static string Find()
    {
        for (DirectoryInfo? at = new(AppContext.BaseDirectory); at is not null; at = at.Parent)
        {
            if (File.Exists(Path.Combine(at.FullName, "FieldSolve.sln")))
            {
                return at.FullName;
            }
        }

        throw new InvalidOperationException("The tests run outside the repository: no FieldSolve.sln above them.");
    }
}
