using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Files;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve mesh DEVICE --out FILE.vtu.</summary>
internal static class MeshCommand
{
    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        var file = new Option<string?>("--out") { Description = "The file; its folder must exist. Default: <device>.vtu in the current folder.", HelpName = "FILE.vtu" };
        file.Validators.Add(given =>
        {
            string? path = given.GetValueOrDefault<string?>();
            if (path is null)
            {
                return;
            }

            if (Directory.Exists(path))
            {
                given.AddError($"--out '{path}' is a folder; name a file, for example {Path.Combine(path, "mesh.vtu")}");
            }
            else if (path.Length == 0 || Path.GetDirectoryName(Path.GetFullPath(path)) is not { } folder || !Directory.Exists(folder))
            {
                given.AddError($"--out '{path}': its folder does not exist; name a file in a folder that does");
            }
        });
        var command = new Command(
            "mesh",
            "The mesh alone, refined for the readings of the device's drive, with its quality figures.\n"
            + "--mesh FILE.vtu makes drive, turn and lockin use it.\n\nExample: fieldsolve mesh meshes/disc-12.toml --out disc.vtu")
        {
            device, file, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                path, parsed.GetValue(file) ?? Path.GetFileNameWithoutExtension(path) + ".vtu", parsed.GetValue(quiet), parsed.GetValue(json), cancel));
        });
        return command;
    }

    private static int Run(string path, string file, bool quiet, bool json, CancellationToken cancel)
    {
        if (DeviceLoading.Load(path) is not { } device)
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(quiet);
        if (!RunManners.TrySolve(path, screen, () => MeshRun.Make(device, screen, cancel), out (TriangleMesh Mesh, IReadOnlyList<RefinementLevel> Levels, bool IsMet) made))
        {
            return ExitCode.WrongInput;
        }

        VtuFile.WriteMesh(file, made.Mesh);
        screen.Clear();
        if (!made.IsMet)
        {
            Console.Error.WriteLine("warning: the mesh does not meet the wanted error of every reading; raise max_unknowns or ask for less.");
        }

        MeshQuality quality = MeshQuality.Of(made.Mesh);
        screen.Print(json ? MeshText.Json(quality, made.Levels, file) : MeshText.Plain(quality, made.Levels, file));
        return made.IsMet ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
