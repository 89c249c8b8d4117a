namespace FieldSolve.Pictures;

/// <summary>Round numbers for level lines and ticks.</summary>
internal static class Levels
{
    private const double NarrowDecades = 0.6;

    /// <summary>A step of 1, 2 or 5 times a power of ten that cuts a range into about so many parts.</summary>
    public static double Step(double range, int parts)
    {
        if (!(range > 0) || !double.IsFinite(range))
        {
            return 1;
        }

        double raw = range / parts, power = Math.Pow(10, Math.Floor(Math.Log10(raw))), lead = raw / power;
        return power * (lead < 1.5 ? 1 : lead < 3.5 ? 2 : lead < 7.5 ? 5 : 10);
    }

    /// <summary>Multiples of a step strictly inside a range.</summary>
    public static IReadOnlyList<double> Between(double low, double high, double step)
    {
        List<double> levels = [];
        for (double k = Math.Floor(low / step) + 1; k * step < high && levels.Count < 200; k++)
        {
            levels.Add(k * step);
        }

        return levels;
    }

    /// <summary>Labelled ticks at the multiples of a step, both ends of the range included.</summary>
    public static ScottPlot.TickGenerators.NumericManual EvenTicks(double low, double high, double step)
    {
        ScottPlot.TickGenerators.NumericManual ticks = new();
        foreach (double at in Between(low - (1e-9 * step), high + (1e-9 * step), step))
        {
            // Adding zero turns a negative zero into a plain one.
            ticks.AddMajor(at, SiScale.Number((Math.Round(at / step) * step) + 0.0, 6));
        }

        return ticks;
    }

    /// <summary>Ticks on a logarithmic axis whose coordinates are log10 of the values: decades, and 2 and 5 between when there are few.</summary>
    /// <returns>Positions and labels; the label of a minor tick is empty.</returns>
    public static ScottPlot.TickGenerators.NumericManual LogTicks(double low, double high)
    {
        ScottPlot.TickGenerators.NumericManual ticks = new();
        double decades = high - low;
        if (decades < NarrowDecades)
        {
            // Too few of the usual ticks fall into so short a range: even steps of the value itself.
            double from = Math.Pow(10, low), to = Math.Pow(10, high), step = Step(to - from, 5);
            foreach (double value in Between(from, to, step))
            {
                ticks.AddMajor(Math.Log10(value), SiScale.Number((Math.Round(value / step) * step) + 0.0, 6));
            }

            return ticks;
        }

        int every = Math.Max(1, (int)Math.Ceiling(decades / 8));
        for (int e = (int)Math.Floor(low); e <= Math.Ceiling(high); e++)
        {
            for (int lead = 1; lead <= 9; lead++)
            {
                double at = e + Math.Log10(lead);
                if (at < low - 1e-9 || at > high + 1e-9)
                {
                    continue;
                }

                bool labelled = lead == 1 ? e % every == 0 : decades < 1.2 ? lead is 2 or 3 or 5 or 7 : decades < 2.5 && (lead is 2 or 5);
                if (labelled)
                {
                    ticks.AddMajor(at, Label(lead, e));
                }
                else
                {
                    ticks.AddMinor(at);
                }
            }
        }

        return ticks;
    }

    private static string Label(int lead, int exponent)
    {
        if (exponent is >= -3 and <= 5)
        {
            return SiScale.Number(lead * Math.Pow(10, exponent), 6);
        }

        return $"{(lead == 1 ? "" : $"{lead}·")}10{SiScale.Raised(exponent)}";
    }
}
