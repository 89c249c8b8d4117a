using System.Collections.Concurrent;
using System.Runtime.ExceptionServices;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>A mesh and its uniform split. Answers come from the split; the difference between the two is the evidence for their error.</summary>
internal sealed class MeshPair
{
    // On the linear problems of benchmarks/accuracy.md the correction misses 1 to 15 % of itself. The triangles do not follow a strongly anisotropic sheet's
    // stretch, so the rates are reached later there: at a ratio of 1000 it missed 70 %.
    private const double Doubt = 0.15;
    private const double DoubtPerDecade = 0.25;

    // At a resistive pad's rim the current enters within the transfer length. Triangles larger than that by the second of these factors see an ideal pad, with a field without bound all along its rim; what
    // the split leaves of an error there was seen to be up to two times what it took away (bars with pads of 1e-12 to 1e-6 ohm cm²).
    private const double ResolvedLayer = 2, UnresolvedLayer = 30;
    private const double LeftAtLayer = 2.5;

    private readonly Falloff[] kinds;  // per vertex of the domain
    private readonly int[] near;       // per coarse triangle: the singular vertex that it is too near for its size, without touching it; -1 for most
    private readonly double[] layer;   // per coarse triangle: resistivity of the pad whose rim it touches, ohm m²; 0 for most
    private readonly ConcurrentDictionary<(ReadingPlan, double), (double[] Coarse, double[] Fine)> known = new();

    private MeshPair(FieldLevel coarse, FieldLevel fine)
    {
        Coarse = coarse;
        Fine = fine;
        Between = new Prolongation(coarse.Space, fine.Space);
        (kinds, Exponent) = Rates(coarse);
        Vertex = DomainVertices(coarse.Space.Mesh);
        near = NearSingular.Vertices(coarse.Space.Mesh, coarse.Equations.Law.AtZeroField, Exponent);
        layer = LayersOf(coarse.Space);
        Shares = SharesOf(kinds, Exponent, true);
    }

    private MeshPair(MeshPair other, LabLaw law, CancellationToken cancel)
    {
        (Between, layer) = (other.Between, other.layer);
        Coarse = other.Coarse.WithLaw(law, cancel);
        Fine = other.Fine.WithLaw(law, cancel);
        (kinds, Exponent) = Rates(Coarse);
        Vertex = DomainVertices(Coarse.Space.Mesh);
        near = NearSingular.Vertices(Coarse.Space.Mesh, law.AtZeroField, Exponent);
        Shares = SharesOf(kinds, Exponent, true);
    }

    public FieldLevel Coarse { get; }

    public FieldLevel Fine { get; }

    public Prolongation Between { get; }

    /// <summary>Per coarse triangle: the vertex of the domain it touches (contact end, corner, tip), the most singular one; -1 for most triangles.</summary>
    public int[] Vertex { get; }

    /// <summary>Per vertex of the domain: the error of a reading from the triangles around it goes like their size to this power.</summary>
    public double[] Exponent { get; }

    /// <summary>Rates of convergence of the readings.</summary>
    public ErrorShares Shares { get; }

    /// <summary>Rates of convergence of even parts.</summary>
    /// <param name="exponent">As <see cref="Exponent"/>, for an even part.</param>
    public ErrorShares EvenShares(double[] exponent) => SharesOf(kinds, exponent, false);

    /// <summary>Keeps the solutions of a wiring at a current, V.</summary>
    public void Keep(ReadingPlan plan, double current, double[] coarse, double[] fine) => known[(plan, current)] = (coarse, fine);

    /// <summary>The solutions kept of a wiring at a current, V; null where there are none.</summary>
    public (double[] Coarse, double[] Fine)? Known(ReadingPlan plan, double current) =>
        known.TryGetValue((plan, current), out (double[] Coarse, double[] Fine) found) ? found : null;

    public static MeshPair Build(SheetDevice device, TriangleMesh mesh, LabLaw law, CancellationToken cancel, int ground = 0)
    {
        FieldLevel? coarse = null, fine = null;
        try
        {
            Parallel.Invoke(
                new ParallelOptions { CancellationToken = cancel },
                () => fine = FieldLevel.Build(device, UniformSplit.Split(mesh), law, cancel, ground),
                () => coarse = FieldLevel.Build(device, mesh, law, cancel, ground));
        }
        catch (AggregateException e)
        {
            // Both meshes fail alike; whoever asked waits for the fault itself.
            ExceptionDispatchInfo.Throw(e.Flatten().InnerExceptions[0]);
        }

        return new(coarse!, fine!);
    }

    /// <summary>The same triangles, unknowns and ordering after vertices have moved, the law has changed, or both; factors at zero field are made when first asked for.</summary>
    /// <param name="device">Its contacts, ideal and resistive ones as before; see <see cref="Serves"/>.</param>
    /// <param name="mesh">The coarse mesh, moved, or as it is.</param>
    /// <param name="law">In the lab frame.</param>
    public MeshPair Moved(SheetDevice device, TriangleMesh mesh, LabLaw law) => new(Coarse.Moved(device, mesh, law), Fine.Moved(device, UniformSplit.Split(mesh), law));

