namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>A folder of the library uses only folders on the floors below it.</summary>
public class OneWayFoldersTests
{
    public static TheoryData<string, string> Forbidden()
    {
        var pairs = new TheoryData<string, string>();
        for (int user = 0; user < House.Floors.Length; user++)
        {
            for (int used = 0; used < House.Floors.Length; used++)
            {
                // Sparse knows nothing of sheets; only quantities and the like could lie below it, and it needs none.
                if (used > user || (House.Floors[user] == "Sparse" && used != user))
                {
                    pairs.Add(House.Floors[user], House.Floors[used]);
                }
            }
        }

        return pairs;
    }

    [Theory]
    [MemberData(nameof(Forbidden))]
    public void A_folder_does_not_use_one_above_it(string user, string used) =>
        Assert.Empty(House.Uses("FieldSolve." + user, "FieldSolve." + used));

    // The same check the other way round must find something, or the one above could not fail.
    [Theory]
    [InlineData("Laws", "Quantities")]
    [InlineData("Device", "Geometry")]
    [InlineData("Device", "Laws")]
    [InlineData("Bands", "Device")]
    [InlineData("Meshing", "Geometry")]
    [InlineData("Fields", "Meshing")]
    [InlineData("Fields", "Sparse")]
    [InlineData("Solving", "Fields")]
    [InlineData("Readings", "Fields")]
    [InlineData("Runs", "Solving")]
    [InlineData("Files", "Readings")]
    public void The_check_finds_uses_that_are_there(string user, string used) =>
        Assert.NotEmpty(House.Uses("FieldSolve." + user, "FieldSolve." + used));

    [Fact]
    public void Every_floor_has_types_and_every_type_stands_on_a_floor()
    {
        Assert.All(House.Floors, floor => Assert.NotEmpty(House.TypesIn("FieldSolve." + floor)));
        string[] homeless = [.. House.TypesIn("FieldSolve").Except(((string[])[.. House.Floors, "Pictures", "Cli"]).SelectMany(f => House.TypesIn("FieldSolve." + f)))];
        Assert.Empty(homeless);
    }
}
