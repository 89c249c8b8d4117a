using System.Globalization;
using System.Text;
using System.Text.Json;
using System.Text.Json.Nodes;
using System.Text.RegularExpressions;
using FieldSolve.Files;

namespace FieldSolve.Tests.MutationTests;

/// <summary>What kind of text a file holds; its structure is what the mutator changes.</summary>
internal enum TextKind
{
    Toml,
    GeoJson,
    Wkt,
    Csv,
    Vtu,
    Journal,
}

/// <summary>Makes bad input from good: edits that keep most of the structure, so that they get past the first check, and plain bytes.</summary>
/// <param name="random">Seeded; the same seed makes the same input.</param>
internal sealed partial class Mutator(Random random)
{
    private static readonly string[] Numbers =
    [
        "0", "-0", "1", "-1", "2", "3", "1e-300", "1e300", "-1e300", "4.9e-324", "1e999", "nan", "inf", "-inf", "0.1", "1e-9", "1e9", "999999999999999999999", "2147483648",
        "-2147483649", "1_000", "0x10", "00", ".5", "5.", "1e", "1,5", "1e-15", "1e-12", "1e15", "360", "90.0000001",
    ];

    private static readonly string[] Units =
    [
        "um", "nm", "m", "fm", "km", "mm", "mS", "S", "uA", "A", "V/m", "kV/m", "A m/V^2", "A m^2/V^3", "ohm um", "ohm cm^2", "deg", "rad", "Hz", "nF/cm^2", "eV", "K", "s", "m/s",
        "1/nm", "", "µm", "um^2", "um um", "/", "^", "um^999", "m/m/m", "mS/sq", "Um", "\\u00b5m",
    ];

    private static readonly string[] Pieces =
    [
        "[", "]", "[[", "]]", "{", "}", "\"", "'", "\"\"\"", "'''", "=", ",", ".", "\n", "\r", "#", "\\", "\t", "\0", "\uFEFF", "\u2028", "\uD83D\uDE00", "(", ")", ";", ":", "null", "true",
        "-", "+", "e", "1979-05-27", "a.b.c", "[sheet]", "[[contact]]", "EMPTY", "MULTIPOLYGON", "Z", "\u0007", "  ", "\"\\", "\\x4", "\\ud800",
    ];

    [GeneratedRegex(@"[-+]?\d+(\.\d+)?([eE][-+]?\d+)?")]
    private static partial Regex Number();

    // Numbers of the law, the drive, tips and accuracy: the outline and its contacts stay sound.
    [GeneratedRegex(@"(?<=^(?:a|b|hall|d11|d12|field_\w+|sharpness|axis|current|at|frequency|v_a|v_b|tilt_a|gap|chemical_potential|relaxation_time|\w*error) = [^\n]*)(?<![\w.])[-+]?\d+(\.\d+)?([eE][-+]?\d+)?", RegexOptions.Multiline)]
    private static partial Regex Solved();

    private static readonly string[] Columns = ["ea_V_per_m", "value_V", "value_mV", "sigma_V", "current_A", "current_rms_uA", "harmonic", "wiring", "pair", "source", "x_um", "y", "direction_deg", "value_m"];

    private static readonly string[] GridWords =
    [
        "Float64", "Float32", "Int64", "Int32", "Int8", "UInt8", "UInt16", "UInt64", "UInt32", "ascii", "binary", "appended", "vtkZLibDataCompressor", "vtkLZ4DataCompressor", "BigEndian",
        "connectivity", "offsets", "types", "Points", "", "-1", "0", "1", "3", "20000001", "9223372036854775807", "18446744073709551615",
    ];

    [GeneratedRegex("\"([^\"\\n]*)\"")]
    private static partial Regex Quoted();

    /// <summary>One to four edits of a good text.</summary>
    /// <remarks>A grid's bytes are the characters of Latin-1, since a part of it is binary.</remarks>
    public byte[] Mutate(string good, TextKind kind)
    {
        string text = good;
        for (int edits = 1 + random.Next(random.Next(1, 5)); edits > 0; edits--)
        {
            text = random.Next(10) < 7 ? kind switch
            {
                TextKind.Toml => TomlEdit(text),
                TextKind.GeoJson => JsonEdit(text),
                TextKind.Wkt => NumberEdit(text),
                TextKind.Vtu => GridEdit(text),
                TextKind.Journal => Sealed(CellEdit(text, random.Next(4) == 0 ? ';' : ',')),
                _ => CellEdit(text, ','),
            } : PlainEdit(text);
        }

        byte[] bytes = (kind == TextKind.Vtu ? Encoding.Latin1 : Encoding.UTF8).GetBytes(text);
        return random.Next(8) == 0 ? BytesEdit(bytes) : bytes;
    }

