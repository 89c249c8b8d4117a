using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>How fast the error of an even part falls at singular points.</summary>
internal static class EvenRates
{
    // Ratio of the fields between which the growth of the even part of K is looked at.
    private const double Stride = 4;

    /// <summary>
    /// Per vertex of the domain, p of an error like h^p. With E like r^(x-1), an even part of K that grows like |E|^q and an adjoint like r^y, an even part is an
    /// integral over r^(q(x-1) + y-1): p = qx + y - q + 1. A law without a limit has q = 2; where the field is beyond a limit or the guard, q is less.
    /// </summary>
    /// <param name="meshes">Meshes with the exponents of the readings themselves.</param>
    /// <param name="u">Potentials on the coarse mesh at the largest current.</param>
    public static double[] Exponents(MeshPair meshes, ReadOnlySpan<double> u)
    {
        FieldSpace space = meshes.Coarse.Space;
        LabLaw law = meshes.Coarse.Equations.Law;
        Tensor2 zero = law.AtZeroField;
        double hall = Math.Atan2(Math.Abs(zero.Ab - zero.Ba) / 2, Math.Sqrt(zero.Aa * zero.Bb));
        double[] exponent = [.. meshes.Exponent];
        double[] singular = new double[exponent.Length];
        foreach (SingularPoint p in SingularPoints.Of(space.Mesh.Domain, zero))
        {
            singular[p.Vertex] = p.Exponent;
        }

        for (int t = 0; t < meshes.Vertex.Length; t++)
        {
            int v = meshes.Vertex[t];
            if (v < 0 || singular[v] == 0)
            {
                continue;
            }

            // A Hall part makes one of the two exponents smaller.
            double x = singular[v] * (1 - (2 * hall / Math.PI)), y = singular[v], q = Growth(law, PointGradient.Of(space, t, 0, u));
            exponent[v] = Math.Min(exponent[v], Math.Clamp((q * x) + y - q + 1, 0.25, meshes.Exponent[v]));
        }

        return exponent;
    }

    // q of |even part of K| ~ |E|^q beyond a field; 2 where the law cannot tell.
    private static double Growth(LabLaw law, (double X, double Y) field)
    {
        double[] ex = [field.X, -field.X, Stride * field.X, -Stride * field.X], ey = [field.Y, -field.Y, Stride * field.Y, -Stride * field.Y];
        double[] kx = new double[4], ky = new double[4];
        try
        {
            law.Evaluate(ex, ey, kx, ky);
        }
        catch (FieldOutsideTableException)
        {
            return 2;
        }

        double weak = Length(kx[0] + kx[1], ky[0] + ky[1]), strong = Length(kx[2] + kx[3], ky[2] + ky[3]);
        return weak > 0 && strong > 0 ? Math.Clamp(Math.Log(strong / weak) / Math.Log(Stride), 0, 2) : 2;
    }

    private static double Length(double x, double y) => Math.Sqrt((x * x) + (y * y));
}
