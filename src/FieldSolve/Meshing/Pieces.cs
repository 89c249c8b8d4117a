namespace FieldSolve.Meshing;

/// <summary>The pieces the domain's edges are split into, as parallel arrays.</summary>
internal sealed class Pieces
{
    public int[] A = new int[64];
    public int[] B = new int[64];
    public int[] Edge = new int[64];
    public double[] FromT = new double[64];
    public double[] ToT = new double[64];

    /// <summary>The half-edge from A to B; its triangle lies to the left.</summary>
    public int[] Half = new int[64];

    public int Count { get; private set; }

    public int Add(int a, int b, int edge, double fromT, double toT)
    {
        if (Count == A.Length)
        {
            Array.Resize(ref A, 2 * Count);
            Array.Resize(ref B, 2 * Count);
            Array.Resize(ref Edge, 2 * Count);
            Array.Resize(ref FromT, 2 * Count);
            Array.Resize(ref ToT, 2 * Count);
            Array.Resize(ref Half, 2 * Count);
        }

        (A[Count], B[Count], Edge[Count], FromT[Count], ToT[Count], Half[Count]) = (a, b, edge, fromT, toT, -1);
        return Count++;
    }
}
