using System.Globalization;
using System.Text;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>A file of samples does not fit the run, or is no such file; the message says what to do.</summary>
public sealed class JournalException : Exception
{
    /// <summary>Without a message.</summary>
    public JournalException()
    {
    }

    /// <summary>With the reason in plain words.</summary>
    public JournalException(string message)
        : base(message)
    {
    }

    /// <summary>With the reason and what brought it about.</summary>
    public JournalException(string message, Exception innerException)
        : base(message, innerException)
    {
    }
}

/// <summary>Which run a file of samples belongs to.</summary>
/// <param name="Design">Fingerprint of design, causes and seed.</param>
/// <param name="Shard">Which shard, from 1.</param>
/// <param name="Shards">Of how many.</param>
/// <param name="Samples">Samples of the whole run.</param>
/// <param name="Seed">Seed.</param>
/// <param name="Device">Path of the device file as it was given.</param>
public sealed record JournalHead(string Design, int Shard, int Shards, int Samples, ulong Seed, string Device);

/// <summary>
/// Finished samples in a file that grows by one line each, so that a run that was killed goes on where it was. Every line ends with a check sum:
/// a line that was cut short counts as not there. The design's fingerprint in the first line keeps apart what does not belong together.
/// </summary>
public sealed class SampleJournal : ISampleStore, IDisposable
{
    /// <summary>Name of the file in the folder of results.</summary>
    public const string FileName = "samples.part.csv";

    // V; no sheet reads more, and the squares of larger numbers overflow.
    private const double LargestVoltage = 1e30;

    private const string Mark = "# FieldSolve samples";

    private readonly string path;
    private readonly ToleranceOptions options;
    private readonly string device;
    private Dictionary<int, SampleResult> known = [];
    private readonly List<SampleResult> added = [];
    private JournalHead? head;
    private StreamWriter? writer;

    /// <summary>Names the file; nothing is opened yet.</summary>
    /// <param name="folder">Folder of results; made when missing.</param>
    /// <param name="options">Shard, seed and number of samples.</param>
    /// <param name="device">Path of the device file.</param>
    public SampleJournal(string folder, ToleranceOptions options, string device)
    {
        path = Path.Combine(folder, FileName);
        this.options = options;
        this.device = device;
    }

    /// <inheritdoc/>
    public IReadOnlyDictionary<int, SampleResult> Known => known;

    /// <inheritdoc/>
    /// <exception cref="JournalException">The file there belongs to another run, or another run is writing it.</exception>
    /// <exception cref="IOException">The file cannot be read or written.</exception>
    public void Open(string design, int values)
    {
        head = new JournalHead(design, options.Shard, options.Shards, options.Samples, options.Seed, device);
        if (File.Exists(path))
        {
            RefuseIfInUse();
            (JournalHead there, known) = Read(path);
            if (there.Design != design || there.Shard != head.Shard || there.Shards != head.Shards)
            {
                throw new JournalException(
                    $"'{path}' holds samples of another run (another device, seed, shard or version); name another --out or remove the file");
            }

            foreach (int index in known.Where(k => k.Value.Values.Length > 0 && k.Value.Values.Length != values).Select(k => k.Key).ToArray())
            {
                known.Remove(index);
            }
        }

        // Written anew without what cannot be trusted, then added to.
        WriteAll();
        writer = new StreamWriter(new FileStream(path, FileMode.Append, FileAccess.Write, FileShare.Read), new UTF8Encoding(false)) { AutoFlush = true };
    }

    /// <inheritdoc/>
    public void Add(SampleResult sample)
    {
        ArgumentNullException.ThrowIfNull(sample);
        (writer ?? throw new InvalidOperationException("The file of samples is not open.")).Write(Line(sample));
        added.Add(sample);
    }

    /// <summary>Makes the file again where its folder vanished during the run.</summary>
    /// <exception cref="IOException">The file cannot be written.</exception>
    public void Keep()
    {
        if (writer is not null && !File.Exists(path))
        {
            WriteAll();
        }
    }

    /// <summary>Closes the file.</summary>
    public void Dispose() => writer?.Dispose();

    /// <summary>Closes the file and removes it, once its samples stand elsewhere.</summary>
    public void Remove()
    {
        Dispose();
        File.Delete(path);
    }

