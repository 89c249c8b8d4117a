using System.Text.Json;
using System.Text.Json.Nodes;
using System.Text.RegularExpressions;
using FieldSolve.Cli.Commands;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Tests.MutationTests;
using Json.Schema;
using Tomlyn;
using TomlArray = Tomlyn.Model.TomlArray;
using TomlTable = Tomlyn.Model.TomlTable;
using TomlTableArray = Tomlyn.Model.TomlTableArray;

namespace FieldSolve.Tests.DocumentsTests;

/// <summary>
/// The committed JSON Schemas (draft 2020-12): the samples and the summaries satisfy them, and the device file's schema knows the keys that the
/// reader knows, no more and no fewer.
/// </summary>
public sealed partial class SchemaTests
{
    private static readonly string DeviceSchema = File.ReadAllText(Repository.Sample("device.schema.json"));

    private static readonly string Summaries = File.ReadAllText(Path.Combine(Repository.Root, "src", "FieldSolve.Cli", "Schemas", "summary.schema.json"));

    /// <summary>All device files; bands files have keys of their own.</summary>
    public static TheoryData<string> Samples =>
    [
        .. Directory.GetFiles(Repository.Sample(""), "*.toml", SearchOption.AllDirectories)
            .Select(f => Path.GetRelativePath(Repository.Sample(""), f).Replace('\\', '/')).Where(f => !f.StartsWith("bands/", StringComparison.Ordinal)).Order(StringComparer.Ordinal),
    ];

    [Theory]
    [MemberData(nameof(Samples))]
    public void A_sample_satisfies_the_schema(string name) =>
        Assert.Equal("", Errors(DeviceSchema, Json(File.ReadAllText(Repository.Sample(name)))));

