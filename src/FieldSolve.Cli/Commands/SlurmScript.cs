using System.Globalization;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Commands;

/// <summary>Job scripts for the Slurm workload manager: an array of shards, and a job that joins them.</summary>
internal static class SlurmScript
{
    /// <summary>Writes both scripts.</summary>
    /// <returns>What to do with them.</returns>
    public static string Write(string folder, string device, int shards, ToleranceOptions options)
    {
        string array = Path.Combine(folder, "shards.sbatch"), join = Path.Combine(folder, "gather.sbatch");
        string extra = (options.Explain is { } e ? FormattableString.Invariant($" --explain {Quoted($"{e.ToString("R", CultureInfo.InvariantCulture)} V")}") : "")
            + (options.Wanted is { } w ? FormattableString.Invariant($" --wanted {Quoted($"{w.ToString("R", CultureInfo.InvariantCulture)} V")}") : "");
        WholeFile.WriteText(array, string.Create(CultureInfo.InvariantCulture, $"""
            #!/bin/bash
            # One task per shard of a tolerance run; a task solves one sample in {shards}. Submit from the folder in which --write-slurm was given:
            #   sbatch {Quoted(array)}
            # A task that was killed goes on where it was when it is submitted again: sbatch --array=K {Quoted(array)}
            # FIELDSOLVE names the program where it is not called fieldsolve.
            #SBATCH --job-name=tolerance
            #SBATCH --array=1-{shards}
            #SBATCH --cpus-per-task=2
            #SBATCH --output={Quoted(folder)}/shard-%a.log
            set -eu
            export DOTNET_PROCESSOR_COUNT="${"{"}SLURM_CPUS_PER_TASK:-1{"}"}"
            exec ${"{"}FIELDSOLVE:-fieldsolve{"}"} tolerance {Quoted(device)} --shard "$SLURM_ARRAY_TASK_ID/{shards}" --samples {options.Samples} --seed {options.Seed} --out {Quoted(folder)}/"shard-$SLURM_ARRAY_TASK_ID"

            """).ReplaceLineEndings("\n"));
        WholeFile.WriteText(join, string.Create(CultureInfo.InvariantCulture, $"""
            #!/bin/bash
            # Joins the shards once all have ended well.
            #SBATCH --job-name=gather
            #SBATCH --output={Quoted(folder)}/gather.log
            set -eu
            exec ${"{"}FIELDSOLVE:-fieldsolve{"}"} gather {Quoted(folder)}/shard-*/ --device {Quoted(device)} --out {Quoted(folder)}/result{extra}

            """).ReplaceLineEndings("\n"));
        return $"""
            wrote {array} and {join}; submit both from here:
              job=$(sbatch --parsable {Quoted(array)})
              sbatch --dependency=afterok:$job {Quoted(join)}

            """.ReplaceLineEndings("\n");
    }

    // For the shell.
    private static string Quoted(string text) => text.Length > 0 && text.All(c => char.IsAsciiLetterOrDigit(c) || c is '/' or '.' or '-' or '_')
        ? text
        : $"'{text.Replace("'", "'\\''", StringComparison.Ordinal)}'";
}
