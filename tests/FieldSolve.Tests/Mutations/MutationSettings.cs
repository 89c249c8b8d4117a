using System.Globalization;

namespace FieldSolve.Tests.MutationTests;

/// <summary>How many mutations, and from which seed.</summary>
internal static class MutationSettings
{
    /// <summary>Inputs that are only read.</summary>
    public static int Count { get; } = Of("FIELDSOLVE_MUTATIONS", 10_000);

    /// <summary>Inputs that go through whole commands, shared among them.</summary>
    public static int Commands { get; } = Of("FIELDSOLVE_MUTATED_COMMANDS", 90);

    /// <summary>First seed.</summary>
    public static int From { get; } = Of("FIELDSOLVE_MUTATIONS_FROM", 0);

    /// <summary>Folder for inputs that failed; none by default.</summary>
    public static string? Keep { get; } = Environment.GetEnvironmentVariable("FIELDSOLVE_MUTATIONS_KEEP");

    private static int Of(string name, int otherwise) =>
        int.TryParse(Environment.GetEnvironmentVariable(name), NumberStyles.None, CultureInfo.InvariantCulture, out int n) ? n : otherwise;
}
