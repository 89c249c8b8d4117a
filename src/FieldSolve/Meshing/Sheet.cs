using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Decides which triangles belong to the sheet: those reached from the left of a rim piece without crossing the rim.</summary>
internal static class Sheet
{
    public static void Mark(Triangulation mesh, Domain domain)
    {
        Pieces pieces = mesh.Pieces;
        Stack<int> work = new();
        for (int s = 0; s < pieces.Count; s++)
        {
            int t = pieces.Half[s] / 3;
            if (domain.Edges[pieces.Edge[s]].IsRim && !mesh.Inside[t])
            {
                mesh.Inside[t] = true;
                work.Push(t);
            }
        }

        while (work.Count > 0)
        {
            int t = work.Pop();
            for (int h = 3 * t; h < (3 * t) + 3; h++)
            {
                int g = mesh.Twin[h];
                if (g < 0)
                {
                    throw new MeshException("The sheet lies on the outer side of its rim. Run the outer rim counter-clockwise and holes clockwise.");
                }

                bool rim = mesh.Piece[h] >= 0 && domain.Edges[pieces.Edge[mesh.Piece[h]]].IsRim;
                if (!rim && !mesh.Inside[g / 3])
                {
                    mesh.Inside[g / 3] = true;
                    work.Push(g / 3);
                }
            }
        }

        for (int s = 0; s < pieces.Count; s++)
        {
            int h = pieces.Half[s];
            bool rim = domain.Edges[pieces.Edge[s]].IsRim;
            bool left = mesh.Inside[h / 3], right = mesh.Inside[mesh.Twin[h] / 3];
            if (rim ? !left || right : !left || !right)
            {
                string what = rim ? "The rim does not part sheet from outside" : "The pad edge does not have sheet on both sides";
                throw new MeshException(
                    $"{what} between {mesh.Place(pieces.A[s])} and {mesh.Place(pieces.B[s])}. Rim runs with the sheet to its left; pad edges run inside the sheet.");
            }
        }

        for (int v = 0; v < domain.Vertices.Count; v++)
        {
            if (!TouchesSheet(mesh, v))
            {
                throw new MeshException($"The point {mesh.Place(v)} lies outside the sheet. Move it onto the sheet or leave it out.");
            }
        }
    }

    private static bool TouchesSheet(Triangulation mesh, int v)
    {
        int start = mesh.At[v], t = start;
        do
        {
            if (mesh.Inside[t])
            {
                return true;
            }

            int k = 3 * t;
            int i = mesh.Corner[k] == v ? k : mesh.Corner[k + 1] == v ? k + 1 : k + 2;
            t = mesh.Twin[Triangulation.Next(i)] / 3;
        }
        while (t != start);

        return false;
    }
}
