using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>The command bands, from the sample file to its results.</summary>
[Collection(SampleRuns.Collection)]
public class BandsTests
{
    [Fact]
    public void The_samples_give_every_file_and_the_same_bytes_again()
    {
        using var folder = new TempFolder();
        foreach ((string sample, string[] pictures) in new[] { ("tilted-cones", (string[])["fermi-line", "profile", "tensor"]), ("measured-profile", ["profile", "tensor"]) })
        {
            string one = folder[sample], two = folder[sample + " again"];
            CommandResult result = Command.Run("bands", Repository.Sample($"bands/{sample}.toml"), "--out", one, "--json");
            Assert.Equal("", result.Error);
            Assert.Equal(0, result.Exit);
            Assert.True(JsonDocument.Parse(result.Out).RootElement.GetProperty("law").GetProperty("a_S").GetDouble() > 0);
            IReadOnlyList<string> files = TempFolder.FilesIn(one);
            Assert.Equal(
                [.. pictures.SelectMany(p => new[] { $"pictures/{p}.png", $"pictures/{p}.svg" }).Concat(["law.toml", "profile.csv", "report.html", "run.json"]).Order(StringComparer.Ordinal)],
                files);
            if (sample == "measured-profile")
            {
                continue;
            }

            CommandResult second = Command.Run(
                ["bands", Repository.Sample($"bands/{sample}.toml"), "--out", two, "--quiet"], new Dictionary<string, string> { ["DOTNET_PROCESSOR_COUNT"] = "1" });
            Assert.Equal(("", "", 0), (second.Out, second.Error, second.Exit));
            Assert.All(files.Where(f => f != "run.json"), f => Assert.Equal(File.ReadAllBytes(Path.Combine(one, f)), File.ReadAllBytes(Path.Combine(two, f))));
            JsonElement run = JsonDocument.Parse(File.ReadAllText(Path.Combine(one, "run.json"))).RootElement;
            Assert.Equal("bands", run.GetProperty("command").GetString());
            Assert.True(run.GetProperty("stages").GetArrayLength() >= 2);
        }

        CsvTable profile = CsvTable.Read(Path.Combine(folder["tilted-cones"], "profile.csv"));
        Assert.Equal(72, profile.Rows);
        Assert.Equal(
            ["direction_deg", "ballistic_S_per_m", "ballistic_err_S_per_m", "tensor_fit_S_per_m", "residual_S_per_m", "conductance_S", "conductance_err_S"],
            profile.Header);
        for (int row = 0; row < 36; row++)
        {
            Assert.Equal(profile.Number(row, "ballistic_S_per_m"), profile.Number(row + 36, "ballistic_S_per_m"));
            Assert.InRange(profile.Number(row, "ballistic_err_S_per_m"), 0, 1e-7 * profile.Number(row, "ballistic_S_per_m"));
        }
    }

    [Fact]
    public void A_bad_file_writes_nothing()
    {
        using var folder = new TempFolder();
        string file = folder.Write("bands.toml", "chemical_potential = \"60 meV\"\nrelaxation_time = \"1 ps\"\n[[cone]]\nv_a = \"5e5 m/s\"\nv_b = \"5e5 m/s\"\ntilt_a = 2\n");
        CommandResult result = Command.Run("bands", file, "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.StartsWith($"{file}:3:1: [[cone]] 'cone 1': the tilt is 2 times the velocity", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.Equal("", result.Out);
        Assert.False(Directory.Exists(folder["out"]));
    }
}
