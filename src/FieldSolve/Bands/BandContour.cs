using FieldSolve.Geometry;

namespace FieldSolve.Bands;

/// <summary>One piece of a Fermi line for pictures; of a three-dimensional cone its cut at k_c = 0.</summary>
/// <param name="Cone">Index of the cone in the model.</param>
/// <param name="Name">The cone's name.</param>
/// <param name="IsClosed">The first point stands again at the end.</param>
/// <param name="Points">Wave vectors from the cone's node in the lab frame, 1/m.</param>
public sealed record BandContour(int Cone, string Name, bool IsClosed, IReadOnlyList<Point2> Points)
{
    private const int Pieces = 240;

    /// <summary>The Fermi lines of a model at its chemical potential.</summary>
    /// <param name="model">Valid bands.</param>
    public static IReadOnlyList<BandContour> Of(BandModel model)
    {
        ArgumentNullException.ThrowIfNull(model);
        List<BandContour> lines = [];
        for (int k = 0; k < model.Cones.Count; k++)
        {
            Cone cone = model.Cones[k];
            ConeSlice slice = model.Thickness is null ? ConeSlice.Of(cone) : ConeSlice.At(cone, 0);
            (double sin, double cos) = Math.SinCos(model.Axis + cone.Angle);
            foreach (FermiLine line in FermiLine.At(slice, model.ChemicalPotential - cone.Offset, model.CutOff ?? double.PositiveInfinity))
            {
                Point2[] points = [.. Enumerable.Range(0, Pieces + 1).Select(i =>
                {
                    (double a, double b) = line.WaveVector(line.Start + ((line.End - line.Start) * i / Pieces));
                    return new Point2((cos * a) - (sin * b), (sin * a) + (cos * b));
                })];
                lines.Add(new(k, cone.Name, line.IsClosed, points));
            }
        }

        return lines;
    }
}
