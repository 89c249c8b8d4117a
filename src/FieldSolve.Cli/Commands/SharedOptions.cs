using System.CommandLine;

namespace FieldSolve.Cli.Commands;

/// <summary>Arguments and options that several commands share; each call makes a new one.</summary>
internal static class SharedOptions
{
    public static Argument<string> Device() => new("DEVICE") { Description = "The device file (TOML; see meshes/README.md)." };

    public static Option<string?> Out() => new("--out")
    {
        Description = "Folder for the results; made when missing. Default: <device>-<command> in the current folder.",
        HelpName = "DIR",
    };

    public static Option<bool> Quiet() => new("--quiet") { Description = "No summary and no progress; warnings and faults are still shown." };

    public static Option<bool> Json() => new("--json") { Description = "Print the summary as JSON." };
}
