using System.CommandLine;
using FieldSolve.Cli.Output;
using FieldSolve.Measured;
using FieldSolve.Quantities;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve overlay DEVICE MAP.csv --out DIR.</summary>
internal static class OverlayCommand
{
    private sealed record Choices(
        string Device, string Map, string Folder, MapQuantity Quantity, string? Noise, OverlayOptions Options, bool Pictures, bool Quiet, bool Json);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Argument<string> map = new("MAP") { Description = "Measured map (CSV): x_um, y_um, value_mV, perhaps sigma_mV; see meshes/README.md." };
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<string?> wiring = new("--wiring") { Description = "Wiring the map was measured in. Default: all are tried.", HelpName = "NAME" };
        Option<double?> current = new("--current")
        {
            Description = "Current through the sheet, for example \"100 uA\". Default: the last of the drive.",
            HelpName = "CURRENT",
            CustomParser = r => Read(r, "--current", Dimension.Current),
        };
        Option<MapQuantity> quantity = new("--quantity")
        {
            Description = "What the map shows: potential or field (|E|). Default: potential.",
            HelpName = "potential|field",
            CustomParser = r =>
            {
                string text = r.Tokens.Count == 1 ? r.Tokens[0].Value : "";
                if (text is not ("potential" or "field"))
                {
                    r.AddError($"--quantity '{text}': write potential or field");
                }

                return text == "field" ? MapQuantity.Field : MapQuantity.Potential;
            },
            DefaultValueFactory = _ => MapQuantity.Potential,
        };
        Option<string?> noise = new("--noise") { Description = "Standard deviation of the map's values, where it has no column sigma, for example \"0.1 mV\" or \"1 %\". Default: from the residuals.", HelpName = "RULE" };
        Option<bool> scale = new("--scale") { Description = "The map may be magnified by up to a quarter." };
        Option<bool> gain = new("--fixed-gain") { Description = "The probe's gain is 1." };
        Option<bool> offset = new("--fixed-offset") { Description = "The probe's offset is 0." };
        Option<double> shift = new("--most-shift")
        {
            Description = "Largest shift, as a share of the sheet's size. Default 0.15.",
            HelpName = "SHARE",
            CustomParser = r => ToleranceText.Number(r, "--most-shift", 0, 2) ?? 0,
            DefaultValueFactory = _ => 0.15,
        };
        Option<double> turn = new("--most-turn")
        {
            Description = "Largest turn either way, for example \"20 deg\". Default 15 deg.",
            HelpName = "ANGLE",
            CustomParser = r => Math.Abs(Read(r, "--most-turn", Dimension.Angle) ?? 0),
            DefaultValueFactory = _ => 15 * Math.PI / 180,
        };
        Option<bool> noPictures = new("--no-pictures") { Description = "No pictures and no report; tables and JSON only." };
        var command = new Command(
            "overlay",
            "Lays a measured map of the potential or of |E| on the computed one and says where they differ by more than the noise.\n\n"
            + "Example: fieldsolve overlay meshes/fit/bar.toml meshes/fit/bar-map.csv --wiring along --out results")
        {
            device, map, folder, wiring, current, quantity, noise, scale, gain, offset, shift, turn, noPictures, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                new Choices(
                    path, parsed.GetValue(map)!, parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-overlay", parsed.GetValue(quantity), parsed.GetValue(noise),
                    new OverlayOptions
                    {
                        Wiring = parsed.GetValue(wiring),
                        Current = parsed.GetValue(current),
                        Scale = parsed.GetValue(scale),
                        FixedGain = parsed.GetValue(gain),
                        FixedOffset = parsed.GetValue(offset),
                        MostShift = parsed.GetValue(shift),
                        MostTurn = parsed.GetValue(turn),
                    },
                    !parsed.GetValue(noPictures), parsed.GetValue(quiet), parsed.GetValue(json)),
                cancel));
        });
        return command;
    }

    private static int Run(Choices choices, CancellationToken cancel) => new MeasuredRun<MeasuredMap, OverlayResult>
    {
        What = "overlay",
        DataPath = choices.Map,
        Read = _ =>
        {
            NoiseRule? noise = null;
            if (choices.Noise is not null
                && !NoiseRule.TryParse(choices.Noise, choices.Quantity == MapQuantity.Potential ? Dimension.Voltage : Dimension.Field, out noise, out string? error))
            {
                Console.Error.WriteLine("fieldsolve: --noise " + error);
                return (null, []);
            }

            return MapTable.Read(choices.Map, choices.Quantity, noise);
        },
        Execute = (device, map, screen) => OverlayRun.Execute(device, map, choices.Options, screen, cancel),
        Write = (result, screen) => OverlayFiles.Write(result, choices.Folder, choices.Options, choices.Pictures, screen, cancel),
        Warnings = result => result.Warnings,
        Summary = result => choices.Json ? OverlayText.Json(result, choices.Folder) : OverlayText.Plain(result, choices.Folder),
        IsOk = result => result.Converged && result.Row.Status == Readings.RowStatus.Ok,
    }.Of(choices.Device, choices.Quiet);

    private static double? Read(System.CommandLine.Parsing.ArgumentResult result, string name, Dimension dimension)
    {
        string text = result.Tokens.Count == 1 ? result.Tokens[0].Value : "";
        if (Quantity.TryParse(text, out double value, out Dimension got, out _, out string? error) && got == dimension)
        {
            return value;
        }

        result.AddError($"{name} '{text}': {error ?? $"this is {got.NameWithArticle}"}; {dimension.NameWithArticle} is wanted, for example \"{dimension.Example}\"");
        return null;
    }
}
