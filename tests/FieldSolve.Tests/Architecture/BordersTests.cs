namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>The library neither prints nor draws; the pictures know nothing of the command line.</summary>
public class BordersTests
{
    [Fact]
    public void The_library_does_not_print()
    {
        Assert.All(House.Floors, floor => Assert.Empty(House.Uses("FieldSolve." + floor, "System.Console")));
        Assert.NotEmpty(House.Uses("FieldSolve.Cli", "System.Console"));
    }

    [Fact]
    public void The_library_does_not_draw()
    {
        Assert.All(House.Floors, floor => Assert.Empty(House.Uses("FieldSolve." + floor, "ScottPlot")));
        Assert.All(House.Floors, floor => Assert.Empty(House.Uses("FieldSolve." + floor, "SkiaSharp")));
        Assert.NotEmpty(House.Uses("FieldSolve.Pictures", "ScottPlot"));
        Assert.NotEmpty(House.Uses("FieldSolve.Pictures", "SkiaSharp"));
    }

    [Fact]
    public void The_library_knows_neither_pictures_nor_commands()
    {
        Assert.All(House.Floors, floor => Assert.Empty(House.Uses("FieldSolve." + floor, "FieldSolve.Pictures")));
        Assert.All(House.Floors, floor => Assert.Empty(House.Uses("FieldSolve." + floor, "FieldSolve.Cli")));
        Assert.NotEmpty(House.Uses("FieldSolve.Cli", "FieldSolve.Pictures"));
    }

    [Fact]
    public void Pictures_do_not_know_the_command_line() => Assert.Empty(House.Uses("FieldSolve.Pictures", "FieldSolve.Cli"));

    [Fact]
    public void A_namespace_is_not_taken_for_another_with_the_same_beginning()
    {
        // "FieldSolve.Field" is no namespace, though FieldSolve.Fields begins with it.
        Assert.Empty(House.TypesIn("FieldSolve.Field"));
        Assert.NotEmpty(House.TypesIn("FieldSolve.Fields"));
    }
}
