namespace FieldSolve.Cli.Commands;

/// <summary>Exit statuses of every command.</summary>
internal static class ExitCode
{
    public const int Done = 0;
    public const int WrongInput = 2;
    public const int ToleranceNotReached = 3;
    public const int Cancelled = 130;
}
