using System.CommandLine;
using System.ComponentModel;
using System.Diagnostics;
using System.Text.Json.Nodes;
using FieldSolve.Cli.Open;
using FieldSolve.Device;
using FieldSolve.Sessions;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve open DEVICE.</summary>
internal static class OpenCommand
{
    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        json.Description = "Print the address as JSON.";
        var noBrowser = new Option<bool>("--no-browser") { Description = "Only print the address." };
        var command = new Command(
            "open",
            "A page on this machine on which contacts, axis, law and drive are changed and every reading follows. Writes only what you save. "
            + "Ends with Ctrl-C or some seconds after its last page was closed.\n\nExample: fieldsolve open meshes/disc-12.toml")
        {
            device, noBrowser, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
            Run(parsed.GetValue(device)!, parsed.GetValue(noBrowser), parsed.GetValue(quiet), parsed.GetValue(json), cancel));
        return command;
    }

    private static async Task<int> Run(string path, bool noBrowser, bool quiet, bool json, CancellationToken cancel)
    {
        (EditSession? session, IReadOnlyList<Fault> faults) = EditSession.Open(path);
        if (session is null)
        {
            foreach (Fault fault in faults)
            {
                Console.Error.WriteLine(fault);
            }

            return ExitCode.WrongInput;
        }

        await using OpenServer server = await OpenServer.Start(session, new OpenOptions());
        Console.Out.WriteLine(json
            ? new JsonObject { ["title"] = session.State.Device.Title, ["device"] = path, ["address"] = server.Address }.ToJsonString(new() { WriteIndented = true })
            : server.Address);
        Console.Out.Flush();
        if (!quiet)
        {
            Console.Error.WriteLine("The page answers on this machine alone. Ctrl-C, or closing the last page, ends it; nothing is written unless you save.");
        }

        if (!noBrowser)
        {
            Browse(server.Address);
        }

        await server.Ended(cancel);
        if (!session.State.IsSaved)
        {
            Console.Error.WriteLine("The layout was changed after the last save; these changes are gone.");
        }

        return ExitCode.Done;
    }

    private static void Browse(string address)
    {
        try
        {
            Process.Start(new ProcessStartInfo(address) { UseShellExecute = true })?.Dispose();
        }
        catch (Exception e) when (e is Win32Exception or InvalidOperationException or PlatformNotSupportedException or FileNotFoundException)
        {
            Console.Error.WriteLine("No browser could be started; open the address by hand.");
        }
    }
}
