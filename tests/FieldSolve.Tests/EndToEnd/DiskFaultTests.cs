using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Disks that are full or may not be written, tried on small file systems in memory; and kills and vanished folders under a tolerance run.</summary>
[Collection(SampleRuns.Collection)]
public class DiskFaultTests
{
    private const string Journal = "samples.part.csv";

    private static readonly int Kills = FaultTests.Kills;

    [MountFact]
    public void A_full_disk_is_said_and_leaves_the_old_file()
    {
        using var folder = new TempFolder();
        using SmallDisk disk = SmallDisk.Mount(folder["small"], "size=64k");
        File.WriteAllText(disk["curves.csv"], "old\r\n");
        File.WriteAllBytes(disk["ballast"], new byte[60_000]);
        CommandResult result = Command.Run("drive", folder.Write("bar.toml", SmallDevice.Text), "--out", disk.Path, "--no-pictures");
        Said(result);
        Assert.DoesNotContain(TempFolder.FilesIn(disk.Path), f => f.EndsWith(".part", StringComparison.Ordinal));
        FaultTests.Whole(disk["curves.csv"]);
    }

    // Once the samples' threads met the full disk, and the run ended with a stack trace.
    [MountFact]
    public void A_disk_that_fills_up_while_sampling_keeps_the_samples_so_far()
    {
        using var folder = new TempFolder();
        using SmallDisk disk = SmallDisk.Mount(folder["small"], "size=64k");
        File.WriteAllBytes(disk["ballast"], new byte[56_000]);
        string device = folder.Write("disc.toml", ToleranceTests.Device);
        string[] command = ["tolerance", device, "--samples", "300", "--shard", "1/2", "--out", disk.Path];
        Said(Command.Run(command));
        int kept = File.ReadAllLines(disk[Journal]).Length - 1;
        Assert.InRange(kept, 1, 149);
        File.Delete(disk["ballast"]);
        CommandResult next = Command.Run(command);
        Assert.True(next.Exit == 0, next.Error);
        Assert.Equal(150 - kept, New(next, 150), 1.0); // the last line may have been cut short
    }

    [MountFact]
    public void A_file_system_that_may_not_be_written_is_named()
    {
        using var folder = new TempFolder();
        using SmallDisk disk = SmallDisk.Mount(folder["fixed"], "size=1m");
        disk.Remount("ro");
        string device = folder.Write("disc.toml", ToleranceTests.Device);
        foreach (string command in (string[])["drive", "tolerance"])
        {
            CommandResult result = Command.Run(command, device, "--out", disk["new"], "--no-pictures");
            Said(result);
            Assert.Contains("fixed", result.ErrorLines[^1], StringComparison.Ordinal);
        }
    }

    /// <summary>Kills a shard at several moments; every sample whose line was finished is used by the next run. FIELDSOLVE_KILLS sets the number of moments.</summary>
    [LinuxFact]
    public void A_kill_of_a_tolerance_run_loses_no_finished_sample()
    {
        using var folder = new TempFolder();
        string device = folder.Write("disc.toml", ToleranceTests.Device);
        int samples = 200 * Kills;
        string[] command = ["tolerance", device, "--samples", (2 * samples).ToString(System.Globalization.CultureInfo.InvariantCulture), "--shard", "1/2", "--out", folder["out"]];
        var random = new Random(5);
        int kept = 0;
        for (int k = 0; k < Kills; k++)
        {
            using Process process = Command.Start(command);

            // At a moment after the first new sample, whenever that is on this machine.
            long before = Size();
            Wait.Until(() => process.HasExited || Size() > before);
            Thread.Sleep(random.Next(60));
            process.Kill();
            process.WaitForExit();
            int there = Finished();
            Assert.True(there >= kept, "a finished sample was lost");
            kept = there;
            Assert.All(TempFolder.FilesIn(folder["out"]), f => Assert.True(f == Journal || (f.StartsWith('.') && f.EndsWith(".part", StringComparison.Ordinal)), f));
        }

        // A few more than there are: the run without a kill uses all that are finished.
        int wanted = kept + 20, known = Files.SampleJournal.Read(folder["out/" + Journal]).Samples.Keys.Count(i => i < 2 * wanted);
        command[3] = (2 * wanted).ToString(System.Globalization.CultureInfo.InvariantCulture);
        CommandResult next = Command.Run(command);
        Assert.True(next.Exit == 0, next.Error);
        Assert.Equal(wanted - known, New(next, wanted));

        long Size() => File.Exists(folder["out/" + Journal]) ? new FileInfo(folder["out/" + Journal]).Length : 0;
        int Finished() => Files.SampleJournal.Read(folder["out/" + Journal]).Samples.Count;
    }

    [LinuxFact]
    public void Two_tolerance_runs_in_one_folder_do_not_mix_and_a_folder_that_vanishes_is_made_again()
    {
        using var folder = new TempFolder();
        string device = folder.Write("disc.toml", ToleranceTests.Device);
        string[] command = ["tolerance", device, "--samples", "1600", "--shard", "1/2", "--out", folder["out"]];

        // Held still in the middle of its samples, however the threads of this machine are scheduled; a first run that was too quick for that is made again.
        Process one = Caught();
        CommandResult two = Command.Run(command);
        Assert.Equal(2, two.Exit);
        Assert.Contains("another run is writing", two.Error, StringComparison.Ordinal);
        Directory.Delete(folder["out"], true);
        Signal(one, "-CONT");
        CommandResult first = Command.Finish(one);
        one.Dispose();
        Assert.True(first.Exit == 0, first.Error);
        Assert.Equal(800, Files.SampleJournal.Read(folder["out/" + Journal]).Samples.Count);

        Process Caught()
        {
            for (int k = 0; k < 10; k++)
            {
                Process process = Command.Start(command);
                Wait.Until(() => process.HasExited || (File.Exists(folder["out/" + Journal]) && new FileInfo(folder["out/" + Journal]).Length > 300));
                Signal(process, "-STOP");
                if (!process.HasExited && Files.SampleJournal.Read(folder["out/" + Journal]).Samples.Count < 790)
                {
                    return process;
                }

                process.Kill();
                process.WaitForExit();
                process.Dispose();
                Directory.Delete(folder["out"], true);
            }

            throw new InvalidOperationException("No run could be held still in the middle.");
        }
    }

    private static void Signal(Process process, string signal)
    {
        using Process kill = Process.Start("kill", [signal, process.Id.ToString(System.Globalization.CultureInfo.InvariantCulture)]);
        kill.WaitForExit();
    }

    // One line that says what is wrong, no stack trace.
    private static void Said(CommandResult result)
    {
        Assert.Equal(2, result.Exit);
        Assert.StartsWith("fieldsolve: ", result.ErrorLines[^1], StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", result.Error, StringComparison.Ordinal);
    }

    // "shard 1 of 2: 150 samples, 12 of them new, in …"
    private static int New(CommandResult result, int samples)
    {
        string mark = FormattableString.Invariant($": {samples} samples, ");
        Assert.Contains(mark, result.Out, StringComparison.Ordinal);
        return int.Parse(result.Out.Split(mark)[1].Split(' ')[0], System.Globalization.CultureInfo.InvariantCulture);
    }
}

/// <summary>Waits for something to happen, however slow the machine is.</summary>
internal static class Wait
{
    public static void Until(Func<bool> happened)
    {
        for (int k = 0; !happened(); k++)
        {
            Assert.True(k < 12_000, "it did not happen within some minutes");
            Thread.Sleep(10);
        }
    }
}
