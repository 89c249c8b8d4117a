using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve gather DIR…: joins the shards of a tolerance run.</summary>
internal static class GatherCommand
{
    private sealed record Choices(string[] Folders, string Out, string? Device, double? Explain, double? Wanted, bool Pictures, bool Quiet, bool Json);

    public static Command Create()
    {
        Argument<string[]> folders = new("DIR") { Description = "Folders of the shards, in any order.", Arity = ArgumentArity.OneOrMore };
        Option<string?> folder = SharedOptions.Out();
        folder.Description = "Folder for the joined results; made when missing. Default: <device>-tolerance in the current folder.";
        Option<string?> device = new("--device") { Description = "The device file, where it is not found from here by the name the shards used.", HelpName = "FILE" };
        Option<double?> explain = ToleranceText.Explain(), wanted = ToleranceText.Wanted();
        Option<bool> noPictures = new("--no-pictures") { Description = "No pictures and no report; tables and run.json only." };
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        var command = new Command(
            "gather",
            "Join the shards of a tolerance run into what one run would have written.\n\nExample: fieldsolve gather shards/shard-* --out results")
        {
            folders, folder, device, explain, wanted, noPictures, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) => Task.Run(() => Run(
            new Choices(
                parsed.GetValue(folders)!, parsed.GetValue(folder) ?? "", parsed.GetValue(device), parsed.GetValue(explain), parsed.GetValue(wanted),
                !parsed.GetValue(noPictures), parsed.GetValue(quiet), parsed.GetValue(json)),
            cancel)));
        return command;
    }

    private static int Run(Choices choices, CancellationToken cancel)
    {
        GatheredSamples gathered;
        try
        {
            gathered = GatheredSamples.Read(choices.Folders);
        }
        catch (Exception e) when (e is JournalException or IOException or UnauthorizedAccessException)
        {
            Console.Error.WriteLine("fieldsolve: " + e.Message);
            return ExitCode.WrongInput;
        }

        string path = choices.Device ?? gathered.Head.Device;
        if (choices.Device is null && !File.Exists(path))
        {
            Console.Error.WriteLine($"fieldsolve: the device file '{path}' of the shards is not found from here; name it with --device FILE");
            return ExitCode.WrongInput;
        }

        if (DeviceLoading.Load(path) is not { } device)
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(choices.Quiet);
        var options = new ToleranceOptions { Samples = gathered.Head.Samples, Seed = gathered.Head.Seed, Explain = choices.Explain, Wanted = choices.Wanted };
        string folder = choices.Out.Length > 0 ? choices.Out : Path.GetFileNameWithoutExtension(path) + "-tolerance";
        return ToleranceCommand.Execute(device, options, gathered, screen, cancel) is { } result
            ? ToleranceCommand.Finish(result, folder, options, choices.Pictures, choices.Json, screen, null, cancel)
            : ExitCode.WrongInput;
    }
}
