using System.Text.RegularExpressions;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>fieldsolve tolerance, its shards and gather, as a user runs them.</summary>
public class ToleranceTests
{
    internal const string Device = """
        title = "Small disc"
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "quadratic"
        axis = "20 deg"
        a = "4 mS"
        b = "1 mS"
        d12 = "4e-10 A m/V^2"
        field_limit = "400 kV/m"
        [[contacts]]
        ring = 4
        width = "1.5 um"
        prefix = "c"
        [[wiring]]
        name = "0 deg"
        source = "c3"
        drain = "c1"
        across = ["c2", "c4"]
        [drive]
        current = { from = "200 uA", to = "200 uA", steps = 1 }
        [mesh]
        error = 1e-2
        even_error = 0.1
        [tolerance]
        axis = "1 deg"
        [tolerance.contacts]
        position = "50 nm"
        """;

    private static readonly IReadOnlyDictionary<string, string> OneProcessor = new Dictionary<string, string> { ["DOTNET_PROCESSOR_COUNT"] = "1" };

    [Fact]
    public void Shards_and_a_run_on_one_processor_give_the_same_bytes()
    {
        using TempFolder folder = new();
        folder.Write("disc.toml", Device);
        CommandResult one = Command.Run(["tolerance", "disc.toml", "--samples", "70", "--explain", "1 mV", "--out", "one"], OneProcessor, folder.Path);
        Assert.True(one.Exit == 0, one.Error + one.Out);
        Assert.Contains("70 samples: 70 ok", one.Out, StringComparison.Ordinal);
        Assert.Contains("An across voltage of 1 mV lies", one.Out, StringComparison.Ordinal);
        Assert.False(File.Exists(folder["one/samples.part.csv"]));
        foreach (string k in new[] { "1", "2" })
        {
            CommandResult shard = Command.Run(["tolerance", "disc.toml", "--samples", "70", "--shard", k + "/2", "--out", "shard " + k], null, folder.Path);
            Assert.True(shard.Exit == 0, shard.Error);
            Assert.Contains("35 samples, 35 of them new", shard.Out, StringComparison.Ordinal);
        }

        // A shard that was killed: whole lines lost, and one cut short. It is refused, then goes on where it was.
        string journal = folder["shard 2/samples.part.csv"], text = File.ReadAllText(journal);
        string[] lines = text.Split('\n');
        File.WriteAllText(journal, string.Join('\n', lines[..^6]) + '\n' + lines[^6][..^9]);
        CommandResult early = Command.Run(["gather", "shard 1", "shard 2", "--out", "both"], null, folder.Path);
        Assert.Equal(2, early.Exit);
        Assert.Contains("shard 2 of 2 in 'shard 2' is unfinished: 5 of its samples are missing", early.Error, StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["both"]));
        CommandResult again = Command.Run(["tolerance", "disc.toml", "--samples", "70", "--shard", "2/2", "--out", "shard 2"], null, folder.Path);
        Assert.Contains("35 samples, 5 of them new", again.Out, StringComparison.Ordinal);

        CommandResult joined = Command.Run(["gather", "shard 2", "shard 1", "--explain", "1 mV", "--out", "both"], null, folder.Path);
        Assert.True(joined.Exit == 0, joined.Error);
        Assert.Equal(one.Out.Replace("results in one", "results in both", StringComparison.Ordinal), joined.Out);
        IReadOnlyList<string> files = TempFolder.FilesIn(folder["one"]);
        Assert.Equal(files, TempFolder.FilesIn(folder["both"]));
        Assert.Equal(
            ["budget.csv", "pictures/budget-0-deg.png", "pictures/budget-0-deg.svg", "pictures/contacts.png", "pictures/contacts.svg",
                "pictures/device.png", "pictures/device.svg", "pictures/samples-0-deg.png", "pictures/samples-0-deg.svg", "report.html", "run.json", "samples.csv"],
            files);
        foreach (string file in files.Where(f => f != "run.json"))
        {
            Assert.True(File.ReadAllBytes(folder["one/" + file]).AsSpan().SequenceEqual(File.ReadAllBytes(folder["both/" + file])), file);
        }

        // run.json differs in nothing but wall times.
        string Timeless(string f) => Regex.Replace(File.ReadAllText(folder[f]), "\"wall_s\": [0-9.E-]+", "");
        Assert.Equal(Timeless("one/run.json"), Timeless("both/run.json"));
        Tables(folder);