    /// <summary>Changes one or two numbers by factors and signs and keeps all else: most such devices are still devices.</summary>
    public string Scale(string good)
    {
        string text = good;
        for (int edits = 1 + random.Next(3); edits > 0; edits--)
        {
            text = At(Solved(), text, m =>
            {
                double value = double.Parse(m, CultureInfo.InvariantCulture);
                double factor = random.Next(4) switch { 0 => -1, 1 => Math.Pow(10, random.Next(-4, 5)), 2 => random.NextDouble() * 2, _ => 0 };
                return Math.Round(value * factor, 6).ToString("R", CultureInfo.InvariantCulture);
            });
        }

        return text;
    }

    private string TomlEdit(string text)
    {
        List<string> lines = [.. text.Split('\n')];
        int i = random.Next(lines.Count), j = random.Next(lines.Count);
        switch (random.Next(11))
        {
            case 0:
                lines.RemoveAt(i);
                break;
            case 1:
                lines.Insert(j, lines[i]);
                break;
            case 2:
                (lines[i], lines[j]) = (lines[j], lines[i]);
                break;
            case 3:
                return NumberEdit(text);
            case 4:
                return At(Quoted(), text, _ => $"\"{Pick(Numbers)} {Pick(Units)}\"");
            case 5:
                return At(Quoted(), text, m => m[..^1] + Pick(Units) + "\"");
            case 6:
                return At(Quoted(), text, _ => Pick(Numbers));
            case 7: // a value from elsewhere
                MatchCollection all = Quoted().Matches(text);
                return all.Count == 0 ? text : At(Quoted(), text, _ => all[random.Next(all.Count)].Value);
            case 8: // a key from elsewhere
                int equals = lines[i].IndexOf('=', StringComparison.Ordinal), other = lines[j].IndexOf('=', StringComparison.Ordinal);
                if (equals > 0 && other > 0)
                {
                    lines[i] = lines[j][..other] + lines[i][equals..];
                }

                break;
            case 9:
                int sign = lines[i].IndexOf('=', StringComparison.Ordinal);
                lines[i] = sign > 0 ? lines[i][..(sign + 1)] + Pick(["[]", "{}", "[[]]", "[{}]", "\"\"", "true", "[\"1 um\"]", "[[\"1 um\", \"2 um\"]]", "{ file = \".\" }", "''"]) : lines[i];
                break;
            default: // a block again
                int count = Math.Min(1 + random.Next(6), lines.Count - i);
                lines.InsertRange(j, lines.GetRange(i, count));
                break;
        }

        return string.Join('\n', lines);
    }

    // Half a surrogate pair or a key twice is no tree to edit.
    private string JsonEdit(string text)
    {
        try
        {
            return TreeEdit(text);
        }
        catch (Exception e) when (e is JsonException or InvalidOperationException or ArgumentException)
        {
            return NumberEdit(text);
        }
    }

    private string TreeEdit(string text)
    {
        List<JsonNode> nodes = [];
        void Walk(JsonNode? n)
        {
            if (n is null)
            {
                return;
            }

            nodes.Add(n);
            foreach (JsonNode? child in n is JsonArray a ? a : n is JsonObject o ? o.Select(p => p.Value) : [])
            {
                Walk(child);
            }
        }

        JsonNode? root = JsonNode.Parse(text);
        Walk(root);
        JsonNode at = nodes[random.Next(nodes.Count)];
        switch (at)
        {
            case JsonArray { Count: > 0 } list:
                int i = random.Next(list.Count), j = random.Next(list.Count);
                JsonNode? copy = list[i]?.DeepClone();
                if (random.Next(3) == 0)
                {
                    list.RemoveAt(i);
                }
                else if (random.Next(2) == 0)
                {
                    list.Insert(j, copy);
                }
                else
                {
                    list[j] = copy;
                }

                break;
            case JsonObject { Count: > 0 } table:
                string key = table.ElementAt(random.Next(table.Count)).Key;
                if (random.Next(2) == 0)
                {
                    table.Remove(key);
                }
                else
                {
                    table[key] = random.Next(4) switch { 0 => null, 1 => 5, 2 => new JsonArray(), _ => "x" };
                }

                break;
            default:
                if (at != root)
                {
                    at.ReplaceWith(random.Next(5) switch
                    {
                        0 => JsonValue.Create(random.NextDouble() * 20 - 10),
                        1 => JsonValue.Create(Math.Pow(10, random.Next(-300, 300))),
                        2 => JsonValue.Create("x"),
                        3 => new JsonArray(0, 0),
                        _ => (JsonNode?)JsonValue.Create(random.Next(-8, 8)),
                    });
                }

                break;
        }

        return root!.ToJsonString();
    }

