using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Runs only where Slurm and its authentication service are installed and the test may start them.</summary>
public sealed class SlurmFactAttribute : FactAttribute
{
    private static readonly string[] Wanted = ["slurmctld", "slurmd", "sbatch", "munged"];

    public SlurmFactAttribute()
    {
        string[] missing = [.. Wanted.Where(w => Places().All(p => !File.Exists(Path.Combine(p, w))))];
        if (!OperatingSystem.IsLinux() || missing.Length > 0)
        {
            Skip = $"Needs the Slurm workload manager; not found: {string.Join(", ", missing)} (Debian: slurm-wlm and munge).";
        }
        else if (Environment.UserName != "root")
        {
            Skip = "Starts a Slurm controller and a node on the loopback interface, which wants root.";
        }
    }

    private static IEnumerable<string> Places() => (Environment.GetEnvironmentVariable("PATH") ?? "").Split(':').Append("/usr/sbin").Append("/sbin");
}

/// <summary>The job scripts under a real slurmctld and slurmd on this machine.</summary>
public class SlurmTests
{
    // One controller and one node on the loopback interface, started by hand; prints nothing, leaves its process numbers behind.
    private const string Start = """
        set -eu
        export PATH="$PATH:/usr/sbin:/sbin"
        S=$1; H=$(hostname -s)
        mkdir -p "$S"/ctld "$S"/slurmd "$S"/log "$S"/munge
        chmod 755 "$S" "$S/munge"; chown munge:munge "$S/munge"
        cat > "$S/slurm.conf" <<C
        ClusterName=test
        SlurmctldHost=$H(127.0.0.1)
        SlurmctldPort=26817
        SlurmdPort=26818
        SlurmUser=root
        SlurmdUser=root
        AuthType=auth/munge
        AuthInfo=socket=$S/munge/munge.socket
        CryptoType=crypto/munge
        StateSaveLocation=$S/ctld
        SlurmdSpoolDir=$S/slurmd
        SlurmctldPidFile=$S/slurmctld.pid
        SlurmdPidFile=$S/slurmd.pid
        SlurmctldLogFile=$S/log/slurmctld.log
        SlurmdLogFile=$S/log/slurmd.log
        ProctrackType=proctrack/linuxproc
        TaskPlugin=task/none
        JobAcctGatherType=jobacct_gather/none
        AccountingStorageType=accounting_storage/none
        SwitchType=switch/none
        MpiDefault=none
        SelectType=select/cons_tres
        SelectTypeParameters=CR_CPU
        SchedulerParameters=batch_sched_delay=0,sched_min_interval=100000
        SlurmdParameters=config_overrides
        ReturnToService=2
        MailProg=$(command -v true)
        NodeName=$H NodeAddr=127.0.0.1 CPUs=4 State=UNKNOWN
        PartitionName=main Nodes=$H Default=YES MaxTime=INFINITE State=UP
        C
        runuser -u munge -- munged --force --socket="$S/munge/munge.socket" --pid-file="$S/munge/munged.pid" --log-file="$S/munge/munged.log" --seed-file="$S/munge/munged.seed"
        export SLURM_CONF="$S/slurm.conf"
        slurmctld -c -f "$SLURM_CONF"
        slurmd -f "$SLURM_CONF" -N "$H"
        for i in $(seq 100); do sinfo -h -o %T 2>/dev/null | grep -q idle && exit 0; sleep 0.2; done
        exit 1
        """;

    // sbatch --wait asks ever more seldom; this ends when the last job does.
    private const string Jobs = """
        job=$(sbatch --parsable jobs/shards.sbatch) && last=$(sbatch --parsable --kill-on-invalid-dep=yes --dependency=afterok:$job jobs/gather.sbatch) || exit 1
        while sleep 0.2; do
            case $(scontrol -o show job "$last") in
                *JobState=COMPLETED*) exit 0 ;;
                *JobState=FAILED* | *JobState=CANCELLED* | *JobState=TIMEOUT* | *JobState=NODE_FAIL* | *JobState=BOOT_FAIL*) exit 1 ;;
            esac
        done
        """;

    [SlurmFact]
    public void An_array_of_shards_and_the_job_that_joins_them()
    {
        using TempFolder folder = new();

        // The authentication service refuses sockets below a private folder.
        string state = Directory.CreateTempSubdirectory("slurm").FullName;
        folder.Write("disc.toml", ToleranceTests.Device);
        try
        {
            Assert.Equal(0, Bash(Start, folder.Path, null, state).Exit);
            CommandResult written = Command.Run(["tolerance", "disc.toml", "--samples", "40", "--write-slurm", "2", "--out", "jobs"], null, folder.Path);
            Assert.True(written.Exit == 0, written.Error);
            Assert.Contains("sbatch --dependency=afterok:$job jobs/gather.sbatch", written.Out, StringComparison.Ordinal);
            CommandResult ran = Bash(
                Jobs, folder.Path,
                new() { ["SLURM_CONF"] = state + "/slurm.conf", ["FIELDSOLVE"] = "dotnet " + Command.Assembly });
            Assert.True(ran.Exit == 0, ran.Error + ran.Out + string.Join('\n', Directory.GetFiles(folder["jobs"], "*.log").Select(File.ReadAllText)));
            CommandResult one = Command.Run(["tolerance", "disc.toml", "--samples", "40", "--out", "one"], null, folder.Path);
            Assert.Equal(0, one.Exit);
            foreach (string file in new[] { "samples.csv", "budget.csv", "report.html" })
            {
                Assert.Equal(File.ReadAllBytes(folder["one/" + file]), File.ReadAllBytes(folder["jobs/result/" + file]));
            }
        }
        finally
        {
            Bash("for p in slurmd.pid slurmctld.pid munge/munged.pid; do [ -f \"$1/$p\" ] && kill \"$(cat \"$1/$p\")\"; done; true", folder.Path, null, state);
            Thread.Sleep(500);
            Directory.Delete(state, true);
        }
    }

    private static CommandResult Bash(string script, string folder, Dictionary<string, string>? environment, params string[] arguments)
    {
        var start = new ProcessStartInfo("bash", ["-c", script, "test", .. arguments])
        {
            UseShellExecute = false,
            WorkingDirectory = folder,
        };
        foreach ((string name, string value) in environment ?? [])
        {
            start.Environment[name] = value;
        }

        // Its output is not collected: services that a script starts keep the stream open.
        using Process process = Process.Start(start)!;
        Assert.True(process.WaitForExit(TimeSpan.FromMinutes(3)), "the script did not end");
        return new(process.ExitCode, "", "");
    }
}