    /// <summary>Whether the unknowns are those of a device whose domain differs in places alone: the same contacts are ideal, and the same have a line of metal or a layer.</summary>
    public bool Serves(SheetDevice device) => Coarse.Space.Contacts.Count == device.Contacts.Count && Coarse.Space.Contacts.Zip(device.Contacts)
        .All(p => (p.First.LineResistance == 0, p.First.Resistivity == 0) == (p.Second.LineResistance == 0, p.Second.Resistivity == 0));

    /// <summary>Lets go of the factors of large meshes before others are made; they come back, the same, when they are asked for.</summary>
    public void ForgetIfLarge()
    {
        if (SharedCores.IsLarge(Fine.Space.Size))
        {
            Fine.Forget();
            Coarse.Forget();
            GC.Collect(GC.MaxGeneration, GCCollectionMode.Aggressive, blocking: true, compacting: true);
        }
    }

    /// <summary>The same two meshes under another law.</summary>
    public MeshPair WithLaw(LabLaw law, CancellationToken cancel) => new(this, law, cancel);

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

    // Per vertex of the domain, how an error from the triangles around it falls, and like which power of their size. A tip does no harm to the order, though the adjoint is
    // logarithmic there: the potential is smooth (measured on the square with a large Hall angle and the anisotropic disc of benchmarks/accuracy.md); the size of the
    // contributions goes like h^3. Potential and adjoint go like r^x and r^y at a singular point, so the reading's error goes like h^(x+y). A Hall part takes from one what it
    // gives to the other (R. W. Rendell, S. M. Girvin, Phys. Rev. B 23, 6610 (1981)), so x + y = 2 pi/(2 w) whatever the Hall angle. At other vertices second order is on the
    // safe side.
    private static (Falloff[] Kinds, double[] Exponents) Rates(FieldLevel level)
    {
        Domain domain = level.Space.Mesh.Domain;
        var kind = new Falloff[domain.Vertices.Count];
        double[] exponent = new double[domain.Vertices.Count];
        Array.Fill(kind, Falloff.Blunt);
        Array.Fill(exponent, 2);
        foreach (int v in SingularPoints.SmoothVertices(domain))
        {
            (kind[v], exponent[v]) = (Falloff.Smooth, 3);
        }

        foreach (SingularPoint p in SingularPoints.Of(domain, level.Equations.Law.AtZeroField))
        {
            (kind[p.Vertex], exponent[p.Vertex]) = (Falloff.Singular, Math.Clamp(2 * p.Exponent, 0.5, 2));
        }

        return (kind, exponent);
    }

    // Triangles with a vertex on the rim of a resistive pad, on either side.
    private static double[] LayersOf(FieldSpace space)
    {
        TriangleMesh mesh = space.Mesh;
        double[] atVertex = new double[mesh.VertexCount], touched = new double[mesh.TriangleCount];
        for (int k = 0; k < mesh.Corners.Length; k++)
        {
            int inside = mesh.Region[k / 3], across = mesh.Neighbours[k];
            if (inside >= 0 && across >= 0 && mesh.Region[across] != inside)
            {
                (int a, int b) = SavedMesh.Side(mesh.Corners, k);
                atVertex[a] = atVertex[b] = space.Contacts[inside].Resistivity;
            }
        }

        for (int k = 0; k < mesh.Corners.Length; k++)
        {
            touched[k / 3] = Math.Max(touched[k / 3], atVertex[mesh.Corners[k]]);
        }

        return touched;
    }

    // What is left on the split at a pad's rim, as a share of what it changed: from the smooth rate, where triangles are about as large as the transfer length, to that of an ideal pad.
    private static double AtLayer(double transferLengths)
    {
        double unresolved = Math.Log(transferLengths / ResolvedLayer) / Math.Log(UnresolvedLayer / ResolvedLayer);
        return ErrorShares.Smooth + ((LeftAtLayer - ErrorShares.Smooth) * Math.Clamp(unresolved, 0, 1));
    }

    private ErrorShares SharesOf(Falloff[] kinds, double[] exponent, bool singularIsKnown)
    {
        Tensor2 tensor = Coarse.Equations.Law.AtZeroField;
        double[] share = new double[Vertex.Length];
        var kind = new Falloff[share.Length];
        for (int t = 0; t < share.Length; t++)
        {
            kind[t] = Vertex[t] < 0 ? Falloff.Smooth : kinds[Vertex[t]];
            share[t] = kind[t] == Falloff.Smooth ? ErrorShares.Smooth : 1 / (Math.Pow(2, exponent[Vertex[t]]) - 1);
            if (kind[t] == Falloff.Smooth && near[t] >= 0)
            {
                (kind[t], share[t]) = (Falloff.Blunt, 1 / (Math.Pow(2, exponent[near[t]]) - 1));
            }

            double sizes = layer[t] > 0 ? MeshSizes.EquilateralEdge(Coarse.Space.Mesh, t) / Math.Sqrt(layer[t] * tensor.SmallestSymmetricEigenvalue) : 0;
            if (sizes > 1 && kind[t] != Falloff.Singular)
            {
                (kind[t], share[t]) = (Falloff.Blunt, Math.Max(share[t], AtLayer(sizes)));
            }
        }

        double mean = (tensor.Aa + tensor.Bb) / 2, ratio = ((2 * mean) - tensor.SmallestSymmetricEigenvalue) / tensor.SmallestSymmetricEigenvalue;
        return new(share, kind, singularIsKnown, Doubt + (DoubtPerDecade * Math.Log10(ratio)));
    }
}