        // Another seed is another run: its samples do not mix.
        CommandResult mixed = Command.Run(["tolerance", "disc.toml", "--samples", "70", "--shard", "2/2", "--seed", "2", "--out", "shard 2"], null, folder.Path);
        Assert.Equal(2, mixed.Exit);
        Assert.Contains("holds samples of another run", mixed.Error, StringComparison.Ordinal);
    }

    // The columns that are fixed, sorted contributions, and samples whose readings follow the causes.
    private static void Tables(TempFolder folder)
    {
        CsvTable budget = CsvTable.Read(folder["one/budget.csv"]);
        Assert.Equal(["wiring", "pair", "cause", "contact", "sigma", "unit", "dv_dx_V", "dv_V", "part"], budget.Header[..9]);
        double last = double.PositiveInfinity, variance = 0;
        for (int r = 0; r < budget.Rows; r++)
        {
            if (budget.Text(r, "pair") == "across" && budget.Text(r, "part") == "odd")
            {
                double size = Math.Abs(budget.Number(r, "dv_V"));
                Assert.True(size <= last);
                last = size;
                variance += size * size;
                Assert.Equal(budget.Text(r, "cause") == "axis" ? ("", "1", "deg") : (budget.Text(r, "contact"), "5E-08", "m"), (budget.Text(r, "contact"), budget.Text(r, "sigma"), budget.Text(r, "unit")));
            }
        }

        CsvTable samples = CsvTable.Read(folder["one/samples.csv"]);
        Assert.Equal(70, samples.Rows);
        double[] across = [.. Enumerable.Range(0, samples.Rows).Select(r => samples.Number(r, "v_across_odd_V"))];
        double mean = across.Average(), spread = Math.Sqrt(across.Average(v => (v - mean) * (v - mean)));
        Assert.Equal(Math.Sqrt(variance), spread, 0.3 * spread);
        Assert.Equal("ok", samples.Text(0, "status"));
        Assert.True(Math.Abs(samples.Number(0, "axis_deg")) < 5 && Math.Abs(samples.Number(0, "position_c1_m")) < 3e-7);
    }

    [Fact]
    public void What_is_wrong_is_said_in_one_line()
    {
        using TempFolder folder = new();
        string bare = folder.Write("bare.toml", Device[..Device.IndexOf("[tolerance]", StringComparison.Ordinal)]);
        CommandResult r = Command.Run(["tolerance", bare, "--out", folder["out"]], null);
        Assert.Equal(2, r.Exit);
        Assert.Contains(":1:1: The file has no cause of error in [tolerance]", Assert.Single(r.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
        foreach ((string[] options, string message) in new (string[], string)[]
        {
            (["--shard", "3/2"], "--shard '3/2': write k/n"),
            (["--confidence", "0.1", "--shard", "1/2"], "--confidence looks at all samples"),
            (["--explain", "12 mA"], "--explain '12 mA': a voltage is wanted"),
            (["--samples", "-1"], "--samples must be from 0"),
        })
        {
            CommandResult bad = Command.Run(["tolerance", bare, .. options], null);
            Assert.Equal(2, bad.Exit);
            Assert.Contains(message, bad.Error, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void A_drive_with_a_shift_says_so_and_reads_otherwise()
    {
        using TempFolder folder = new();
        string device = folder.Write("disc.toml", Device);
        CommandResult plain = Command.Run("drive", device, "--no-pictures", "--maps", "none", "--out", folder["plain"]);
        CommandResult moved = Command.Run("drive", device, "--no-pictures", "--maps", "none", "--shift", "c2=200nm", "--shift", "axis=1deg", "--out", folder["moved"]);
        Assert.Equal((0, 0), (plain.Exit, moved.Exit));
        Assert.NotEqual(CsvTable.Read(folder["plain/curves.csv"]).Number(0, "v_across_V"), CsvTable.Read(folder["moved/curves.csv"]).Number(0, "v_across_V"));
        Assert.Contains(" with c2=200nm, axis=1deg\n", moved.Out, StringComparison.Ordinal);
        Assert.Contains("\"shift\": \"c2=200nm; axis=1deg\"", File.ReadAllText(folder["moved/run.json"]), StringComparison.Ordinal);
        CommandResult wrong = Command.Run("drive", device, "--shift", "c9=200nm", "--out", folder["wrong"]);
        Assert.Equal(2, wrong.Exit);
        Assert.Contains("--shift 'c9=200nm': there is no contact and no cause 'c9'", wrong.Error, StringComparison.Ordinal);
    }
}
