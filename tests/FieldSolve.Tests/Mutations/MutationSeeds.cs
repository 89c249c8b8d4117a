using System.Text;
using FieldSolve.Files;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.MutationTests;

/// <summary>One good input of a command, and which of its files is to be spoilt.</summary>
/// <param name="Command">Name of the command.</param>
/// <param name="Kind">Of the spoilt file.</param>
/// <param name="Spoilt">Name of the spoilt file.</param>
/// <param name="Files">Good texts by name; a grid's bytes are the characters of Latin-1.</param>
/// <param name="Arguments">What follows the command; "@x" is file x of the run's folder.</param>
internal sealed record MutationSeed(string Command, TextKind Kind, string Spoilt, IReadOnlyDictionary<string, string> Files, params string[] Arguments);

/// <summary>Good inputs of all commands, small enough that what survives is solved in a moment.</summary>
internal static class MutationSeeds
{
    public const string OutlineSheet = """
        [sheet]
        outline = { file = "named.txt", unit = "um" }
        dead_edge = "20 nm"
        [[contact]]
        name = "s"
        edge = { from = ["0 um", "0.5 um"], to = ["0 um", "1.5 um"] }
        [[contact]]
        name = "d"
        pad = { file = "named.txt", name = "flake" }

        """ + DeviceTexts.Rest;

    public const string GeoJson = """
        { "type": "FeatureCollection", "features": [ { "type": "Feature", "properties": { "name": "flake" }, "geometry": { "type": "Polygon", "coordinates": [
          [[0,0],[10,0],[10,2],[5,2.5],[0,2],[0,0]], [[4,1],[6,1],[5,1.5],[4,1]] ] } } ] }
        """;

    public const string Wkt = "MULTIPOLYGON (((0 0, 20 0, 20 2, 0 2, 0 0), (4 1, 6 1, 5 1.5, 4 1)), ((30 0, 31 0, 31 1, 30 0)))";

    public const string Cones = """
        chemical_potential = "50 meV"
        temperature = "0 K"
        relaxation_time = "1 ps"
        [[cone]]
        v_a = "3e5 m/s"
        v_b = "1e5 m/s"
        tilt_a = 0.3
        gap = "20 meV"
        """;

    public const string ProfileBands = "[profile]\nfile = \"named.txt\"\n";

    public const string Voltages = "# made up\nwiring,pair,current_uA,value_mV,sigma_uV\nbar,along,10,40,100\nbar,along,20,80,100\nbar,across,20,-4,100\nbar,source,-20,-240,100\n";

    /// <summary>What a probe sees of the small bar at 30 uA: 7.5 mV/um along, and a Hall field.</summary>
    public static string Map { get; } = "x_um,y_um,value_mV,sigma_mV\n" + string.Concat(
        from x in Enumerable.Range(-4, 9) from y in Enumerable.Range(-1, 3) select FormattableString.Invariant($"{x},{y},{(7.5 * (6 - x)) - (2.25 * y)},1\n"));


    /// <summary>What a page asks `open` to change.</summary>
    public const string Edit = """
        {"gesture":"g1","ops":[{"op":"set","path":"law.a","value":"2 mS"},{"op":"set","path":"contact[2].edge.from","value":"0 um","plain":false},{"op":"move","name":"tip","x":1e-6,"y":5e-7},
        {"op":"add","kind":"point","x":0,"y":1e-6},{"op":"own","name":"top 1"},{"op":"drop","name":"bottom 1"},{"op":"remove","path":"mesh.even_error"},{"op":"add","kind":"wiring","x":0,"y":0}]}
        """;

    private const string Causes = "\n[tolerance]\naxis = \"1 deg\"\na = \"0.05 mS\"\ngrowth = \"20 nm\"\n[tolerance.contacts]\nposition = \"20 nm\"\n[[tolerance.layer]]\nname = \"gold\"\nx = \"10 nm\"\n";

    private const string Free = "\n[fit]\na = { start = \"1.5 mS\", min = \"0.1 mS\" }\nhall = true\n[fit.contacts]\nposition = { sigma = \"50 nm\" }\n";

    private const string Coarse = "\n[drive]\ncurrent = { from = \"30 uA\", to = \"30 uA\", steps = 1 }\n[mesh]\nerror = 5e-2\neven_error = 0.3\nmax_unknowns = 4000\n";

    /// <summary>Every second field of the sample's table of a law: a quarter of its rows.</summary>
    public static string Table { get; } = string.Join('\n', File.ReadAllLines(Repository.Sample("bar-table.csv"))
        .Where(l => l.Split(',') is not [var a, var b, ..] || !(Skipped(a) || Skipped(b))));

