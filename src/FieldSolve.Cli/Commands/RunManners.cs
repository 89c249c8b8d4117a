using FieldSolve.Device;

namespace FieldSolve.Cli.Commands;

/// <summary>What all commands that solve have in common: a quick look, and what goes to standard error at the end.</summary>
internal static class RunManners
{
    private const double QuickFactor = 10;

    /// <summary>Said of every quick run.</summary>
    public const string QuickWarning =
        "Quick run: the wanted errors are ten times those of the device file; the error bars are those of this run.";

    /// <summary>The device with ten times the wanted errors.</summary>
    public static SheetDevice Quick(SheetDevice device) => device with
    {
        Mesh = device.Mesh with { Error = QuickFactor * device.Mesh.Error, EvenError = QuickFactor * device.Mesh.EvenError },
    };

    /// <summary>Cautions, then warnings, on standard error.</summary>
    public static void Say(IEnumerable<string> cautions, IEnumerable<string> warnings)
    {
        foreach (string text in cautions)
        {
            Console.Error.WriteLine("caution: " + text);
        }

        foreach (string text in warnings)
        {
            Console.Error.WriteLine("warning: " + text);
        }
    }
}
