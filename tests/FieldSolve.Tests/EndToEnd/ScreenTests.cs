using System.Diagnostics;
using System.Text;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>What a person at a terminal sees: the progress of a run, and an answer to Ctrl-C at once. The terminal is made by util-linux's "script".</summary>
[Collection(SampleRuns.Collection)]
public class ScreenTests
{
    private const string Coarse = "[mesh]\nerror = 1e-2\neven_error = 0.1\n";

    [TerminalFact]
    public void Progress_shows_and_is_gone_at_the_end()
    {
        using var folder = new TempFolder();
        using Terminal terminal = Terminal.Start(["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--no-pictures"], folder.Path);
        terminal.Finish();
        string seen = terminal.Seen;
        Assert.Equal(0, terminal.Exit);
        Assert.Contains("\rrefining, level 0: ", seen, StringComparison.Ordinal);
        Assert.Contains(" states solved", seen, StringComparison.Ordinal);

        // Wiped before the summary: blanks between two carriage returns.
        string wiped = seen[..seen.IndexOf("results in", StringComparison.Ordinal)];
        Assert.Contains("\r" + new string(' ', 20), wiped[wiped.LastIndexOf("solved", StringComparison.Ordinal)..], StringComparison.Ordinal);
    }

    [TerminalFact]
    public void The_keys_of_an_interrupt_are_answered_and_finished_rows_kept()
    {
        using var folder = new TempFolder();
        string device = folder.Write("long.toml", File.ReadAllText(Repository.Sample("disc-12.toml")).Replace("steps = 11", "steps = 4001", StringComparison.Ordinal) + Coarse);
        using Terminal terminal = Terminal.Start(["drive", device, "--out", folder["out"], "--no-pictures", "--maps", "none"], folder.Path);
        Wait.Until(() => terminal.Seen.Contains(" rows", StringComparison.Ordinal));
        terminal.Type('\u0003');
        terminal.Finish();
        Assert.Equal(130, terminal.Exit);
        Assert.Contains("\rstopping", terminal.Seen, StringComparison.Ordinal);
        Assert.Contains("cancelled", terminal.Seen[terminal.Seen.LastIndexOf("stopping", StringComparison.Ordinal)..], StringComparison.Ordinal);
        Assert.True(File.Exists(folder["out/curves.csv"]));
    }

    // A person's terminal: what is typed goes in, what the program writes to it is kept.
    private sealed class Terminal : IDisposable
    {
        private readonly Process process;
        private readonly StringBuilder text = new();
        private readonly Task reader;

        private Terminal(Process process)
        {
            this.process = process;
            reader = Task.Factory.StartNew(Read, TaskCreationOptions.LongRunning);
        }

        public string Seen
        {
            get
            {
                lock (text)
                {
                    return text.ToString();
                }
            }
        }

        public int Exit => process.ExitCode;

        public static Terminal Start(string[] arguments, string folder)
        {
            string command = string.Join(' ', new[] { "dotnet", EndToEndTests.Command.Assembly }.Concat(arguments).Select(a => $"'{a}'"));
            var start = new ProcessStartInfo("env", ["--default-signal=INT", "script", "--quiet", "--return", "--command", command, "/dev/null"])
            {
                RedirectStandardInput = true,
                RedirectStandardOutput = true,
                RedirectStandardError = true,
                WorkingDirectory = folder,
                StandardOutputEncoding = Encoding.UTF8,
            };
            return new(Process.Start(start)!);
        }

        public void Type(char key)
        {
            process.StandardInput.Write(key);
            process.StandardInput.Flush();
        }

        public void Finish()
        {
            Assert.True(process.WaitForExit(TimeSpan.FromMinutes(3)), "the command did not end");
            reader.Wait();
        }

        public void Dispose()
        {
            if (!process.HasExited)
            {
                process.Kill(entireProcessTree: true);
            }

            process.Dispose();
        }

        private void Read()
        {
            char[] some = new char[4096];
            for (int n; (n = process.StandardOutput.Read(some, 0, some.Length)) > 0;)
            {
                lock (text)
                {
                    text.Append(some, 0, n);
                }
            }
        }
    }
}

/// <summary>A test at a terminal, which util-linux's "script" makes and GNU's "env" gives its signals.</summary>
[AttributeUsage(AttributeTargets.Method)]
public sealed class TerminalFactAttribute : FactAttribute
{
    private static readonly string? Missing = Why();

    /// <summary>Skips where there can be no terminal.</summary>
    public TerminalFactAttribute() => Skip = Missing;

    private static string? Why()
    {
        const string Reason = "The programs \"script\" (util-linux) and \"env\" (GNU) are not installed.";
        if (!OperatingSystem.IsLinux())
        {
            return "Needs Linux.";
        }

        try
        {
            using Process process = Process.Start(new ProcessStartInfo("env", ["--default-signal=INT", "script", "--quiet", "--return", "--command", "true", "/dev/null"])
            {
                RedirectStandardInput = true,
                RedirectStandardOutput = true,
                RedirectStandardError = true,
            })!;
            process.WaitForExit();
            return process.ExitCode == 0 ? null : Reason;
        }
        catch (System.ComponentModel.Win32Exception)
        {
            return Reason;
        }
    }
}
