using System.Diagnostics.CodeAnalysis;
using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Runs;
using FieldSolve.Sparse;
using FieldSolve.Turning;

namespace FieldSolve.Cli.Commands;

/// <summary>What all commands that solve have in common: a quick look, the fault of a device that cannot be solved, and what goes to standard error at the end.</summary>
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

    /// <summary>Solves; false after a fault of the device went to standard error.</summary>
    /// <param name="path">The device file, as the user gave it.</param>
    /// <param name="screen">Its progress line is cleared before a fault.</param>
    /// <param name="solve">What to do.</param>
    /// <param name="result">What came of it.</param>
    public static bool TrySolve<T>(string path, Screen screen, Func<T> solve, [NotNullWhen(true)] out T? result)
        where T : notnull
    {
        try
        {
            result = solve();
            return true;
        }
        catch (Exception e) when (e is FieldSpaceException or MeshException or PivotException or ToleranceException or TurnException)
        {
            screen.Clear();
            Console.Error.WriteLine(new Fault(path, 1, 1, e.Message.ReplaceLineEndings(" ")));
            result = default;
            return false;
        }
    }

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
