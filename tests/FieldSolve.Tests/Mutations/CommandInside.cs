using System.CommandLine;
using FieldSolve.Cli.Commands;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.MutationTests;

/// <summary>Runs a command in this process, for tests that run thousands.</summary>
internal static class CommandInside
{
    private static readonly AsyncLocal<StringWriter?> Out = new(), Error = new();

    static CommandInside()
    {
        // Other tests run beside these; what they write goes where it went.
        Console.SetOut(new Branch(Out, Console.Out));
        Console.SetError(new Branch(Error, Console.Error));
    }

    /// <summary>Runs one command as the program does. An exception that the program would not answer comes out.</summary>
    public static async Task<CommandResult> RunAsync(string[] arguments, CancellationToken cancel = default)
    {
        var root = new RootCommand();
        foreach (System.CommandLine.Command command in CommandList.All())
        {
            root.Add(command);
        }

        StringWriter output = new(), error = new();
        (Out.Value, Error.Value) = (output, error);
        int exit;
        try
        {
            exit = await root.Parse(arguments).InvokeAsync(new InvocationConfiguration { EnableDefaultExceptionHandler = false, ProcessTerminationTimeout = null }, cancel);
        }
        catch (OperationCanceledException)
        {
            exit = ExitCode.Cancelled;
        }
        finally
        {
            (Out.Value, Error.Value) = (null, null);
        }

        return new(exit, output.ToString(), error.ToString());
    }

    private sealed class Branch(AsyncLocal<StringWriter?> own, TextWriter other) : TextWriter
    {
        public override System.Text.Encoding Encoding => other.Encoding;

        public override void Write(char value) => (own.Value ?? other).Write(value);

        public override void Write(string? value) => (own.Value ?? other).Write(value);

        public override void Write(char[] buffer, int index, int count) => (own.Value ?? other).Write(buffer, index, count);
    }
}
