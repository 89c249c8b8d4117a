namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// Four equally spaced probes in a line about the centre of a sheet, current through the outer two: the factor C = Rs I / V. F. M. Smits, Bell Syst. Tech. J. 37 (1958) 711.
/// Lengths in units of the spacing.
/// </summary>
internal static class FourPointProbe
{
    /// <summary>Circle of a diameter.</summary>
    public static double Circle(double diameter)
    {
        double d2 = diameter * diameter;
        return Math.PI / (Math.Log(2) + Math.Log((d2 + 3) / (d2 - 3)));
    }

    /// <summary>Rectangle, <paramref name="along"/> the line of probes and <paramref name="across"/> it.</summary>
    public static double Rectangle(double along, double across)
    {
        double k = 2 * Math.PI / across, sum = 0;
        for (int m = 1; m < 4000; m++)
        {
            double term = Math.Exp(-k * (along - 2) * m) * (1 - Math.Exp(-3 * k * m)) * (1 - Math.Exp(-k * m)) / (m * (1 + Math.Exp(-k * along * m)));
            sum += term;
            if (term < 1e-17)
            {
                break;
            }
        }

        return Math.PI / ((k / 2) + Math.Log(1 - Math.Exp(-2 * k)) - Math.Log(1 - Math.Exp(-k)) + sum);
    }
}
