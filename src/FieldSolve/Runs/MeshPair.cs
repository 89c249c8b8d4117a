using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>A mesh and its uniform split. Answers come from the split; the difference between the two is the evidence for their error.</summary>
internal sealed class MeshPair
{
    private MeshPair(FieldLevel coarse, FieldLevel fine)
    {
        Coarse = coarse;
        Fine = fine;
        Between = new Prolongation(coarse.Space, fine.Space);
        IsCore = Cores(coarse.Space.Mesh);
    }

    public FieldLevel Coarse { get; }

    public FieldLevel Fine { get; }

    public Prolongation Between { get; }

    /// <summary>Per coarse triangle: it touches a vertex of the domain (contact end, corner, tip), where the field may be singular.</summary>
    public bool[] IsCore { get; }

    public static MeshPair Build(SheetDevice device, TriangleMesh mesh, LabLaw law, CancellationToken cancel)
    {
        FieldLevel? coarse = null, fine = null;
        Parallel.Invoke(
            new ParallelOptions { CancellationToken = cancel },
            () => fine = FieldLevel.Build(device, UniformSplit.Split(mesh), law, cancel),
            () => coarse = FieldLevel.Build(device, mesh, law, cancel));
        return new(coarse!, fine!);
    }

    private static bool[] Cores(TriangleMesh mesh)
    {
        int special = mesh.Domain.Vertices.Count;
        bool[] core = new bool[mesh.TriangleCount];
        for (int t = 0; t < core.Length; t++)
        {
            core[t] = mesh.Corners[3 * t] < special || mesh.Corners[(3 * t) + 1] < special || mesh.Corners[(3 * t) + 2] < special;
        }

        return core;
    }
}
