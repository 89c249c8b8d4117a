using FieldSolve.Device;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>What a user of the library may call is written down, so that no change of it goes unseen.</summary>
public class PublicSurfaceTests
{
    private const string Renew = "FIELDSOLVE_RENEW_PUBLIC_API";

    private static readonly string Listed = Path.Combine(Repository.Root, "src", "FieldSolve", "PublicAPI.txt");

    /// <summary>With FIELDSOLVE_RENEW_PUBLIC_API=1 it writes the file instead.</summary>
    [Fact]
    public void Public_members_are_those_of_PublicAPI()
    {
        IReadOnlyList<string> now = PublicSurface.Of(typeof(DeviceFile).Assembly);
        if (Environment.GetEnvironmentVariable(Renew) is "1")
        {
            File.WriteAllText(Listed, string.Join('\n', now) + "\n");
        }

        string[] listed = File.ReadAllText(Listed).ReplaceLineEndings("\n").Split('\n', StringSplitOptions.RemoveEmptyEntries);
        string[] changes = [.. now.Except(listed).Select(m => "+ " + m), .. listed.Except(now).Select(m => "- " + m)];
        Assert.True(
            changes.Length == 0,
            $"The public members of FieldSolve differ from src/FieldSolve/PublicAPI.txt (+ new, - gone):\n{string.Join('\n', changes.Take(40))}\n"
            + $"If that is wanted: {Renew}=1 dotnet test tests/FieldSolve.Tests --filter PublicSurface, read the difference, commit it, and tell users in CHANGELOG.md.");
    }

    // The list must be able to see a change: members of every kind stand in it.
    [Theory]
    [InlineData("FieldSolve.Device.DeviceFile.Read(String path) -> FieldSolve.Device.DeviceReading static")]
    [InlineData("FieldSolve.Device.DeviceFile : static class")]
    [InlineData("FieldSolve.Laws.ISheetLaw : interface")]
    [InlineData("FieldSolve.Readings.RowStatus.Ok = 0")]
    [InlineData("FieldSolve.Readings.CurveRow.Wiring { get; init; } -> String")]
    public void Members_of_every_kind_are_listed(string member) => Assert.Contains(member, PublicSurface.Of(typeof(DeviceFile).Assembly));

    [Fact]
    public void Members_that_are_not_public_are_not_listed() =>
        Assert.DoesNotContain(PublicSurface.Of(typeof(DeviceFile).Assembly), m => m.Contains('<') && m.Contains('$'));
}