    private string GridEdit(string text)
    {
        int tail = text.IndexOf("<AppendedData", StringComparison.Ordinal);
        (string xml, string rest) = tail < 0 ? (text, "") : (text[..tail], text[tail..]);
        List<string> lines = [.. xml.Split('\n')];
        int i = random.Next(lines.Count), j = random.Next(lines.Count);
        switch (random.Next(8))
        {
            case 0:
                lines.RemoveAt(i);
                break;
            case 1:
                lines.Insert(j, lines[i]);
                break;
            case 2:
                (lines[i], lines[j]) = (lines[j], lines[i]);
                break;
            case 3:
                return At(Quoted(), xml, _ => $"\"{Pick(GridWords)}\"") + rest;
            case 4:
                MatchCollection all = Quoted().Matches(xml);
                return (all.Count == 0 ? xml : At(Quoted(), xml, _ => all[random.Next(all.Count)].Value)) + rest;
            case 5:
                return NumberEdit(xml) + rest;
            case 6: // a number from elsewhere: another vertex, another length
                MatchCollection numbers = Number().Matches(xml);
                return (numbers.Count == 0 ? xml : At(Number(), xml, _ => numbers[random.Next(numbers.Count)].Value)) + rest;
            default: // lengths stand at the beginning of the binary part
                int at = Math.Min(rest.Length, random.Next(2) == 0 ? random.Next(200) : random.Next(rest.Length + 1)), count = Math.Min(random.Next(1, 9), rest.Length - at);
                return xml + rest[..at] + string.Concat(Enumerable.Range(0, count).Select(_ => (char)random.Next(256))) + rest[(at + count)..];
        }

        return string.Join('\n', lines) + rest;
    }

    // Every line gets the check sum that it would have: what is wrong then lies in its cells.
    private string Sealed(string text) => random.Next(3) == 0 ? text : string.Join('\n', text.Split('\n').Select(line =>
    {
        int last = line.LastIndexOfAny([',', ';']);
        return last < 0 ? line : line[..(last + 1)] + SampleJournal.Check(line[..last]);
    }));

    private string CellEdit(string text, char comma)
    {
        List<string> lines = [.. text.Split('\n')];
        int i = random.Next(lines.Count), j = random.Next(lines.Count);
        switch (random.Next(5))
        {
            case 0:
                lines.RemoveAt(i);
                break;
            case 1:
                lines.Insert(j, lines[i]);
                break;
            case 2:
                (lines[i], lines[j]) = (lines[j], lines[i]);
                break;
            case 3:
                string[] cells = lines[i].Split(comma);
                cells[random.Next(cells.Length)] = Pick([.. Numbers, "", "\"", "\"a\"", "x", "#", .. Columns]);
                lines[i] = string.Join(comma, cells);
                break;
            default:
                return NumberEdit(text);
        }

        return string.Join('\n', lines);
    }

    private string NumberEdit(string text) => At(Number(), text, _ => Pick(Numbers));

    private string PlainEdit(string text)
    {
        int start = random.Next(text.Length + 1), end = Math.Min(text.Length, start + random.Next(13));
        return random.Next(12) == 0 ? text[..start] : string.Concat(text.AsSpan(0, start), Pick(Pieces), text.AsSpan(end));
    }

    private byte[] BytesEdit(byte[] bytes)
    {
        List<byte> list = [.. bytes];
        for (int n = 1 + random.Next(4); n > 0 && list.Count > 0; n--)
        {
            int at = random.Next(list.Count);
            switch (random.Next(4))
            {
                case 0:
                    list[at] ^= (byte)(1 << random.Next(8));
                    break;
                case 1:
                    list.Insert(at, (byte)random.Next(256));
                    break;
                case 2:
                    list.RemoveAt(at);
                    break;
                default:
                    int count = Math.Min(random.Next(40), list.Count - at);
                    list.InsertRange(random.Next(list.Count), list.GetRange(at, count));
                    break;
            }
        }

        return [.. list];
    }

    private string At(Regex pattern, string text, Func<string, string> replace)
    {
        MatchCollection found = pattern.Matches(text);
        if (found.Count == 0)
        {
            return text + Pick(Pieces);
        }

        Match m = found[random.Next(found.Count)];
        return string.Concat(text.AsSpan(0, m.Index), replace(m.Value), text.AsSpan(m.Index + m.Length));
    }

    private string Pick(string[] from) => from[random.Next(from.Length)];
}
