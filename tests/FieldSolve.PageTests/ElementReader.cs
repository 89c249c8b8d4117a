using FieldSolve.Fields;

namespace FieldSolve.PageTests;

/// <summary>
/// The potential and field of a frame at a point, evaluated here from the nodes of the run: six-node isoparametric triangles (O. C. Zienkiewicz and
/// R. L. Taylor, The Finite Element Method, shape functions of the quadratic triangle; from memory). It shares no code with the page.
/// </summary>
internal static class ElementReader
{
    public static (double Phi, double Ex, double Ey)? At(PotentialFrame frame, double x, double y)
    {
        for (int t = 0; t < frame.Nodes.Length / 6; t++)
        {
            ReadOnlySpan<int> n = frame.Nodes.AsSpan(6 * t, 6);
            double x0 = frame.X[n[0]], y0 = frame.Y[n[0]], size = Math.Abs(frame.X[n[1]] - x0) + Math.Abs(frame.Y[n[1]] - y0) + Math.Abs(frame.X[n[2]] - x0) + Math.Abs(frame.Y[n[2]] - y0);
            if (Math.Abs(x - x0) + Math.Abs(y - y0) > 2 * size)
            {
                continue;
            }

            double b = 1.0 / 3, c = 1.0 / 3;
            for (int step = 0; step < 20; step++)
            {
                (double px, double py, _) = Sum(frame, n, Values(b, c));
                (double xb, double yb, _) = Sum(frame, n, ByB(b, c));
                (double xc, double yc, _) = Sum(frame, n, ByC(b, c));
                double det = (xb * yc) - (xc * yb);
                b += (((x - px) * yc) - ((y - py) * xc)) / det;
                c += (((y - py) * xb) - ((x - px) * yb)) / det;
            }

            if (b >= -1e-9 && c >= -1e-9 && b + c <= 1 + 1e-9)
            {
                (_, _, double phi) = Sum(frame, n, Values(b, c));
                (double xb, double yb, double fb) = Sum(frame, n, ByB(b, c));
                (double xc, double yc, double fc) = Sum(frame, n, ByC(b, c));
                double det = (xb * yc) - (xc * yb);
                return (phi, -((fb * yc) - (fc * yb)) / det, -((fc * xb) - (fb * xc)) / det);
            }
        }

        return null;
    }

    private static (double X, double Y, double Phi) Sum(PotentialFrame f, ReadOnlySpan<int> n, double[] w)
    {
        (double x, double y, double phi) = (0, 0, 0);
        for (int i = 0; i < 6; i++)
        {
            (x, y, phi) = (x + (w[i] * f.X[n[i]]), y + (w[i] * f.Y[n[i]]), phi + (w[i] * f.Potential[n[i]]));
        }

        return (x, y, phi);
    }

    private static double[] Values(double b, double c)
    {
        double a = 1 - b - c;
        return [a * ((2 * a) - 1), b * ((2 * b) - 1), c * ((2 * c) - 1), 4 * a * b, 4 * b * c, 4 * c * a];
    }

    private static double[] ByB(double b, double c)
    {
        double a = 1 - b - c;
        return [1 - (4 * a), (4 * b) - 1, 0, 4 * (a - b), 4 * c, -4 * c];
    }

    private static double[] ByC(double b, double c)
    {
        double a = 1 - b - c;
        return [1 - (4 * a), 0, (4 * c) - 1, -4 * b, 4 * b, 4 * (a - c)];
    }
}
