using System.Globalization;
using System.Text;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>
/// The device file with the fitted law: the lines of [law] carry the fitted values, all else stays as the user wrote it. Numbers of contacts (resistances, places) are
/// listed in its head, for a user to take over.
/// </summary>
public static partial class FittedDevice
{
    /// <summary>The text.</summary>
    /// <param name="result">The fit.</param>
    /// <param name="original">Text of the device file.</param>
    /// <param name="folder">Folder the text will stand in; files that the device names are then found from there.</param>
    /// <returns>The whole device file; only its [law] where the file is written in a way that its lines cannot be changed one by one.</returns>
    public static (string Text, bool Whole) Text(FitResult result, string original, string folder)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(original);
        ArgumentNullException.ThrowIfNull(folder);
        string head = Head(result);
        string text = head + WithFiles(WithLaw(original.TrimStart('\uFEFF'), result), result.Device.Path, folder);
        DeviceReading read = DeviceFile.Parse(text, "fitted.toml", folder);
        return read.Device is { } device && Agrees(device, result) ? (text, true) : (head + "[law]\n" + string.Join('\n', Lines(result).Select(l => l.Line)) + "\n", false);
    }

    private static string Head(FitResult result)
    {
        var text = new StringBuilder("# The law as fitted by FieldSolve to ").Append(OneLine(Path.GetFileName(result.Measured.Path))).Append(".\n");
        foreach (FittedParameter p in result.Parameters)
        {
            double unit = p.Parameter.UnitSize;
            text.Append(CultureInfo.InvariantCulture, $"# {p.Parameter.Key} = ");
            text.Append(p.Value is { } v && p.StandardError is { } e
                ? string.Create(CultureInfo.InvariantCulture, $"{v / unit:G8} +- {e / unit:G2}{(p.Parameter.Unit == "1" ? "" : " " + p.Parameter.Unit)}")
                : "not determined by the data");
            text.Append(p.Value is null || p.Parameter.Kind.Effect is CauseEffect.Law or CauseEffect.Axis ? "\n" : ", not applied below\n");
        }

        return text.Append('\n').ToString();
    }

    // Numbers that the data determine; the others keep what the file says.
    private static IEnumerable<(string Key, string Line)> Lines(FitResult result)
    {
        foreach (FittedParameter p in result.Parameters.Where(p => p.Value is not null))
        {
            double value = p.Value!.Value / p.Parameter.UnitSize;
            if (p.Parameter.Kind.Effect is CauseEffect.Law or CauseEffect.Axis)
            {
                string number = value.ToString("R", CultureInfo.InvariantCulture);
                yield return (p.Parameter.Kind.Key, p.Parameter.Unit == "1" ? $"{p.Parameter.Kind.Key} = {Plain(number)}" : $"{p.Parameter.Kind.Key} = \"{number} {p.Parameter.Unit}\"");
            }
        }
    }

    private static string Plain(string number) => number.Contains('.', StringComparison.Ordinal) || number.Contains('E', StringComparison.Ordinal) ? number : number + ".0";

    private static string WithLaw(string original, FitResult result)
    {
        List<string> lines = [.. original.ReplaceLineEndings("\n").Split('\n')];
        int start = lines.FindIndex(l => LawHeader().IsMatch(l));
        if (start < 0)
        {
            return original;
        }

        int end = lines.FindIndex(start + 1, l => l.TrimStart().StartsWith('['));
        end = end < 0 ? lines.Count : end;
        foreach ((string key, string line) in Lines(result))
        {
            int at = lines.FindIndex(start + 1, end - start - 1, l => Regex.IsMatch(l, $@"^\s*{Regex.Escape(key)}\s*="));
            if (at >= 0)
            {
                lines[at] = line;
            }
            else
            {
                lines.Insert(start + 1, line);
                end++;
            }
        }

        return string.Join('\n', lines);
    }

    private static string WithFiles(string text, string devicePath, string folder)
    {
        string from = Path.GetDirectoryName(Path.GetFullPath(devicePath)) ?? "", to = Path.GetFullPath(folder);
        return FileKey().Replace(text, m => Path.IsPathRooted(m.Groups[2].Value) ? m.Value
            : $"{m.Groups[1].Value}\"{Path.GetRelativePath(to, Path.Combine(from, m.Groups[2].Value)).Replace('\\', '/')}\"");
    }

    private static bool Agrees(SheetDevice read, FitResult result) => result.Parameters.Where(p => p.Value is not null).All(p => p.Parameter.Kind.Effect switch
    {
        CauseEffect.Law => Near(LawSensitivity.Value(read.Law, p.Parameter.Kind.Key), p.Value!.Value),
        CauseEffect.Axis => Near(read.Axis, p.Value!.Value),
        _ => true,
    });

    private static bool Near(double a, double b) => Math.Abs(a - b) <= 1e-12 * Math.Abs(b);

    private static string OneLine(string name) => string.Concat(name.Where(c => !char.IsControl(c)));

    [GeneratedRegex(@"^\s*\[\s*law\s*\]\s*(#.*)?$")]
    private static partial Regex LawHeader();

    [GeneratedRegex("(\\bfile\\s*=\\s*)\"([^\"\\\\]*)\"")]
    private static partial Regex FileKey();
}