    public static string TableDevice { get; } = DeviceTexts.Bar.ReplaceLineEndings("\n").Replace(
        "kind = \"ohmic\"\na = \"4 mS\"\nb = \"1 mS\"", "kind = \"table\"\nfile = \"named.txt\"", StringComparison.Ordinal);

    public static string Profile { get; } = File.ReadAllText(Repository.Sample("bands/measured-profile.csv"));

    /// <summary>A coarse bar with one of three laws.</summary>
    public static string Small(int law, bool ac = false) => SmallDevice.Text.ReplaceLineEndings("\n").Replace(SmallDevice.Law.ReplaceLineEndings("\n"), (law % 3) switch
    {
        0 => SmallDevice.Law,
        1 => "kind = \"quadratic\"\naxis = \"20 deg\"\na = \"1 mS\"\nb = \"3 mS\"\nhall = \"0.1 mS\"\nd11 = \"1e-9 A m/V^2\"\nd12 = \"1e-9 A m/V^2\"\nfield_limit = \"100 kV/m\"",
        _ => "kind = \"saturating\"\na = \"1 mS\"\nb = \"2 mS\"\nhall = \"0.1 mS\"\nfield_a = \"100 kV/m\"\nfield_b = \"50 kV/m\"\nsharpness = 2",
    }, StringComparison.Ordinal)
        .Replace("steps = 4", "steps = 2", StringComparison.Ordinal)
        .Replace("both_signs = true", ac ? "frequency = \"20 Hz\"" : "both_signs = true", StringComparison.Ordinal)
        .Replace("error = 1e-2\neven_error = 0.1", "error = 5e-2\neven_error = 0.3\nmax_unknowns = 4000", StringComparison.Ordinal);

    /// <summary>The grid that `mesh` writes, as text: arrays as words, nothing binary.</summary>
    public static string PlainGrid(string path)
    {
        (double[] x, double[] y, int[] corners, _) = VtuTriangles.Read(path);
        var text = new StringBuilder(FormattableString.Invariant(
            $"<?xml version=\"1.0\"?>\n<VTKFile type=\"UnstructuredGrid\" version=\"1.0\" byte_order=\"LittleEndian\">\n<UnstructuredGrid>\n<Piece NumberOfPoints=\"{x.Length}\" NumberOfCells=\"{corners.Length / 3}\">\n"));
        text.Append("<Points>\n<DataArray type=\"Float64\" NumberOfComponents=\"3\" format=\"ascii\">\n");
        text.AppendJoin('\n', x.Zip(y, (a, b) => FormattableString.Invariant($"{a:R} {b:R} 0")));
        text.Append("\n</DataArray>\n</Points>\n<Cells>\n<DataArray type=\"Int64\" Name=\"connectivity\" format=\"ascii\">\n");
        text.AppendJoin('\n', corners.Chunk(3).Select(c => FormattableString.Invariant($"{c[0]} {c[1]} {c[2]}")));
        text.Append("\n</DataArray>\n<DataArray type=\"Int64\" Name=\"offsets\" format=\"ascii\">\n");
        text.AppendJoin(' ', Enumerable.Range(1, corners.Length / 3).Select(k => 3 * k));
        text.Append("\n</DataArray>\n<DataArray type=\"UInt8\" Name=\"types\" format=\"ascii\">\n");
        text.AppendJoin(' ', Enumerable.Repeat(5, corners.Length / 3));
        return text.Append("\n</DataArray>\n</Cells>\n</Piece>\n</UnstructuredGrid>\n</VTKFile>\n").ToString();
    }

