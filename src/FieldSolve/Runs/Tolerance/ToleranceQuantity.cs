namespace FieldSolve.Runs;

/// <summary>Which part of a reading under current reversal.</summary>
public enum ReadingPart
{
    /// <summary>Half the difference of the readings at +I and -I.</summary>
    Odd,

    /// <summary>Half their sum.</summary>
    Even,
}

/// <summary>Something a budget and samples are about: the odd or even part of a pair, or the ratio of across to along.</summary>
/// <param name="Wiring">Name of the wiring.</param>
/// <param name="Pair">Name of the pair; "ratio" for across over along.</param>
/// <param name="Part">Odd or even.</param>
/// <param name="WiringIndex">Index of the wiring.</param>
/// <param name="PairIndex">Index among the readings; -1 for the ratio.</param>
public sealed record ToleranceQuantity(string Wiring, string Pair, ReadingPart Part, int WiringIndex, int PairIndex)
{
    /// <summary>Name of the ratio of across to along.</summary>
    public const string Ratio = "ratio";

    /// <summary>True for the ratio, which has no unit; everything else is in volts.</summary>
    public bool IsRatio => PairIndex < 0;

    /// <summary>"across even" and the like.</summary>
    public string Label => IsRatio ? "across / along" : $"{Pair} {(Part == ReadingPart.Odd ? "odd" : "even")}";

    /// <summary>"across_odd" and the like, for column names.</summary>
    public string Column => IsRatio ? "ratio" : $"{Pair}_{(Part == ReadingPart.Odd ? "odd" : "even")}_V";

    /// <summary>The quantities of all wirings, those of one wiring together.</summary>
    internal static IReadOnlyList<ToleranceQuantity> Of(IReadOnlyList<ReadingPlan> plans, bool linear)
    {
        var list = new List<ToleranceQuantity>();
        for (int w = 0; w < plans.Count; w++)
        {
            ReadingPlan plan = plans[w];
            for (int k = 0; k < plan.Count; k++)
            {
                list.Add(new(plan.Wiring.Name, plan.Pairs[k].Name, ReadingPart.Odd, w, k));
                if (plan.HasEven[k] && !linear)
                {
                    list.Add(new(plan.Wiring.Name, plan.Pairs[k].Name, ReadingPart.Even, w, k));
                }
            }

            if (plan.Wiring.Along is not null && plan.Wiring.Across is not null)
            {
                list.Add(new(plan.Wiring.Name, Ratio, ReadingPart.Odd, w, -1));
            }
        }

        return list;
    }

    /// <summary>The value from the readings of its wiring at +I and -I.</summary>
    internal double Value(ReadingPlan plan, double[] plus, double[] minus)
    {
        if (IsRatio)
        {
            (int along, int across) = AlongAcross(plan);
            return Part(plus, minus, across, ReadingPart.Odd) / Part(plus, minus, along, ReadingPart.Odd);
        }

        return Part(plus, minus, PairIndex, this.Part);

        static double Part(double[] p, double[] m, int k, ReadingPart part) => part == ReadingPart.Odd ? (p[k] - m[k]) / 2 : (p[k] + m[k]) / 2;
    }

    /// <summary>The derivative from the derivatives of the readings at +I and -I.</summary>
    internal double Slope(ReadingPlan plan, double[] plus, double[] minus, Func<int, double> slopePlus, Func<int, double> slopeMinus)
    {
        if (!IsRatio)
        {
            return Part == ReadingPart.Odd ? (slopePlus(PairIndex) - slopeMinus(PairIndex)) / 2 : (slopePlus(PairIndex) + slopeMinus(PairIndex)) / 2;
        }

        (int along, int across) = AlongAcross(plan);
        double under = (plus[along] - minus[along]) / 2, over = (plus[across] - minus[across]) / 2;
        double dUnder = (slopePlus(along) - slopeMinus(along)) / 2, dOver = (slopePlus(across) - slopeMinus(across)) / 2;
        return (dOver - (over / under * dUnder)) / under;
    }

    private static (int Along, int Across) AlongAcross(ReadingPlan plan)
    {
        int Index(Device.Pair? pair) => Enumerable.Range(0, plan.Count).First(k => plan.Pairs[k] == pair);
        return (Index(plan.Wiring.Along), Index(plan.Wiring.Across));
    }
}
