namespace FieldSolve.Readings;

/// <summary>How far a row can be trusted.</summary>
public enum RowStatus
{
    /// <summary>Every reading meets its wanted error.</summary>
    Ok,

    /// <summary>The zone where the law had to be guarded moves a reading by more than its wanted error.</summary>
    OutsideLaw,

    /// <summary>Newton's iteration did not reach its tolerance; the row's values are empty.</summary>
    NotConverged,

    /// <summary>A reading's numerical error is above what was wanted.</summary>
    ErrorAboveWanted,
}

/// <summary>One read voltage of one row.</summary>
/// <param name="Pair">"along", "across", "source" or the extra pair's name.</param>
/// <param name="Value">V at the row's current.</param>
/// <param name="Error">Estimated numerical error of <paramref name="Value"/>, V.</param>
/// <param name="Odd">Half the difference of the readings at +I and -I, V; null when only one sign was solved.</param>
/// <param name="Even">Half the sum, V; null when only one sign was solved.</param>
/// <param name="EvenError">Estimated numerical error of the even part, V; null when only one sign was solved.</param>
/// <param name="GuardShare">What the guarded zone of the law does to the reading, V (0 when the law was not left).</param>
/// <param name="EvenGuardShare">The same for the even part, V.</param>
public sealed record Reading(
    string Pair, double Value, double Error, double? Odd, double? Even, double? EvenError, double GuardShare, double EvenGuardShare);

/// <summary>Where the drive pushed the sheet beyond its law.</summary>
/// <param name="X">Lab x of the largest field, metres.</param>
/// <param name="Y">Lab y of the largest field, metres.</param>
/// <param name="Field">Largest |E| there, V/m.</param>
/// <param name="From">Field above which the law is guarded, V/m.</param>
/// <param name="Radius">Radius of a disc with the guarded zone's area, metres.</param>
public sealed record LawExit(double X, double Y, double Field, double From, double Radius);

/// <summary>One line of curves.csv: one wiring at one current.</summary>
/// <param name="Wiring">Name of the wiring.</param>
/// <param name="Current">A.</param>
/// <param name="Readings">Along, across, the extra pairs and source, those that exist, in this order; empty when not converged.</param>
/// <param name="NewtonSteps">Steps of the solve at this current (both signs together).</param>
/// <param name="Status">How far the row can be trusted.</param>
/// <param name="Exit">Where the law was left; null when it was not.</param>
/// <param name="PeakSheetCurrent">Largest |K| over the sheet outside the cores of contact ends, A/m.</param>
/// <param name="PeakPower">Largest E.K likewise, W/m².</param>
public sealed record CurveRow(
    string Wiring, double Current, IReadOnlyList<Reading> Readings, int NewtonSteps, RowStatus Status, LawExit? Exit,
    double PeakSheetCurrent, double PeakPower)
{
    /// <summary>The reading of a pair, or null.</summary>
    public Reading? Of(string pair) => Readings.FirstOrDefault(r => r.Pair == pair);
}