    // Either a file or corners.
    [Theory]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"9 um\", \"0 um\"], [\"9 um\", \"9 um\"]], unit = \"um\"", true)]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"9 um\", \"0 um\"]]", false)]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"9 um\", \"0 um\"], [\"9 um\", \"9 um\"]], file = \"a.wkt\"", false)]
    [InlineData("file = \"a.wkt\", unit = \"um\", holes = []", false)]
    public void An_outline_of_corners_satisfies_the_schema_or_not(string outline, bool good) => Assert.Equal(
        good, Errors(DeviceSchema, Json(DeviceTexts.Disc.Replace("disc = { diameter = \"8 um\" }", $"outline = {{ {outline} }}", StringComparison.Ordinal))).Length == 0);

    // What the reader refuses for its keys or kinds of values the schema refuses too.
    [Theory]
    [InlineData("diameter", "diametre")]
    [InlineData("kind = \"ohmic\"", "kind = \"ohmig\"")]
    [InlineData("\"4 mS\"", "4e-3")]
    [InlineData("\"4 mS\"", "\"mS\"")]
    [InlineData("steps = 11", "steps = 0")]
    [InlineData("steps = 11", "steps = \"11\"")]
    [InlineData("along = [\"n\", \"p\"]", "along = [\"n\"]")]
    [InlineData("at = \"180 deg\", ", "")]
    [InlineData("source = \"w\"\n", "")]
    [InlineData("[drive]", "[drvie]")]
    [InlineData("[drive]", "[tolerance]\naxis = 1\n[drive]")]
    [InlineData("[drive]", "[tolerance]\naxis = { shape = \"uniform\" }\n[drive]")]
    [InlineData("[drive]", "[[tolerance.layer]]\nx = \"1 nm\"\n[drive]")]
    [InlineData("[drive]", "[fit]\na = \"4 mS\"\n[drive]")]
    [InlineData("[drive]", "[fit]\na = { mean = \"4 mS\" }\n[drive]")]
    public void A_fault_of_a_key_is_a_fault_of_the_schema(string old, string text)
    {
        string bad = DeviceTexts.Disc.ReplaceLineEndings("\n").Replace(old, text, StringComparison.Ordinal);
        Assert.NotEmpty(DeviceFile.Parse(bad, "d.toml", "").Faults);
        Assert.NotEqual("", Errors(DeviceSchema, Json(bad)));
        Assert.Equal("", Errors(DeviceSchema, Json(DeviceTexts.Disc)));
    }

    /// <summary>Where an unknown key goes, and the path to the same table in the schema.</summary>
    public static TheoryData<string, string, string> Tables
    {
        get
        {
            TheoryData<string, string, string> all = new()
            {
                { "title = \"Disc\"", "title = \"Disc\"\nqqqqqq = 1", "properties" },
                { "[sheet]", "[sheet]\nqqqqqq = 1", "$defs/sheet/properties" },
                { "disc = { diameter = \"8 um\" }", "disc = { qqqqqq = 1 }", "$defs/sheet/properties/disc/properties" },
                { "disc = { diameter = \"8 um\" }", "bar = { qqqqqq = 1 }", "$defs/sheet/properties/bar/properties" },
                { "disc = { diameter = \"8 um\" }", "hall_bar = { qqqqqq = 1 }", "$defs/sheet/properties/hall_bar/properties" },
                { "disc = { diameter = \"8 um\" }", "ring = { qqqqqq = 1 }", "$defs/sheet/properties/ring/properties" },
                { "disc = { diameter = \"8 um\" }", "outline = { qqqqqq = 1 }", "$defs/sheet/properties/outline/properties" },
                { "name = \"w\"", "name = \"w\"\nqqqqqq = 1", "$defs/contact/properties" },
                { "edge = { at = \"180 deg\", width = \"0.7 um\" }", "pad = { qqqqqq = 1 }", "$defs/pad/oneOf/1/properties" },
                { "[[point]]", "[[contacts]]\nqqqqqq = 1\n[[point]]", "$defs/contacts/properties" },
                { "[[point]]", "[[point]]\nqqqqqq = 1", "$defs/tip/properties" },
                { "[[wiring]]", "[[wiring]]\nqqqqqq = 1", "$defs/wiring/properties" },
                { "[drive]", "[drive]\nqqqqqq = 1", "$defs/drive/properties" },
                { "steps = 11", "qqqqqq = 1", "$defs/drive/properties/current/properties" },
                { "[drive]", "[turn]\nqqqqqq = 1\n[drive]", "$defs/turn/properties" },
                { "[drive]", "[mesh]\nqqqqqq = 1\n[drive]", "$defs/mesh/properties" },
                { "[drive]", "[caution]\nqqqqqq = 1\n[drive]", "$defs/caution/properties" },
                { "[drive]", "[tolerance]\nqqqqqq = 1\n[drive]", "$defs/tolerance/properties" },
                { "[drive]", "[tolerance.contacts]\nqqqqqq = 1\n[drive]", "$defs/tolerance_contacts/properties" },
                { "[drive]", "[[tolerance.contact]]\nqqqqqq = 1\n[drive]", "$defs/tolerance_contact/properties" },
                { "[drive]", "[[tolerance.layer]]\nqqqqqq = 1\n[drive]", "$defs/tolerance_layer/properties" },
                { "[drive]", "[tolerance]\naxis = { qqqqqq = 1 }\n[drive]", "$defs/spread/properties" },
                { "[drive]", "[tolerance]\nsharpness = { qqqqqq = 1 }\n[drive]", "$defs/plain_spread/properties" },
                { "[drive]", "[fit]\nqqqqqq = 1\n[drive]", "$defs/fit/properties" },
                { "[drive]", "[fit.contacts]\nqqqqqq = 1\n[drive]", "$defs/fit_contacts/properties" },
                { "[drive]", "[[fit.contact]]\nqqqqqq = 1\n[drive]", "$defs/fit_contact/properties" },
                { "[drive]", "[fit]\na = { qqqqqq = 1 }\n[drive]", "$defs/free_number/properties" },
                { "[drive]", "[fit]\nsharpness = { qqqqqq = 1 }\n[drive]", "$defs/plain_free_number/properties" },
            };
            for (int k = 0; k < LawCatalogue.Kinds.Count; k++)
            {
                all.Add("kind = \"ohmic\"", $"qqqqqq = 1\nkind = \"{LawCatalogue.Kinds[k].Name}\"", $"$defs/law/oneOf/{k}/properties");
            }

            return all;
        }
    }

    [Theory]
    [MemberData(nameof(Tables))]
    public void The_schema_knows_the_keys_of_the_reader(string old, string text, string path)
    {
        string bad = DeviceTexts.Disc.ReplaceLineEndings("\n").Replace(old, text, StringComparison.Ordinal);
        string message = DeviceFile.Parse(bad, "d.toml", "").Faults.First(f => f.Message.Contains("unknown key 'qqqqqq'", StringComparison.Ordinal)).Message;
        JsonNode? at = JsonNode.Parse(DeviceSchema);
        foreach (string step in path.Split('/'))
        {
            at = int.TryParse(step, out int index) ? at![index] : at![step];
        }

        IEnumerable<string> known = Names().Matches(message.Split("allowed are")[1]).Select(m => m.Groups[1].Value);
        if (message.EndsWith('\u2026'))
        {
            // A long list is cut short in the message; the causes are those of the catalogue.
            Assert.Subset(at!.AsObject().Select(p => p.Key).ToHashSet(), known.ToHashSet());
            string[] others = path.Contains("fit", StringComparison.Ordinal) ? ["numerical_share", "contacts", "contact"] : ["contacts", "contact", "layer"];
            known = CauseCatalogue.Of(CauseScope.Sheet).Select(c => c.Key).Concat(others);
        }

        Assert.Equal(known.Order(StringComparer.Ordinal), at!.AsObject().Select(p => p.Key).Order(StringComparer.Ordinal));
    }

    // A further command is one line here and one definition in the schema.
    [Theory]
    [InlineData("check", "small")]
    [InlineData("mesh", "small")]
    [InlineData("drive", "small", "--no-pictures", "--maps", "none")]
    [InlineData("turn", "small", "--no-pictures", "--turn-axis", "4")]
    [InlineData("lockin", "lockin", "--no-pictures")]
    [InlineData("bands", "bands/measured-profile.toml", "--no-pictures")]
    [InlineData("bands", "cones", "--no-pictures")]
    [InlineData("tolerance", "disc", "--no-pictures", "--samples", "8")]
    [InlineData("fit", "fit", "--no-pictures", "--suggest", "1")]
    [InlineData("overlay", "map", "--no-pictures")]
    [InlineData("overlay", "field map", "--no-pictures", "--quantity", "field")]
    public async Task A_summary_satisfies_the_schema(string command, string input, params string[] options)
    {
        using var folder = new TempFolder();
        string small = SmallDevice.Text.ReplaceLineEndings("\n").Replace("steps = 4", "steps = 2", StringComparison.Ordinal);
        string[] paths = input switch
        {
            "small" => [folder.Write("small.toml", small)],
            "lockin" => [folder.Write("small.toml", small.Replace("both_signs = true", "frequency = \"20 Hz\"", StringComparison.Ordinal))],
            "disc" => [folder.Write("disc.toml", EndToEndTests.ToleranceTests.Device)],
            "fit" => [folder.Write("bar.toml", EndToEndTests.FitTests.Device), folder.Write("data.csv", EndToEndTests.FitTests.Data)],
            "map" => [folder.Write("small.toml", small), folder.Write("map.csv", Map("value_mV", x => 8 - x))],
            "field map" => [folder.Write("small.toml", small), folder.Write("map.csv", Map("value_V_per_m", x => 6000 + (10 * x)))],
            "cones" => [folder.Write("cones.toml", """
                chemical_potential = "50 meV"
                relaxation_time = "1 ps"
                [[cone]]
                v_a = "3e5 m/s"
                v_b = "1e5 m/s"
                tilt_a = 0.3
                gap = "20 meV"
                """)],
            _ => [Repository.Sample(input)],
        };
        string[] into = command switch { "check" => [], "mesh" => ["--out", folder["out.vtu"]], _ => ["--out", folder["out"]] };
        CommandResult result = await CommandInside.RunAsync([command, .. paths, .. into, .. options, "--json"]);
        Assert.True(result.Exit is 0 or 3, result.Error);
        Satisfies(command, result.Out);

        // Scripts find the results under either name, whatever the command.
        if (command is not ("check" or "mesh"))
        {
            JsonNode summary = JsonNode.Parse(result.Out)!;
            Assert.Equal((folder["out"], folder["out"]), ((string?)summary["folder"], (string?)summary["out"]));
        }
    }

    [Fact]
    public async Task The_summary_of_joined_shards_satisfies_the_schema()
    {
        using var folder = new TempFolder();
        string device = folder.Write("disc.toml", EndToEndTests.ToleranceTests.Device);
        foreach (string k in new[] { "1", "2" })
        {
            CommandResult shard = await CommandInside.RunAsync(["tolerance", device, "--samples", "4", "--shard", k + "/2", "--out", folder[k], "--quiet"]);
            Assert.True(shard.Exit == 0, shard.Error);
        }

        CommandResult result = await CommandInside.RunAsync(["gather", folder["1"], folder["2"], "--out", folder["out"], "--no-pictures", "--json"]);
        Assert.True(result.Exit == 0, result.Error);
        Satisfies("gather", result.Out);
    }

    // The page ends at once: its token is cancelled before it starts.
    [Fact]
    public async Task The_summary_of_open_satisfies_the_schema()
    {
        using var folder = new TempFolder();
        CommandResult result = await CommandInside.RunAsync(["open", folder.Write("small.toml", SmallDevice.Text), "--no-browser", "--json"], new CancellationToken(true));
        Assert.True(result.Exit == 0, result.Error);
        Satisfies("open", result.Out);
    }

    [Fact]
    public void Every_command_has_its_summary_in_the_schema() => Assert.Equal(
        CommandList.All().Select(c => c.Name).Order(StringComparer.Ordinal),
        JsonNode.Parse(Summaries)!["$defs"]!.AsObject().Select(p => p.Key).Order(StringComparer.Ordinal));

    private static void Satisfies(string command, string printed)
    {
        var schema = (JsonObject)JsonNode.Parse(Summaries)!;
        Assert.True(schema["$defs"]!.AsObject().ContainsKey(command), command);
        schema["$ref"] = $"#/$defs/{command}";
        using JsonDocument summary = JsonDocument.Parse(printed);
        Assert.Equal("", Errors(schema.ToJsonString(), summary.RootElement));

        // A schema that asks for nothing would pass as well.
        using JsonDocument empty = JsonDocument.Parse("{}");
        Assert.NotEqual("", Errors(schema.ToJsonString(), empty.RootElement));
    }

    // A raster over the small bar, falling along x as the potential does, with a ripple in place of noise.
    private static string Map(string column, Func<double, double> value)
    {
        var text = new System.Text.StringBuilder($"x_um,y_um,{column}\n");
        for (int i = 0; i < 60; i++)
        {
            (double x, double y) = (-5 + (i % 10 * 10 / 9.0), -1.5 + (i / 10 * 0.6));
            text.Append(System.Globalization.CultureInfo.InvariantCulture, $"{x:F4},{y:F4},{value(x) * (1 + (0.01 * Math.Sin(7 * i))):F5}\n");
        }

        return text.ToString();
    }

    [GeneratedRegex("'([^']+)'")]
    private static partial Regex Names();

    private static string Errors(string schema, JsonElement value)
    {
        EvaluationResults results = JsonSchema.FromText(schema).Evaluate(value, new EvaluationOptions { OutputFormat = OutputFormat.List });
        return results.IsValid ? "" : string.Join('\n', (results.Details ?? []).Where(d => d.Errors is not null)
            .SelectMany(d => d.Errors!.Select(e => $"{d.InstanceLocation}: {e.Key} {e.Value}")).Append("not valid"));
    }

    private static JsonElement Json(string toml)
    {
        JsonNode? Node(object? value) => value switch
        {
            TomlTable t => new JsonObject(t.Select(p => KeyValuePair.Create(p.Key, Node(p.Value)))),
            TomlTableArray tables => new JsonArray([.. tables.Select(Node)]),
            TomlArray list => new JsonArray([.. list.Select(Node)]),
            string s => s,
            long n => n,
            double d => d,
            bool b => b,
            _ => throw new InvalidDataException($"no JSON for {value?.GetType()}"),
        };
        using JsonDocument json = JsonDocument.Parse(Node(TomlSerializer.Deserialize<TomlTable>(toml))!.ToJsonString());
        return json.RootElement.Clone();
    }
}
