using System.Globalization;
using FieldSolve.Laws;

namespace FieldSolve.Turning;

/// <summary>The second-order elements of any law at small field, read off its current: half the sum of K(E) and K(-E).</summary>
internal static class LawSecondOrder
{
    // The even part is looked at where it is this share of the odd one: far above rounding, far below where a law fades.
    private const double Share = 1e-7;

    public static SecondOrder Of(ISheetLaw law)
    {
        if (law.IsLinear)
        {
            return default;
        }

        for (double field = 1e-3; field < 1e9; field *= 10)
        {
            double[] ea = [field, -field, 0, 0, field, -field], eb = [0, 0, field, -field, field, -field], ka = new double[6], kb = new double[6];
            try
            {
                law.EvaluatePure(ea, eb, ka, kb);
            }
            catch (FieldOutsideTableException)
            {
                return default;
            }

            double[] evenA = Even(ka), evenB = Even(kb);
            double largest = evenA.Concat(evenB).Max(Math.Abs), odd = ka.Concat(kb).Max(Math.Abs);
            if (largest >= Share * odd)
            {
                double Element(double even) => Math.Abs(even) < 1e-8 * largest ? 0 : Rounded(even / (field * field));
                return new(
                    Element(evenA[0]), Element(evenA[1]), Element((evenA[2] - evenA[0] - evenA[1]) / 2),
                    Element(evenB[0]), Element(evenB[1]), Element((evenB[2] - evenB[0] - evenB[1]) / 2));
            }
        }

        return default;
    }

    // No more digits than the differences hold.
    private static double Rounded(double value) =>
        double.Parse(value.ToString("G7", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);

    private static double[] Even(double[] k) => [(k[0] + k[1]) / 2, (k[2] + k[3]) / 2, (k[4] + k[5]) / 2];
}
