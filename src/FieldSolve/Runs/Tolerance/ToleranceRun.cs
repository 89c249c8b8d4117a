using System.Collections.Concurrent;
using System.Globalization;
using System.Runtime.ExceptionServices;
using System.Runtime.InteropServices;
using System.Security.Cryptography;
using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>
/// What misplaced contacts, widths, angles and other causes do to each voltage: derivatives of the device as designed times the sizes of its causes, and
/// samples of devices with all causes at once, each solved in full.
/// </summary>
public static class ToleranceRun
{
    /// <summary>Runs the tolerance of a device.</summary>
    /// <param name="device">With a drive, a wiring and at least one cause.</param>
    /// <param name="options">How many samples, which of them.</param>
    /// <param name="store">Keeps samples; null for none.</param>
    /// <param name="progress">Told about stages and samples; may be null.</param>
    /// <param name="cancel">While sampling: the result comes with <see cref="ToleranceResult.Cancelled"/>; before, the call throws.</param>
    /// <exception cref="ToleranceException">There is nothing to work out, or the device has no solution.</exception>
    /// <exception cref="OperationCanceledException">Cancelled before the samples.</exception>
    public static ToleranceResult Execute(
        SheetDevice device, ToleranceOptions options, ISampleStore? store, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(options);
        if (device.Drive is null)
        {
            throw new ToleranceException("The file has no [drive]; add one, for example: current = { from = \"0 uA\", to = \"100 uA\", steps = 11 }");
        }

        if (device.Tolerance is not { Causes.Count: > 0 } spec)
        {
            throw new ToleranceException("The file has no cause of error in [tolerance]; add one, for example: [tolerance.contacts] position = \"50 nm\"");
        }

        var clock = new StageClock();
        ToleranceModel model = ToleranceModel.Build(device, stage => progress?.Report(new(stage, 0, 0)), clock, cancel);
        IReadOnlyList<BudgetEntry> budget = clock.Time("second order", () => Budget.Of(model, cancel));
        var draw = new SampleDraw(model.Causes, options.Seed);
        store?.Open(Fingerprint(model, options), model.Quantities.Count);
        var samples = new List<SampleResult>();
        (int solved, bool cancelled) = clock.Time("samples", () => Sample(model, options, draw, store, samples, progress, cancel));
        samples.Sort((a, b) => a.Index.CompareTo(b.Index));
        SampleStatistics[] statistics = [.. Enumerable.Range(0, model.Quantities.Count).Select(q => SampleStatistics.Of(model, q, samples))];
        return new ToleranceResult
        {
            Device = device,
            Current = model.Current,
            Rows = [.. model.States.Select(s => s.Row)],
            Quantities = model.Quantities,
            Budget = budget,
            Samples = samples,
            Draw = draw.Of,
            Statistics = statistics,
            Answers = ToleranceAnswers.Of(model, budget, statistics, options),
            Warnings = [.. spec.Notes, .. ToleranceWarnings.Of(model, samples, statistics, options)],
            Cautions = Cautions.Of(device, [.. model.States.Select(s => s.Row)]),
            Unknowns = (model.Meshes.Fine.Space.Size, model.Meshes.Coarse.Space.Size),
            Stages = clock.Times,
            Solved = solved,
            Cancelled = cancelled,
        };
    }

    private static (int Solved, bool Cancelled) Sample(
        ToleranceModel model, ToleranceOptions options, SampleDraw draw, ISampleStore? store, List<SampleResult> samples,
        IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        var solver = new SampleSolver(model);
        int solved = 0, mine = Enumerable.Range(0, options.Samples).Count(i => i % options.Shards == options.Shard - 1);
        var gate = new Lock();
        try
        {
            for (int first = 0; first < options.Samples; first += SampleDraw.Batch)
            {
                int[] batch = [.. Enumerable.Range(first, Math.Min(SampleDraw.Batch, options.Samples - first)).Where(i => i % options.Shards == options.Shard - 1)];
                if (store is not null)
                {
                    samples.AddRange(batch.Where(store.Known.ContainsKey).Select(i => store.Known[i]));
                    batch = [.. batch.Where(i => !store.Known.ContainsKey(i))];
                }

                Parallel.ForEach(
                    Partitioner.Create(batch, EnumerablePartitionerOptions.NoBuffering),
                    new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount },
                    i =>
                    {
                        SampleResult sample = solver.Solve(i, draw.Of(i), cancel);
                        lock (gate)
                        {
                            store?.Add(sample);
                            samples.Add(sample);
                            solved++;
                            progress?.Report(new("sampling", samples.Count, mine));
                        }
                    });
                if (options.Confidence is { } wanted && options.Shards == 1 && samples.Count >= 2 * SampleDraw.Batch && samples.Count % SampleDraw.Batch == 0)
                {
                    SampleResult[] sorted = [.. samples.OrderBy(s => s.Index)];
                    if (Enumerable.Range(0, model.Quantities.Count).All(q => SampleStatistics.Of(model, q, sorted).RelativeUncertainty <= wanted))
                    {
                        break;
                    }
                }
            }
        }
        catch (OperationCanceledException)
        {
            return (solved, true);
        }
        catch (AggregateException e) when (e.InnerExceptions.All(x => x is OperationCanceledException))
        {
            return (solved, true);
        }
        catch (AggregateException e)
        {
            // A disk that is full, for example: said as what it is.
            ExceptionDispatchInfo.Throw(e.InnerExceptions[0]);
        }

        return (solved, false);
    }

    // Everything that decides a sample shows in what the design reads, in the causes (a layer's with its contacts and what it turns about) or in the seed.
    private static string Fingerprint(ToleranceModel model, ToleranceOptions options)
    {
        string causes = string.Join(';', model.Causes.Select(c => string.Create(CultureInfo.InvariantCulture, $"{c.Label}={c.Sigma:R} {c.Shape} {string.Join(' ', c.Target.Contacts)} about {c.Target.About.X:R} {c.Target.About.Y:R}")));
        byte[] data =
        [
            .. MemoryMarshal.AsBytes(model.Values.AsSpan()), .. MemoryMarshal.AsBytes(model.States[0].CoarseValues[0].AsSpan()),
            .. System.Text.Encoding.UTF8.GetBytes(string.Create(CultureInfo.InvariantCulture, $"{causes};{options.Seed}")),
        ];
        return Convert.ToHexStringLower(SHA256.HashData(data))[..32];
    }
}
