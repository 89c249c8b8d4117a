using System.Globalization;
using FieldSolve.Device;

namespace FieldSolve.Bands;

/// <summary>
/// Reads a table of conductance against direction: CSV with a header that names direction_deg and conductance_S or
/// resistance_ohm, perhaps with conductance_err_S or resistance_err_ohm. Other columns, lines that begin with # and empty lines are passed over.
/// </summary>
internal static class ProfileReader
{
    private const int MostRows = 100_000, MostFaults = 20;
    private const double MostDegrees = 360_000, MostNumber = 1e30;
    private const string Direction = "direction_deg", Conductance = "conductance_S", Resistance = "resistance_ohm";

    /// <param name="text">Of the table.</param>
    /// <param name="path">As messages show it.</param>
    /// <param name="fault">Takes file, line, column and message of each fault.</param>
    /// <returns>Null, with faults, if the table is no good.</returns>
    public static MeasuredProfile? Read(string text, string path, Action<string, int, int, string> fault)
    {
        int faults = 0, number = 0, last = 1;
        void Fault(int line, int column, string message)
        {
            faults++;
            fault(path, line, column, message);
        }

        int[]? columns = null; // direction, value, error
        bool resistance = false;
        List<double> directions = [], values = [], errors = [];
        foreach (string raw in text.TrimStart('\uFEFF').ReplaceLineEndings("\n").Split('\n'))
        {
            number++;
            if (raw.AsSpan().Trim() is not { IsEmpty: false } content || content[0] == '#')
            {
                continue;
            }

            last = number;
            string[] cells = raw.Split(',');
            if (columns is null)
            {
                string[] names = [.. cells.Select(c => c.Trim().Trim('"'))];
                resistance = names.Contains(Resistance);
                if (!names.Contains(Direction) || resistance == names.Contains(Conductance))
                {
                    Fault(number, 1, $"the header must name {Direction}, and either {Conductance} (field along the direction) or {Resistance} (current along it)");
                    return null;
                }

                string error = resistance ? "resistance_err_ohm" : "conductance_err_S";
                columns = [Array.IndexOf(names, Direction), Array.IndexOf(names, resistance ? Resistance : Conductance), Array.IndexOf(names, error)];
                continue;
            }

            double? direction = Cell(cells, columns[0], number, Direction, -MostDegrees, MostDegrees, "between -360000 and 360000", Fault);
            double? value = Cell(cells, columns[1], number, resistance ? Resistance : Conductance, double.Epsilon, MostNumber, "greater than zero", Fault);
            double? spread = columns[2] < 0 ? 0 : Cell(cells, columns[2], number, "the error", 0, MostNumber, "zero or greater", Fault);
            if (direction is { } d && value is { } v && spread is { } e)
            {
                directions.Add(d * Math.PI / 180);
                values.Add(v);
                errors.Add(e);
            }

            if (faults >= MostFaults || directions.Count > MostRows)
            {
                Fault(number, 1, "further rows of this table were not read");
                return null;
            }
        }

        if (columns is null)
        {
            Fault(1, 1, $"the table is empty; its header names {Direction} and {Conductance} or {Resistance}");
        }
        else if (faults == 0 && TensorFit.Forbids(directions) is { } forbids)
        {
            Fault(last, 1, forbids);
        }

        // Errors of zero give no weight; a table that has some is taken as one without errors.
        bool weighted = columns is [_, _, >= 0] && errors.TrueForAll(e => e > 0);
        return faults > 0 ? null : new MeasuredProfile(directions, values, weighted ? errors : null, resistance);
    }

    private static double? Cell(
        string[] cells, int column, int line, string name, double least, double most, string range, Action<int, int, string> fault)
    {
        int at = 1 + cells.Take(Math.Min(column, cells.Length)).Sum(c => c.Length + 1);
        if (column >= cells.Length)
        {
            fault(line, Math.Max(1, at - 1), $"this row has no {name}; write one value per column of the header");
            return null;
        }

        string text = cells[column].Trim();
        if (!double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) || !double.IsFinite(value))
        {
            fault(line, at, $"'{Values.Short(text)}' is not a finite number ({name})");
            return null;
        }

        if (value < least || value > most)
        {
            fault(line, at, $"{name} is {Values.Short(text)}; it must be {range}");
            return null;
        }

        return value;
    }
}
