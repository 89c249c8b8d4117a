using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Lockin;
using FieldSolve.Meshing;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve lockin DEVICE --out DIR.</summary>
internal static class LockinCommand
{
    private sealed record Choices(string Device, string Folder, string? Mesh, bool Pictures, bool Quick, bool Quiet, bool Json);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<string?> mesh = SharedOptions.Mesh();
        var noPictures = new Option<bool>("--no-pictures") { Description = "No pictures and no report; harmonics and run.json only." };
        Option<bool> quick = SharedOptions.Quick();
        var command = new Command(
            "lockin",
            "AC drive: the harmonics of every pair as a lock-in amplifier reads them.\n\n"
            + "Example: fieldsolve lockin meshes/disc-12.toml --out results")
        {
            device, folder, mesh, noPictures, quick, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                new Choices(
                    path,
                    parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-lockin",
                    parsed.GetValue(mesh),
                    !parsed.GetValue(noPictures),
                    parsed.GetValue(quick),
                    parsed.GetValue(quiet),
                    parsed.GetValue(json)),
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

        if (LockinRun.Missing(device) is { } missing)
        {
            Console.Error.WriteLine(missing);
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
        var options = new LockinOptions { Frames = choices.Pictures, Mesh = mesh };
        if (!RunManners.TrySolve(choices.Device, screen, () => LockinRun.Execute(device, options, screen, cancel), out LockinResult? result))
        {
            return ExitCode.WrongInput;
        }

        if (choices.Quick)
        {
            result = result with { Warnings = [.. result.Warnings, RunManners.QuickWarning] };
        }

        Directory.CreateDirectory(choices.Folder);
        result = LockinFiles.Write(result, choices.Folder, choices.Pictures && !result.Cancelled, choices.Quick, screen, cancel);
        screen.Clear();
        RunManners.Say(result.Cautions, result.Warnings);

        screen.Print(choices.Json ? LockinText.Json(result, choices.Folder) : LockinText.Plain(result, choices.Folder));
        return result.Cancelled ? ExitCode.Cancelled : result.AllOk ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
