using System.CommandLine;
using FieldSolve.Bands;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve bands BANDS --out DIR.</summary>
internal static class BandsCommand
{
    public static Command Create()
    {
        var bands = new Argument<string>("BANDS") { Description = "The bands file (TOML; see meshes/README.md)." };
        Option<string?> folder = SharedOptions.Out();
        folder.Description = "Folder for the results; made when missing. Default: <bands>-bands in the current folder.";
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        var noPictures = new Option<bool>("--no-pictures") { Description = "No pictures and no report; profile.csv, law.toml and run.json only." };
        var command = new Command(
            "bands",
            "A sheet law and the conductance against direction, from a band model or a measured profile.\n\n"
            + "Example: fieldsolve bands meshes/bands/tilted-cones.toml --out results")
        {
            bands, folder, noPictures, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(bands)!;
            string into = parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-bands";
            return Task.Run(() => Run(path, into, !parsed.GetValue(noPictures), parsed.GetValue(quiet), parsed.GetValue(json), cancel));
        });
        return command;
    }

    private static int Run(string path, string folder, bool pictures, bool quiet, bool json, CancellationToken cancel)
    {
        BandReading reading = BandFile.Read(path);
        foreach (Fault fault in reading.Faults)
        {
            Console.Error.WriteLine(fault);
        }

        if (reading.Input is not { } input)
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(quiet);
        BandsResult result;
        try
        {
            screen.Report(new("integrating over the contours", 0, 0));
            result = BandsRun.Execute(input, cancel);
        }
        catch (BandException e)
        {
            screen.Clear();
            Console.Error.WriteLine(new Fault(path, 1, 1, e.Message));
            return ExitCode.WrongInput;
        }

        Directory.CreateDirectory(folder);
        bool cancelled = BandsFiles.Write(result, folder, pictures, screen, cancel);
        screen.Clear();
        RunManners.Say(result.Cautions, result.Warnings);

        screen.Print(json ? BandsText.Json(result, folder) : BandsText.Plain(result, folder));
        return cancelled ? ExitCode.Cancelled : result.AllOk ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
