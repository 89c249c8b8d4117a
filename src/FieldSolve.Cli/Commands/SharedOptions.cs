using System.CommandLine;

namespace FieldSolve.Cli.Commands;

/// <summary>Arguments and options that several commands share; each call makes a new one.</summary>
internal static class SharedOptions
{
    public static Argument<string> Device() => new("DEVICE") { Description = "The device file (TOML; see meshes/README.md)." };

    public static Option<string?> Out()
    {
        var option = new Option<string?>("--out")
        {
            Description = "Folder for the results; made when missing. Default: <device>-<command> in the current folder.",
            HelpName = "DIR",
        };

        // Said before the solve, not after it.
        option.Validators.Add(given =>
        {
            string? folder = given.GetValueOrDefault<string?>();
            if (folder is not null && string.IsNullOrWhiteSpace(folder))
            {
                given.AddError("--out is empty; name a folder");
                return;
            }

            for (string? path = folder is null ? null : Path.GetFullPath(folder); path is not null; path = Path.GetDirectoryName(path))
            {
                if (File.Exists(path))
                {
                    given.AddError($"--out '{folder}': '{path}' is a file; name a folder");
                    return;
                }
            }
        });
        return option;
    }

    public static Option<string?> Mesh() => new("--mesh")
    {
        Description = "Use this mesh (.vtu, as 'fieldsolve mesh' writes it) as it is; its uniform split gives the answers.",
        HelpName = "FILE",
    };

    public static Option<bool> Quick() => new("--quick") { Description = "Ten times the wanted errors of the device file, for a first look; the summary says so." };

    public static Option<bool> Quiet() => new("--quiet") { Description = "No summary and no progress; warnings and faults are still shown." };

    public static Option<bool> Json() => new("--json") { Description = "Print the summary as JSON." };
}
