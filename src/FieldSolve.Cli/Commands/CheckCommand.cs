using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Device;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve check DEVICE.</summary>
internal static class CheckCommand
{
    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        var command = new Command(
            "check", "Read and validate a device file and print what was understood. Writes nothing.\n\nExample: fieldsolve check meshes/disc-12.toml")
        {
            device, quiet, json,
        };
        command.SetAction((ParseResult parsed) =>
        {
            if (DeviceLoading.Load(parsed.GetValue(device)!) is not { } read)
            {
                return ExitCode.WrongInput;
            }

            new Screen(parsed.GetValue(quiet)).Print(parsed.GetValue(json) ? DeviceText.Json(read) : DeviceText.Plain(read));
            return ExitCode.Done;
        });
        return command;
    }
}
