using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve drive DEVICE --out DIR.</summary>
internal static class DriveCommand
{
    private sealed record Choices(string Device, string Folder, string? Mesh, MapChoice Maps, bool AllSigns, bool Pictures, bool Quick, bool Quiet, bool Json, string[] Shifts);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<string?> mesh = SharedOptions.Mesh();
        var maps = new Option<string>("--maps")
        {
            Description = "Potential maps to write (.vtu): all, last (the last current of each wiring) or none.",
            HelpName = "all|last|none",
            DefaultValueFactory = _ => "last",
        };
        maps.AcceptOnlyFromAmong("all", "last", "none");
        var allSigns = new Option<bool>("--all-signs") { Description = "Also write the rows at the reversed currents." };
        var noPictures = new Option<bool>("--no-pictures") { Description = "No pictures and no report; curves, maps and run.json only." };
        Option<bool> quick = SharedOptions.Quick();
        Option<string[]> shift = ShiftOption.Create();
        var command = new Command(
            "drive",
            "Potential, field, current and probe voltages as the drive increases.\n\n"
            + "Example: fieldsolve drive meshes/disc-12.toml --out results --maps all")
        {
            device, folder, mesh, maps, allSigns, noPictures, quick, shift, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                new Choices(
                    path,
                    parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-drive",
                    parsed.GetValue(mesh),
                    Enum.Parse<MapChoice>(parsed.GetValue(maps)!, ignoreCase: true),
                    parsed.GetValue(allSigns),
                    !parsed.GetValue(noPictures),
                    parsed.GetValue(quick),
                    parsed.GetValue(quiet),
                    parsed.GetValue(json),
                    parsed.GetValue(shift)!),
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

        if (ShiftOption.Apply(device, choices.Shifts) is not { } shifted)
        {
            return ExitCode.WrongInput;
        }

        // The report and the summary say what was changed by hand.
        device = choices.Shifts.Length == 0 ? shifted : shifted with { Title = $"{shifted.Title} with {string.Join(", ", choices.Shifts)}" };
        if (device.Drive is null)
        {
            Console.Error.WriteLine(new Fault(
                choices.Device, 1, 1, "the file has no [drive]; add one, for example: current = { from = \"0 uA\", to = \"100 uA\", steps = 11 }"));
            return ExitCode.WrongInput;
        }

        if (choices.Quick)
        {
            device = RunManners.Quick(device);
        }

        if (!MeshLoading.TryLoad(choices.Mesh, device, out TriangleMesh? mesh))
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(choices.Quiet);
        var options = new DriveOptions { Maps = choices.Maps, ForPictures = choices.Pictures, Mesh = mesh };
        if (!RunManners.TrySolve(choices.Device, screen, () => DriveRun.Execute(device, options, screen, cancel), out DriveResult? result))
        {
            return ExitCode.WrongInput;
        }

        if (choices.Quick)
        {
            result = result with { Warnings = [.. result.Warnings, RunManners.QuickWarning] };
        }

        Directory.CreateDirectory(choices.Folder);
        result = DriveFiles.Write(
            result, choices.Folder, new(choices.Maps, choices.AllSigns, choices.Pictures && !result.Cancelled, choices.Quick, choices.Shifts), screen, cancel);
        screen.Clear();
        RunManners.Say(result.Cautions, result.Warnings);

        screen.Print(choices.Json ? DriveText.Json(result, choices.Folder) : DriveText.Plain(result, choices.Folder));
        return result.Cancelled ? ExitCode.Cancelled : result.AllOk ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
