using ArchUnitNET.Domain;
using ArchUnitNET.Domain.Extensions;
using ArchUnitNET.Loader;

namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>The compiled code as types and the types they use.</summary>
internal static class House
{
    /// <summary>Folders of src/FieldSolve; each may use only those before it.</summary>
    public static readonly string[] Floors =
    [
        "Quantities", "Geometry", "Laws", "Device", "Bands", "Measured", "Meshing", "Sparse", "Fields", "Solving", "Readings", "Sensitivity", "Runs", "Lockin", "Turning", "Files", "Sessions",
    ];

    private static readonly ArchUnitNET.Domain.Architecture Code = new ArchLoader()
        .LoadAssemblies(System.Reflection.Assembly.Load("FieldSolve"), System.Reflection.Assembly.Load("FieldSolve.Pictures"), System.Reflection.Assembly.Load("FieldSolve.Cli"))
        .Build();

    /// <summary>Full names of the types in a namespace and below it.</summary>
    public static IReadOnlyList<string> TypesIn(string space) =>
        [.. Code.Types.Where(t => Lies(t.FullName, space)).Select(t => t.FullName).Order(StringComparer.Ordinal)];

    /// <summary>"User -> used" for every type in one namespace that uses a type in (or named as) the other.</summary>
    public static IReadOnlyList<string> Uses(string user, string used) =>
    [
        .. Code.Types.Where(t => Lies(t.FullName, user))
            .SelectMany(t => t.Dependencies.Select(d => d.Target.FullName).Where(target => Lies(target, used)).Select(target => $"{t.FullName} -> {target}"))
            .Distinct().Order(StringComparer.Ordinal),
    ];

    private static bool Lies(string name, string space) =>
        name.StartsWith(space, StringComparison.Ordinal) && (name.Length == space.Length || name[space.Length] is '.' or '+' or '/' or '`');
}
