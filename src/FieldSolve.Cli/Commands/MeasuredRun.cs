using FieldSolve.Cli.Output;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Runs;
using FieldSolve.Sparse;

namespace FieldSolve.Cli.Commands;

/// <summary>What the commands share that set a device beside a table of measured data: reading both, faults with their places, warnings and the exit status.</summary>
/// <typeparam name="TData">What the table becomes.</typeparam>
/// <typeparam name="TResult">What the run returns.</typeparam>
internal sealed record MeasuredRun<TData, TResult>
    where TData : class
{
    /// <summary>"fit": for the message of a cancelled run.</summary>
    public required string What { get; init; }

    /// <summary>Path of the table, for faults of the data.</summary>
    public required string DataPath { get; init; }

    /// <summary>Reads the table.</summary>
    public required Func<SheetDevice, (TData? Data, IReadOnlyList<Fault> Faults)> Read { get; init; }

    /// <summary>Runs.</summary>
    public required Func<SheetDevice, TData, Screen, TResult> Execute { get; init; }

    /// <summary>Writes the files; true when cancelled on the way.</summary>
    public required Func<TResult, Screen, bool> Write { get; init; }

    /// <summary>Warnings of the result.</summary>
    public required Func<TResult, IReadOnlyList<string>> Warnings { get; init; }

    /// <summary>The summary for standard output.</summary>
    public required Func<TResult, string> Summary { get; init; }

    /// <summary>Whether the result reached what was wanted.</summary>
    public required Func<TResult, bool> IsOk { get; init; }

    /// <summary>From the path of the device file to the exit status.</summary>
    public int Of(string devicePath, bool quiet)
    {
        if (DeviceLoading.Load(devicePath) is not { } device)
        {
            return ExitCode.WrongInput;
        }

        (TData? data, IReadOnlyList<Fault> faults) = Read(device);
        foreach (Fault fault in faults)
        {
            Console.Error.WriteLine(fault);
        }

        if (data is null)
        {
            return ExitCode.WrongInput;
        }

        var screen = new Screen(quiet);
        TResult result;
        try
        {
            result = Execute(device, data, screen);
        }
        catch (Exception e) when (e is FieldSpaceException or MeshException or PivotException or FitException)
        {
            screen.Clear();
            (int line, int column) = e is FitException fit ? (fit.Line, fit.Column) : (1, 1);
            Console.Error.WriteLine(new Fault(e is FitException { IsOfData: true } ? DataPath : devicePath, line, column, e.Message.ReplaceLineEndings(" ")));
            return ExitCode.WrongInput;
        }
        catch (OperationCanceledException)
        {
            screen.Clear();
            Console.Error.WriteLine($"fieldsolve: cancelled before the {What} stood; nothing was written");
            return ExitCode.Cancelled;
        }

        bool cancelled = Write(result, screen);
        screen.Clear();
        RunManners.Say([], Warnings(result));

        screen.Print(Summary(result));
        return cancelled ? ExitCode.Cancelled : IsOk(result) ? ExitCode.Done : ExitCode.ToleranceNotReached;
    }
}
