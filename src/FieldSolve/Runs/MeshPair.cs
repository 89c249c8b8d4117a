using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>A mesh and its uniform split. Answers come from the split; the difference between the two is the evidence for their error.</summary>
internal sealed class MeshPair
{
    private readonly ConcurrentDictionary<(ReadingPlan, double), (double[] Coarse, double[] Fine)> known = new();

    private MeshPair(FieldLevel coarse, FieldLevel fine)
    {
        Coarse = coarse;
        Fine = fine;
        Between = new Prolongation(coarse.Space, fine.Space);
        Exponent = Exponents(coarse.Space.Mesh.Domain);
        Vertex = DomainVertices(coarse.Space.Mesh);
        Remaining = Remainders();
    }

    public FieldLevel Coarse { get; }

    public FieldLevel Fine { get; }

    public Prolongation Between { get; }

    /// <summary>Per coarse triangle: the vertex of the domain it touches (contact end, corner, tip), the most singular one; -1 for most triangles.</summary>
    public int[] Vertex { get; }

    /// <summary>Per vertex of the domain: the error of a reading from the triangles around it goes like their size to this power.</summary>
    public double[] Exponent { get; }

    /// <summary>Per coarse triangle: error that remains on the fine mesh, as a share of the difference between the two meshes.</summary>
    public double[] Remaining { get; }

    /// <summary>Keeps the solutions of a wiring at a current, V.</summary>
    public void Keep(ReadingPlan plan, double current, double[] coarse, double[] fine) => known[(plan, current)] = (coarse, fine);

    /// <summary>The solutions kept of a wiring at a current, V; null where there are none.</summary>
    public (double[] Coarse, double[] Fine)? Known(ReadingPlan plan, double current) =>
        known.TryGetValue((plan, current), out (double[] Coarse, double[] Fine) found) ? found : null;

    public static MeshPair Build(SheetDevice device, TriangleMesh mesh, LabLaw law, CancellationToken cancel)
    {
        FieldLevel? coarse = null, fine = null;
        Parallel.Invoke(
            new ParallelOptions { CancellationToken = cancel },
            () => fine = FieldLevel.Build(device, UniformSplit.Split(mesh), law, cancel),
            () => coarse = FieldLevel.Build(device, mesh, law, cancel));
        return new(coarse!, fine!);
    }

    private int[] DomainVertices(TriangleMesh mesh)
    {
        int[] vertex = new int[mesh.TriangleCount];
        for (int t = 0; t < vertex.Length; t++)
        {
            vertex[t] = -1;
            for (int k = 0; k < 3; k++)
            {
                int v = mesh.Corners[(3 * t) + k];
                if (v < mesh.Domain.Vertices.Count && (vertex[t] < 0 || Exponent[v] < Exponent[vertex[t]]))
                {
                    vertex[t] = v;
                }
            }
        }

        return vertex;
    }

    // Potential and adjoint both go like r^x at a singular point, so the reading's error goes like h^(2x). At other vertices of the domain (tips, where the
    // adjoint is logarithmic, and blunt corners) second order is on the safe side.
    private static double[] Exponents(Domain domain)
    {
        double[] exponent = new double[domain.Vertices.Count];
        Array.Fill(exponent, 2);
        foreach (SingularPoint p in SingularPoints.Of(domain))
        {
            exponent[p.Vertex] = Math.Clamp(2 * p.Exponent, 0.5, 2);
        }

        return exponent;
    }

    // With an error like h^p, halving h leaves 1/(2^p - 1) of the difference. Smooth parts have p = 4 (quadratic elements, functional), 1/15; a tenth
    // allows for a rate that is not reached yet.
    private double[] Remainders()
    {
        const double Smooth = 0.1;
        double[] share = new double[Vertex.Length];
        for (int t = 0; t < share.Length; t++)
        {
            share[t] = Vertex[t] < 0 ? Smooth : 1 / (Math.Pow(2, Exponent[Vertex[t]]) - 1);
        }

        return share;
    }
}
