using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Solving;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.InvarianceTests;

/// <summary>
/// Observed order of convergence on a ring, whose potential is smooth up to its curved rims: h³ for the potential in the mean square and h⁴ for the two-terminal resistance are what
/// isoparametric quadratic triangles give. P. G. Ciarlet, The Finite Element Method for Elliptic Problems (1978), sections 3.2 and 4.4.
/// </summary>
public class OrderTests(ITestOutputHelper output)
{
    private const double Inner = 1e-6, Outer = 3e-6, Sigma = 1e-3;

    [Fact]
    public void Potential_gains_three_and_resistance_four_powers_of_the_size()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Ring(Inner, Outer, DeviceText.Ohmic(Sigma, Sigma))
            .Whole("out", "rim", "outer").Whole("in", "rim", "inner").Wiring("w", "in", "out").Drive(1e-6));
        TriangleMesh mesh = Mesher.Generate(device.Domain, new GradedSize(Inner, []));
        var law = new LabLaw(device.Law, device.Axis);
        double exact = ConcentricRing.Resistance(Inner, Outer, Sigma);
        var errors = new List<(double Potential, double Resistance)>();
        for (int level = 0; level < 4; level++, mesh = UniformSplit.Split(mesh))
        {
            FieldLevel field = FieldLevel.Build(device, mesh, law, default);
            double[] u = field.UnitSolution(1, 0);
            double resistance = u[field.Space.ContactUnknown[1]] - u[field.Space.ContactUnknown[0]];
            errors.Add((PotentialError(field.Space, u, exact), Math.Abs(resistance - exact)));
            output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{mesh.TriangleCount} triangles: potential {errors[^1].Potential / exact:E3}, resistance {errors[^1].Resistance / exact:E3}"));
        }

        Assert.InRange(Math.Log2(errors[^2].Potential / errors[^1].Potential), 2.8, 3.3);
        Assert.InRange(Math.Log2(errors[^2].Resistance / errors[^1].Resistance), 3.7, 4.4);
    }

    // Root of the mean square of u - R ln(r2/r) / ln(r2/r1); the outer rim's metal is the zero.
    private static double PotentialError(FieldSpace space, double[] u, double resistance)
    {
        double sum = 0, area = 0;
        Span<double> shape = stackalloc double[6], slope = stackalloc double[12];
        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            for (int q = 0; q < TriangleRule.Count; q++)
            {
                double a = TriangleRule.Lambda[3 * q], b = TriangleRule.Lambda[(3 * q) + 1], c = TriangleRule.Lambda[(3 * q) + 2];
                QuadraticShape.Values(a, b, c, shape);
                QuadraticShape.Slopes(a, b, c, slope);
                double weight = 0.5 * TriangleRule.Weight[q] * QuadraticShape.Jacobian(space, t, slope).Determinant;
                double x = 0, y = 0, value = 0;
                for (int i = 0; i < 6; i++)
                {
                    int node = space.Nodes[(6 * t) + i];
                    x += shape[i] * space.NodeX[node];
                    y += shape[i] * space.NodeY[node];
                    value += shape[i] * u[space.Unknown[node]];
                }

                double exact = resistance * Math.Log(Outer / Math.Sqrt((x * x) + (y * y))) / Math.Log(Outer / Inner);
                sum += weight * (value - exact) * (value - exact);
                area += weight;
            }
        }

        return Math.Sqrt(sum / area);
    }
}
