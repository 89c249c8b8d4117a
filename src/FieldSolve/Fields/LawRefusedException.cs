using System.Globalization;
using FieldSolve.Laws;

namespace FieldSolve.Fields;

/// <summary>A table law was asked beyond its grid at a place of the sheet.</summary>
public sealed class LawRefusedException : Exception
{
    /// <summary>Adds the place to the law's own words.</summary>
    internal LawRefusedException(double x, double y, FieldOutsideTableException inner)
        : base(string.Create(CultureInfo.InvariantCulture, $"At ({x:G4}, {y:G4}) m: {inner.Message}"), inner)
    {
        X = x;
        Y = y;
    }

    /// <summary>Lab x of the point, metres.</summary>
    public double X { get; }

    /// <summary>Lab y of the point, metres.</summary>
    public double Y { get; }
}
