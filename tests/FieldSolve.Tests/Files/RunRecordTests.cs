using System.Text.Json;
using FieldSolve.Files;
using FieldSolve.Readings;
using FieldSolve.Tests.PicturesTests;

namespace FieldSolve.Tests.FilesTests;

public class RunRecordTests
{
    [Fact]
    public void The_record_says_what_was_run_and_how()
    {
        DriveResult result = SyntheticDrive.Make(rings: 3);
        string text = RunRecord.Text(result, "drive", new Dictionary<string, string> { ["out"] = "results", ["maps"] = "last" });
        Assert.DoesNotContain('\r', text);
        using JsonDocument document = JsonDocument.Parse(text);
        JsonElement root = document.RootElement;
        Assert.Equal(
            ["program", "version", "command", "device", "options", "mesh", "rows", "levels", "solver", "stages", "warnings", "cautions"],
            root.EnumerateObject().Select(p => p.Name));
        Assert.Equal(result.Device.Sha256, root.GetProperty("device").GetProperty("sha256").GetString());
        Assert.Matches(@"^\d+\.\d+\.\d+", root.GetProperty("version").GetString());
        Assert.Equal(["maps", "out"], root.GetProperty("options").EnumerateObject().Select(p => p.Name));
        Assert.Equal(12_345, root.GetProperty("mesh").GetProperty("unknowns").GetInt32());
        Assert.Equal(33, root.GetProperty("rows").GetProperty("written").GetInt32());
        Assert.Equal(1, root.GetProperty("rows").GetProperty("outside-law").GetInt32());
        Assert.Equal(4, root.GetProperty("levels").GetArrayLength());
        JsonElement estimate = root.GetProperty("levels")[3].GetProperty("estimates")[0];
        Assert.Equal(result.Levels[3].Estimates[0].Error, estimate.GetProperty("err_V").GetDouble());
        Assert.Equal(3.2e-14, root.GetProperty("solver").GetProperty("largest_residual").GetDouble());
        Assert.Equal(0.34, root.GetProperty("stages")[1].GetProperty("wall_s").GetDouble());
        Assert.Equal(result.Warnings, root.GetProperty("warnings").EnumerateArray().Select(w => w.GetString()!));
    }

    [Fact]
    public void Numbers_that_are_not_finite_become_null()
    {
        DriveResult result = SyntheticDrive.Make(rings: 3) with { Figures = new(1, 1, 1, 1, 1, 1, double.NaN) };
        using JsonDocument document = JsonDocument.Parse(RunRecord.Text(result, "drive", new Dictionary<string, string>()));
        Assert.Equal(JsonValueKind.Null, document.RootElement.GetProperty("solver").GetProperty("largest_residual").ValueKind);
    }
}
