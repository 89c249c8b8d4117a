using System.Globalization;

namespace FieldSolve.Laws;

/// <summary>Checks of a law's parameters. Written so that NaN fails too.</summary>
internal static class Expect
{
    public static void Ohmic(double a, double b, double hall)
    {
        Positive(a, "S", nameof(a));
        Positive(b, "S", nameof(b));
        Finite(hall, "S", nameof(hall));
    }

    public static void Positive(double value, string unit, string name)
    {
        if (!(value > 0) || double.IsInfinity(value))
        {
            throw Bad(value, unit, name, "finite and greater than zero");
        }
    }

    public static void PositiveOrInfinite(double value, string unit, string name)
    {
        if (!(value > 0))
        {
            throw Bad(value, unit, name, "greater than zero, or infinite for no limit");
        }
    }

    public static void AtLeastOne(double value, string name)
    {
        if (!(value >= 1) || double.IsInfinity(value))
        {
            throw Bad(value, string.Empty, name, "finite and one or greater");
        }
    }

    public static void Finite(double value, string unit, string name)
    {
        if (!double.IsFinite(value))
        {
            throw Bad(value, unit, name, "finite");
        }
    }

    private static ArgumentOutOfRangeException Bad(double value, string unit, string name, string rule) =>
        new(name, string.Create(CultureInfo.InvariantCulture, $"'{name}' is {value:G6}{(unit.Length == 0 ? string.Empty : " " + unit)}; it must be {rule}."));
}
