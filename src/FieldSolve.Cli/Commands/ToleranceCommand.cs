using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve tolerance DEVICE --out DIR.</summary>
internal static class ToleranceCommand
{
    private const int UsualSamples = 256;

    private sealed record Choices(string Device, string Folder, ToleranceOptions Options, bool Pictures, bool Quiet, bool Json, int? Slurm);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<int?> samples = new("--samples") { Description = "Most devices to sample; 0 for the budget alone. Default 256 (a hundred times that with --confidence).", HelpName = "N" };
        samples.Validators.Add(r => Within(r, r.GetValueOrDefault<int?>(), 0, ToleranceOptions.MostSamples, "--samples"));
        Option<double?> confidence = new("--confidence")
        {
            Description = "Stop once every standard deviation is known to this part of itself (95 %), for example 0.05.",
            HelpName = "PART",
            CustomParser = r => ToleranceText.Number(r, "--confidence", 1e-4, 1),
        };
        Option<ulong> seed = new("--seed") { Description = "Seed of the samples. Default 1.", HelpName = "K", DefaultValueFactory = _ => 1 };
        Option<(int, int)?> shard = new("--shard")
        {
            Description = "Solve only every n-th sample: shard k of n. Join the shards with 'fieldsolve gather'.",
            HelpName = "k/n",
            CustomParser = r => ToleranceText.Shard(r),
        };
        Option<double?> explain = ToleranceText.Explain(), wanted = ToleranceText.Wanted();
        Option<int?> slurm = new("--write-slurm") { Description = "Write a job-array script of N shards for the Slurm workload manager, and solve nothing.", HelpName = "N" };
        slurm.Validators.Add(r => Within(r, r.GetValueOrDefault<int?>(), 1, 10_000, "--write-slurm"));
        Option<bool> noPictures = new("--no-pictures") { Description = "No pictures and no report; tables and run.json only." };
        var command = new Command(
            "tolerance",
            "What misplaced contacts, widths, angles and other causes of [tolerance] do to each voltage.\n\n"
            + "Example: fieldsolve tolerance meshes/disc-12.toml --samples 500 --out results")
        {
            device, folder, samples, confidence, seed, shard, explain, wanted, slurm, noPictures, quiet, json,
        };
        command.Validators.Add(r =>
        {
            if (r.GetValue(confidence) is not null && (r.GetValue(shard) is not null || r.GetValue(slurm) is not null))
            {
                r.AddError("--confidence looks at all samples and cannot be used with shards; give --samples");
            }
        });
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            (int k, int n) = parsed.GetValue(shard) ?? (1, 1);
            double? sure = parsed.GetValue(confidence);
            return Task.Run(() => Run(
                new Choices(
                    path,
                    parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-tolerance",
                    new ToleranceOptions
                    {
                        Samples = parsed.GetValue(samples) ?? (sure is null ? UsualSamples : 100 * UsualSamples),
                        Confidence = sure,
                        Seed = parsed.GetValue(seed),
                        Shard = k,
                        Shards = n,
                        Explain = parsed.GetValue(explain),
                        Wanted = parsed.GetValue(wanted),
                    },
                    !parsed.GetValue(noPictures),
                    parsed.GetValue(quiet),
                    parsed.GetValue(json),
                    parsed.GetValue(slurm)),
                cancel));
        });
        return command;
    }

    private static int Run(Choices choices, CancellationToken cancel)
    {
        if (DeviceLoading.Load(choices.Device) is not { } device)
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(choices.Quiet);
        if (choices.Slurm is { } shards)
        {
            if (Refused(device) is { } why)
            {
                Console.Error.WriteLine(new Fault(choices.Device, 1, 1, why));
                return ExitCode.WrongInput;
            }

            screen.Print(SlurmScript.Write(choices.Folder, choices.Device, shards, choices.Options));
            return ExitCode.Done;
        }

        return Solve(device, choices.Folder, choices.Options, choices.Pictures, choices.Json, screen, cancel);
    }

    /// <summary>Runs one shard or the whole, and writes its files.</summary>
    private static int Solve(
        SheetDevice device, string folder, ToleranceOptions options, bool pictures, bool json, Screen screen, CancellationToken cancel)
    {
        using var journal = new SampleJournal(folder, options, device.Path);
        if (Execute(device, options, options.Samples == 0 ? null : journal, screen, cancel) is not { } result)
        {
            return ExitCode.WrongInput;
        }

        if (options.Shards > 1)
        {
            screen.Clear();
            journal.Keep();
            RunManners.Say(result.Cautions, result.Warnings);
            screen.Print(FormattableString.Invariant(
                $"shard {options.Shard} of {options.Shards}: {result.Samples.Count} samples, {result.Solved} of them new, in {folder}{(result.Cancelled ? "; cancelled, the same command goes on from here" : "")}\n"));
            return result.Cancelled ? ExitCode.Cancelled : ExitCode.Done;
        }

        return Finish(result, folder, options, pictures, json, screen, result.Cancelled ? null : journal, cancel);
    }

    /// <summary>The result, or null after a fault went to standard error.</summary>
    internal static ToleranceResult? Execute(
        SheetDevice device, ToleranceOptions options, ISampleStore? store, Screen screen, CancellationToken cancel)
    {
        try
        {
            return RunManners.TrySolve(device.Path, screen, () => ToleranceRun.Execute(device, options, store, new SampleProgress(screen), cancel), out ToleranceResult? result) ? result : null;
        }
        catch (JournalException e)
        {
            screen.Clear();
            Console.Error.WriteLine("fieldsolve: " + e.Message);
            return null;
        }
    }

    /// <summary>Writes all files and the summary.</summary>
    internal static int Finish(
        ToleranceResult result, string folder, ToleranceOptions options, bool pictures, bool json, Screen screen, SampleJournal? journal, CancellationToken cancel)
    {
        result = ToleranceFiles.Write(result, folder, options, pictures && !result.Cancelled, screen, cancel);
        if (!result.Cancelled && result.Samples.Count > 0)
        {
            journal?.Remove();
        }

        screen.Clear();
        RunManners.Say(result.Cautions, result.Warnings);
        screen.Print(json ? ToleranceText.Json(result, folder) : ToleranceText.Plain(result, folder));
        return result.Cancelled ? ExitCode.Cancelled : result.AllOk ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }

    private static string? Refused(SheetDevice device) => device.Drive is null ? "the file has no [drive]"
        : device.Tolerance is not { Causes.Count: > 0 } ? "the file has no cause of error in [tolerance]" : null;

    private static void Within(System.CommandLine.Parsing.OptionResult result, int? value, int least, int most, string name)
    {
        if (value < least || value > most)
        {
            result.AddError(FormattableString.Invariant($"{name} must be from {least} to {most}"));
        }
    }
}
