using System.CommandLine;
using FieldSolve.Cli.Commands;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

// Paths may be printed in any script; the names of quantities carry µ and Ω.
Console.OutputEncoding = new System.Text.UTF8Encoding(false);

var root = new RootCommand(
    "Probe voltages, potential maps and curves of a thin anisotropic sheet whose conductivity depends on the local field.\n\n"
    + "Example: fieldsolve drive meshes/disc-12.toml --out results");
foreach (Command command in CommandList.All())
{
    root.Add(command);
}

ParseResult parsed = root.Parse(args);
if (parsed.Errors.Count > 0)
{
    if (args is [{ Length: > 0 } first, ..] && first[0] != '-' && root.Subcommands.All(c => c.Name != first))
    {
        // What follows an unknown command is not worth a line each.
        Console.Error.WriteLine($"fieldsolve: there is no command '{first.ReplaceLineEndings(" ")}'; there are {string.Join(", ", root.Subcommands.Select(c => c.Name))}");
    }
    else
    {
        foreach (var error in parsed.Errors)
        {
            Console.Error.WriteLine("fieldsolve: " + error.Message);
        }
    }

    Console.Error.WriteLine("Try 'fieldsolve --help'.");
    return ExitCode.WrongInput;
}

try
{
    return await parsed.InvokeAsync(new InvocationConfiguration
    {
        EnableDefaultExceptionHandler = false,
        ProcessTerminationTimeout = TimeSpan.FromSeconds(20),
    });
}
catch (OperationCanceledException)
{
    Console.Error.WriteLine("fieldsolve: cancelled before there was anything to keep; nothing was written");
    return ExitCode.Cancelled;
}
catch (Exception e) when (Reason(e) is not null)
{
    Console.Error.WriteLine("fieldsolve: " + Reason(e)!.ReplaceLineEndings(" "));
    return ExitCode.WrongInput;
}

// What the surroundings or the device forbid, also where it befell one of several threads; null for a mistake of the program's own.
static string? Reason(Exception e) => e switch
{
    AggregateException all => all.Flatten().InnerExceptions.Select(Reason).FirstOrDefault(r => r is not null),
    IOException or UnauthorizedAccessException or FieldSpaceException or MeshException or PivotException => e.Message,
    OutOfMemoryException => "the run needs more memory than there is; lower max_unknowns or ask for a larger error",
    _ => null,
};
