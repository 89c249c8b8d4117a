using System.CommandLine;

namespace FieldSolve.Cli.Commands;

/// <summary>All commands; a new one is one file and one line here.</summary>
internal static class CommandList
{
    public static IEnumerable<Command> All() =>
    [
        CheckCommand.Create(),
        MeshCommand.Create(),
        DriveCommand.Create(),
        BandsCommand.Create(),
        LockinCommand.Create(),
        TurnCommand.Create(),
        ToleranceCommand.Create(),
        GatherCommand.Create(),
        FitCommand.Create(),
        OverlayCommand.Create(),
        OpenCommand.Create(),
    ];
}