    /// <summary>Reads a file; lines that are cut short or damaged are left out.</summary>
    /// <exception cref="JournalException">It is no file of samples.</exception>
    /// <exception cref="IOException">The file cannot be read.</exception>
    public static (JournalHead Head, Dictionary<int, SampleResult> Samples) Read(string path)
    {
        using var stream = new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.ReadWrite);
        using var reader = new StreamReader(stream, new UTF8Encoding(false));
        string[] lines = reader.ReadToEnd().Split('\n');
        JournalHead head = Head(lines[0]) ?? throw new JournalException($"'{path}' is no file of samples of a tolerance run");
        var samples = new Dictionary<int, SampleResult>();

        // What stands after the last line end was cut short.
        foreach (string line in lines.Skip(1).SkipLast(1))
        {
            if (Sample(line) is { } sample)
            {
                samples[sample.Index] = sample;
            }
        }

        return (head, samples);
    }

    private void WriteAll()
    {
        var text = new StringBuilder(HeadLine(head!));
        foreach (SampleResult sample in known.Values.Concat(added).OrderBy(s => s.Index))
        {
            text.Append(Line(sample));
        }

        WholeFile.WriteText(path, text.ToString());
    }

    // Whoever writes the file holds it open.
    private void RefuseIfInUse()
    {
        try
        {
            using var alone = new FileStream(path, FileMode.Open, FileAccess.ReadWrite, FileShare.None);
        }
        catch (IOException e) when (e is not (FileNotFoundException or DirectoryNotFoundException))
        {
            throw new JournalException($"another run is writing '{path}'; wait for its end or name another --out", e);
        }
    }

    private static string HeadLine(JournalHead h)
    {
        string text = string.Create(CultureInfo.InvariantCulture, $"{Mark};{h.Design};{h.Shard};{h.Shards};{h.Samples};{h.Seed};{h.Device}");
        return $"{text};{Check(text)}\n";
    }

    private static JournalHead? Head(string line)
    {
        int last = line.LastIndexOf(';');
        if (last < 0 || line[(last + 1)..] != Check(line[..last]) || line[..last].Split(';', 7) is not [Mark, var design, var shard, var shards, var samples, var seed, var device])
        {
            return null;
        }

        CultureInfo c = CultureInfo.InvariantCulture;
        return int.TryParse(shard, NumberStyles.None, c, out int k) && int.TryParse(shards, NumberStyles.None, c, out int n) && k >= 1 && k <= n
            && int.TryParse(samples, NumberStyles.None, c, out int count) && count <= ToleranceOptions.MostSamples && ulong.TryParse(seed, NumberStyles.None, c, out ulong start)
            ? new(design, k, n, count, start, device)
            : null;
    }

    private static string Line(SampleResult sample)
    {
        string text = string.Join(',', [
            sample.Index.ToString(CultureInfo.InvariantCulture), SamplesCsv.StatusText(sample.Status),
            .. sample.Values.Select(v => v.ToString("R", CultureInfo.InvariantCulture))]);
        return $"{text},{Check(text)}\n";
    }

    private static SampleResult? Sample(string line)
    {
        int last = line.LastIndexOf(',');
        if (last < 0 || line[(last + 1)..] != Check(line[..last]))
        {
            return null;
        }

        string[] cells = line[..last].Split(',');
        SampleStatus? status = Enum.GetValues<SampleStatus>().Cast<SampleStatus?>().FirstOrDefault(s => cells.Length > 1 && SamplesCsv.StatusText(s!.Value) == cells[1]);
        double[] values = [.. cells.Skip(2).Select(v => double.TryParse(v, NumberStyles.Float, CultureInfo.InvariantCulture, out double x) && Math.Abs(x) < LargestVoltage ? x : double.NaN)];
        return status is { } known && int.TryParse(cells[0], NumberStyles.None, CultureInfo.InvariantCulture, out int index) && !values.Contains(double.NaN)
            ? new(index, known, values)
            : null;
    }

    // FNV-1a, 32 bits: G. Fowler, L. C. Noll, K.-P. Vo (1991); enough to tell a whole line from a cut one.
    internal static string Check(string text)
    {
        uint hash = 2166136261;
        foreach (char c in text)
        {
            hash = (hash ^ c) * 16777619;
        }

        return hash.ToString("x8", CultureInfo.InvariantCulture);
    }
}
