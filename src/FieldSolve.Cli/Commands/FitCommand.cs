using System.CommandLine;
using System.CommandLine.Parsing;
using FieldSolve.Cli.Output;
using FieldSolve.Lockin;
using FieldSolve.Measured;
using FieldSolve.Quantities;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>fieldsolve fit DEVICE DATA.csv --out DIR.</summary>
internal static class FitCommand
{
    private const int MostSuggestions = 50, MostStarts = 36;

    private sealed record Choices(string Device, string Data, string Folder, NoiseRule? Noise, FitOptions Options, bool Pictures, bool Quiet, bool Json);

    public static Command Create()
    {
        Argument<string> device = SharedOptions.Device();
        Argument<string> data = new("DATA") { Description = "Measured voltages (CSV): wiring, pair, current_A or current_rms_A, harmonic, value_V, sigma_V; see meshes/README.md." };
        Option<string?> folder = SharedOptions.Out();
        Option<bool> quiet = SharedOptions.Quiet(), json = SharedOptions.Json();
        Option<NoiseRule?> noise = NoiseOption(Dimension.Voltage, "\"20 nV + 0.1 %\"");
        Option<bool> robust = new("--robust") { Description = "Outliers count less (loss of Student's t with four degrees of freedom)." };
        Option<int> suggest = new("--suggest") { Description = "Suggest the N readings that would shrink the uncertainties most.", HelpName = "N" };
        suggest.Validators.Add(r => Within(r, r.GetValueOrDefault<int>(), 0, MostSuggestions, "--suggest"));
        Option<int> starts = new("--starts") { Description = "Axis angles to start from when the axis is free. Default 4.", HelpName = "N", DefaultValueFactory = _ => 4 };
        starts.Validators.Add(r => Within(r, r.GetValueOrDefault<int>(), 1, MostStarts, "--starts"));
        Option<bool> intervals = new("--intervals") { Description = "95 % intervals by profile likelihood for all numbers without a prior, not only those with interval = true." };
        Option<bool> noPictures = new("--no-pictures") { Description = "No pictures and no report; tables and JSON only." };
        var command = new Command(
            "fit",
            "Numbers of the law, contacts and placement that [fit] leaves free, from measured voltages.\n\n"
            + "Example: fieldsolve fit meshes/fit/disc-12.toml meshes/fit/disc-12-data.csv --suggest 3 --out results")
        {
            device, data, folder, noise, robust, suggest, starts, intervals, noPictures, quiet, json,
        };
        command.SetAction((ParseResult parsed, CancellationToken cancel) =>
        {
            string path = parsed.GetValue(device)!;
            return Task.Run(() => Run(
                new Choices(
                    path, parsed.GetValue(data)!, parsed.GetValue(folder) ?? Path.GetFileNameWithoutExtension(path) + "-fit", parsed.GetValue(noise),
                    new FitOptions
                    {
                        Robust = parsed.GetValue(robust),
                        Suggest = parsed.GetValue(suggest),
                        Starts = parsed.GetValue(starts),
                        AllIntervals = parsed.GetValue(intervals),
                        Memory = new GateMemory(),
                    },
                    !parsed.GetValue(noPictures), parsed.GetValue(quiet), parsed.GetValue(json)),
                cancel));
        });
        return command;
    }

    /// <summary>--noise for values of some dimension.</summary>
    internal static Option<NoiseRule?> NoiseOption(Dimension dimension, string example) => new("--noise")
    {
        Description = $"Standard deviation of the measured values, where the table has no column sigma: absolute, a share of the value, or both, for example {example}.",
        HelpName = "RULE",
        CustomParser = r =>
        {
            if (NoiseRule.TryParse(r.Tokens.Count == 1 ? r.Tokens[0].Value : "", dimension, out NoiseRule? rule, out string? error))
            {
                return rule;
            }

            r.AddError("--noise " + error);
            return null;
        },
    };

    private static int Run(Choices choices, CancellationToken cancel) => new MeasuredRun<MeasuredVoltages, FitResult>
    {
        What = "fit",
        DataPath = choices.Data,
        Read = device => VoltageTable.Read(choices.Data, device, choices.Noise),
        Execute = (device, data, screen) => FitRun.Execute(device, data, choices.Options, screen, cancel),
        Write = (result, screen) => FitFiles.Write(result, choices.Folder, choices.Options, choices.Pictures, screen, cancel),
        Warnings = result => result.Warnings,
        Summary = result => choices.Json ? FitText.Json(result, choices.Folder) : FitText.Plain(result, choices.Folder),
        IsOk = result => result.AllOk,
    }.Of(choices.Device, choices.Quiet);

    private static void Within(OptionResult result, int value, int least, int most, string name)
    {
        if (value < least || value > most)
        {
            result.AddError(FormattableString.Invariant($"{name} must be from {least} to {most}"));
        }
    }
}