    /// <summary>Inputs of all commands; grids and journals are made by the commands themselves.</summary>
    /// <param name="folder">To work in.</param>
    public static async Task<IReadOnlyList<MutationSeed>> All(string folder)
    {
        string tolerant = Small(0) + Causes, main = Path.Combine(folder, "d.toml"), grid = Path.Combine(folder, "seed.vtu");
        await File.WriteAllTextAsync(main, tolerant);
        Assert.Equal(0, (await CommandInside.RunAsync(["mesh", main, "--out", grid])).Exit);
        string binary = Encoding.Latin1.GetString(await File.ReadAllBytesAsync(grid)), plain = PlainGrid(grid);
        foreach (string k in (string[])["1", "2"])
        {
            CommandResult shard = await CommandInside.RunAsync(["tolerance", main, "--samples", "4", "--shard", k + "/2", "--out", Path.Combine(folder, "seed" + k)]);
            Assert.True(shard.Exit == 0, shard.Error);
        }

        string one = await File.ReadAllTextAsync(Path.Combine(folder, "seed1", SampleJournal.FileName)), two = await File.ReadAllTextAsync(Path.Combine(folder, "seed2", SampleJournal.FileName));
        const string Journal = "s1/" + SampleJournal.FileName;
        string outline = OutlineSheet + Coarse, bar = TableDevice + Coarse;
        string[] into = ["--out", "@out", "--no-pictures", "--json"];
        static Dictionary<string, string> Files(params string[] pairs) => pairs.Chunk(2).ToDictionary(p => p[0], p => p[1], StringComparer.Ordinal);
        MutationSeed Device(string command, string text, params string[] more) => new(command, TextKind.Toml, "d.toml", Files("d.toml", text), ["@d.toml", .. more]);
        return
        [
            Device("check", Small(0), "--json"), Device("check", DeviceTexts.Disc), Device("check", await File.ReadAllTextAsync(Repository.Sample("gated-bar.toml"))),
            new("check", TextKind.GeoJson, "named.txt", Files("d.toml", OutlineSheet, "named.txt", GeoJson), "@d.toml", "--json"),
            new("check", TextKind.Wkt, "named.txt", Files("d.toml", OutlineSheet, "named.txt", Wkt), "@d.toml", "--json"),
            new("check", TextKind.Csv, "named.txt", Files("d.toml", TableDevice, "named.txt", Table), "@d.toml", "--json"),
            Device("mesh", Small(1), "--out", "@out.vtu", "--json"), new("mesh", TextKind.GeoJson, "named.txt", Files("d.toml", outline, "named.txt", GeoJson), "@d.toml", "--out", "@out.vtu", "--json"),
            Device("drive", Small(0), into), Device("drive", Small(1), into), Device("drive", Small(2), into),
            new("drive", TextKind.Vtu, "m.vtu", Files("d.toml", tolerant, "m.vtu", binary), ["@d.toml", "--mesh", "@m.vtu", .. into]),
            new("drive", TextKind.Vtu, "m.vtu", Files("d.toml", tolerant, "m.vtu", plain), ["@d.toml", "--mesh", "@m.vtu", .. into]),
            new("drive", TextKind.Wkt, "named.txt", Files("d.toml", outline, "named.txt", Wkt), ["@d.toml", .. into]),
            new("drive", TextKind.Csv, "named.txt", Files("d.toml", bar, "named.txt", Table), ["@d.toml", .. into]),
            Device("turn", Small(1), ["--turn-axis", "4", .. into]), new("turn", TextKind.Vtu, "m.vtu", Files("d.toml", tolerant, "m.vtu", plain), ["@d.toml", "--turn-axis", "4", "--mesh", "@m.vtu", .. into]),
            Device("lockin", Small(1, ac: true), into), Device("lockin", Small(2, ac: true) + "gate_capacitance = \"10 nF/cm^2\"\n", into),
            Device("bands", Cones, into), new("bands", TextKind.Csv, "named.txt", Files("d.toml", ProfileBands, "named.txt", Profile), ["@d.toml", .. into]),
            Device("tolerance", tolerant, ["--samples", "3", .. into]), new("tolerance", TextKind.Journal, Journal, Files("d.toml", tolerant, Journal, one), "@d.toml", "--samples", "4", "--shard", "1/2", "--out", "@s1"),
            new("gather", TextKind.Journal, Journal, Files("d.toml", tolerant, Journal, one, "s2/" + SampleJournal.FileName, two), ["@s1", "@s2", "--device", "@d.toml", .. into]),
            new("gather", TextKind.Toml, "d.toml", Files("d.toml", tolerant, Journal, one, "s2/" + SampleJournal.FileName, two), ["@s1", "@s2", "--device", "@d.toml", .. into]),
            new("fit", TextKind.Toml, "d.toml", Files("d.toml", Small(0) + Free, "v.csv", Voltages), ["@d.toml", "@v.csv", .. into]),
            new("fit", TextKind.Csv, "v.csv", Files("d.toml", Small(0) + Free, "v.csv", Voltages), ["@d.toml", "@v.csv", .. into]),
            new("overlay", TextKind.Toml, "d.toml", Files("d.toml", Small(0), "v.csv", Map), ["@d.toml", "@v.csv", .. into]),
            new("overlay", TextKind.Csv, "v.csv", Files("d.toml", Small(0), "v.csv", Map), ["@d.toml", "@v.csv", .. into]),
            Device("open", Small(1), "--no-browser", "--quiet"),
        ];
    }

    private static bool Skipped(string field) => field.TrimStart('-') is "25000" or "6000";
}
