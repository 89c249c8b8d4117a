using System.CommandLine;
using FieldSolve.Device;

namespace FieldSolve.Cli.Commands;

/// <summary>--shift c4=50nm: causes of error applied by hand.</summary>
internal static class ShiftOption
{
    public static Option<string[]> Create() => new("--shift")
    {
        Description = "Change the device before the solve, as often as wanted: c4=50nm moves a contact along its edge; c4.width=20nm, p.x=1um, axis=1deg, growth=-20nm.",
        HelpName = "NAME=VALUE",
        AllowMultipleArgumentsPerToken = false,
        DefaultValueFactory = _ => [],
    };

    /// <summary>The changed device, or null after the fault went to standard error.</summary>
    public static SheetDevice? Apply(SheetDevice device, IReadOnlyList<string> shifts)
    {
        if (shifts.Count == 0)
        {
            return device;
        }

        (SheetDevice? changed, string? error) = CauseText.Apply(device, shifts);
        if (changed is null)
        {
            Console.Error.WriteLine("fieldsolve: --shift " + error);
        }

        return changed;
    }
}
