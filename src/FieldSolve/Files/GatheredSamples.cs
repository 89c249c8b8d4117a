using System.Globalization;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The samples of all shards of a run.</summary>
public sealed class GatheredSamples : ISampleStore
{
    private readonly Dictionary<int, SampleResult> samples;

    private GatheredSamples(JournalHead head, Dictionary<int, SampleResult> samples)
    {
        Head = head;
        this.samples = samples;
    }

    /// <summary>Which run it is.</summary>
    public JournalHead Head { get; }

    /// <inheritdoc/>
    public IReadOnlyDictionary<int, SampleResult> Known => samples;

    /// <summary>Reads the shards.</summary>
    /// <param name="folders">One per shard, in any order.</param>
    /// <exception cref="JournalException">A shard is missing, unfinished, twice there or belongs to another run.</exception>
    /// <exception cref="IOException">A file cannot be read.</exception>
    public static GatheredSamples Read(IReadOnlyList<string> folders)
    {
        ArgumentNullException.ThrowIfNull(folders);
        var all = new Dictionary<int, SampleResult>();
        var shards = new Dictionary<int, string>();
        JournalHead? first = null;
        foreach (string folder in folders)
        {
            string path = Path.Combine(folder, SampleJournal.FileName);
            if (!File.Exists(path))
            {
                throw new JournalException($"'{folder}' holds no shard (no {SampleJournal.FileName}); name the folders that 'tolerance --shard' wrote");
            }

            (JournalHead head, Dictionary<int, SampleResult> samples) = SampleJournal.Read(path);
            first ??= head;
            if (head.Design != first.Design || head.Shards != first.Shards || head.Samples != first.Samples)
            {
                throw new JournalException($"'{folder}' belongs to another run than '{folders[0]}'");
            }

            if (!shards.TryAdd(head.Shard, folder))
            {
                throw new JournalException(Text($"shard {head.Shard} is there twice: '{shards[head.Shard]}' and '{folder}'"));
            }

            int[] missing = [.. Enumerable.Range(0, head.Samples).Where(i => i % head.Shards == head.Shard - 1 && !samples.ContainsKey(i))];
            if (missing.Length > 0)
            {
                throw new JournalException(Text(
                    $"shard {head.Shard} of {head.Shards} in '{folder}' is unfinished: {missing.Length} of its samples are missing; run the same 'tolerance --shard {head.Shard}/{head.Shards}' again, it goes on where it was"));
            }

            foreach (SampleResult sample in samples.Values.Where(s => s.Index < head.Samples))
            {
                all[sample.Index] = sample;
            }
        }

        int[] absent = [.. Enumerable.Range(1, first!.Shards).Except(shards.Keys)];
        return absent.Length > 0
            ? throw new JournalException(Text(
                $"shard{(absent.Length == 1 ? "" : "s")} {string.Join(", ", absent)} of {first.Shards} {(absent.Length == 1 ? "is" : "are")} missing; name every shard's folder, or run 'tolerance --shard {absent[0]}/{first.Shards}' with the same device file and options"))
            : new(first, all);
    }

    /// <inheritdoc/>
    /// <exception cref="JournalException">The device is not the one the shards were made with.</exception>
    public void Open(string design, int values)
    {
        if (design != Head.Design)
        {
            throw new JournalException("the device file (or the version of the program) is not the one the shards were made with");
        }

        if (samples.Values.FirstOrDefault(s => s.Values.Length != 0 && s.Values.Length != values) is { } odd)
        {
            throw new JournalException(Text($"sample {odd.Index} has {odd.Values.Length} values, not {values}: a shard's {SampleJournal.FileName} was changed by hand; run that shard again"));
        }
    }

    /// <inheritdoc/>
    public void Add(SampleResult sample) => throw new InvalidOperationException("All samples are there already.");

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
