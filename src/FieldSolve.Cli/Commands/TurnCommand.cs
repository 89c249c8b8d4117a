using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Meshing;
using FieldSolve.Turning;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve turn DEVICE --out DIR.</summary>
internal static class TurnCommand
{
    private const int MostSteps = 720;
    private const double MostRatio = 1000;

    internal sealed record Choices(
        string Device, string Folder, string? Mesh, int AxisSteps, string? Wiring, IReadOnlyList<double> Ratios, bool Pictures, bool Quick, bool Quiet, bool Json);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<string?> mesh = SharedOptions.Mesh();
        var steps = new Option<int>("--turn-axis")
        {
            Description = "Keep the contacts and turn the crystal axis in so many steps through 360 degrees.",
            HelpName = "N",
        };
        steps.Validators.Add(given =>
        {
            if (given.Errors.Any() || given.Tokens.Count == 0)
            {
                return;
            }

            if (!int.TryParse(given.Tokens[0].Value, NumberStyles.Integer, CultureInfo.InvariantCulture, out int n) || n is < 2 or > MostSteps)
            {
                given.AddError($"--turn-axis is '{given.Tokens[0].Value}'; give a whole number of steps from 2 to {MostSteps}");
            }
        });
        var wiring = new Option<string?>("--wiring") { Description = "With --turn-axis: the wiring whose curve is wanted. Default: the first.", HelpName = "NAME" };
        var ratios = new Option<string?>("--ratio")
        {
            Description = "Overlay the linear response at these anisotropy ratios, at fixed sqrt(a b), for example 1,2,4,8.",
            HelpName = "LIST",
        };
        ratios.Validators.Add(given =>
        {
            if (given.Tokens.Count > 0 && Ratios(given.Tokens[0].Value) is null)
            {
                given.AddError($"--ratio is '{given.Tokens[0].Value}'; give numbers from 1 to {MostRatio.ToString(CultureInfo.InvariantCulture)} with commas between, for example 1,2,4,8");
            }
        });
        var noPictures = new Option<bool>("--no-pictures") { Description = "No pictures and no report; tables, fit and run.json only." };
        Option<bool> quick = SharedOptions.Quick();
        var command = new Command(
            "turn",
            "Voltages against the direction of the current, and what they say about the sheet.\n\n"
            + "Steps the first wiring round the ring that [turn] around names, or takes every [[wiring]] as one direction,\n"
            + "or turns the crystal under one wiring (--turn-axis).\n\n"
            + "Example: fieldsolve turn meshes/disc-12.toml --out results --ratio 1,2,4,8")
        {
            device, folder, mesh, steps, wiring, ratios, noPictures, quick, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                new Choices(
                    path,
                    parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-turn",
                    parsed.GetValue(mesh),
                    parsed.GetValue(steps),
                    parsed.GetValue(wiring),
                    Ratios(parsed.GetValue(ratios) ?? "") ?? [],
                    !parsed.GetValue(noPictures),
                    parsed.GetValue(quick),
                    parsed.GetValue(quiet),
                    parsed.GetValue(json)),
                cancel));
        });
        return command;
    }

    // Null when the text is no list of ratios.
    private static double[]? Ratios(string text)
    {
        if (text.Length == 0)
        {
            return [];
        }

        var list = new List<double>();
        foreach (string part in text.Split(','))
        {
            if (!double.TryParse(part, NumberStyles.Float, CultureInfo.InvariantCulture, out double ratio) || !(ratio is >= 1 and <= MostRatio))
            {
                return null;
            }

            list.Add(ratio);
        }

        return [.. list.Distinct()];
    }

    private static int Run(Choices choices, CancellationToken cancel)
    {
        if (DeviceLoading.Load(choices.Device) is not { } device)
        {
            return ExitCode.WrongInput;
        }

        if (device.Drive is null)
        {
            Console.Error.WriteLine(new Fault(
                choices.Device, 1, 1, "the file has no [drive]; add one, for example: current = { from = \"0 uA\", to = \"100 uA\", steps = 5 }"));
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
        var options = new TurnOptions { AxisSteps = choices.AxisSteps, Wiring = choices.Wiring, Ratios = choices.Ratios, ForPictures = choices.Pictures, Mesh = mesh };
        if (!RunManners.TrySolve(choices.Device, screen, () => TurnRun.Execute(device, options, screen, cancel), out TurnResult? result))
        {
            return ExitCode.WrongInput;
        }

        if (choices.Quick)
        {
            result = result with { Drive = result.Drive with { Warnings = [.. result.Drive.Warnings, RunManners.QuickWarning] } };
        }

        Directory.CreateDirectory(choices.Folder);
        result = TurnFiles.Write(result, choices, screen, cancel);
        screen.Clear();
        RunManners.Say(result.Drive.Cautions, result.Drive.Warnings);

        screen.Print(choices.Json ? TurnText.Json(result, choices.Folder) : TurnText.Plain(result, choices.Folder));
        return result.Drive.Cancelled ? ExitCode.Cancelled : result.Drive.AllOk ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
