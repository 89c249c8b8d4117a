using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Turns the working triangulation into the finished mesh: triangles outside dropped, the rest ordered along a space-filling
/// curve so that neighbours lie close in memory, vertices in order of first use after those of the domain.
/// </summary>
internal static class MeshAssembly
{
    public static TriangleMesh Assemble(Triangulation work, Domain domain)
    {
        int[] order = Order(work, domain);
        int[] place = new int[work.TriangleCount];
        Array.Fill(place, -1);
        for (int i = 0; i < order.Length; i++)
        {
            place[order[i]] = i;
        }

        int[] vertexPlace = new int[work.VertexCount];
        Array.Fill(vertexPlace, -1);
        int[] vertices = new int[work.VertexCount];
        int count = 0;
        for (int v = 0; v < domain.Vertices.Count; v++)
        {
            vertexPlace[v] = count;
            vertices[count++] = v;
        }

        int[] corners = new int[3 * order.Length], neighbours = new int[3 * order.Length];
        for (int i = 0; i < order.Length; i++)
        {
            for (int j = 0; j < 3; j++)
            {
                int h = (3 * order[i]) + j;
                int v = work.Corner[h];
                if (vertexPlace[v] < 0)
                {
                    vertexPlace[v] = count;
                    vertices[count++] = v;
                }

                corners[(3 * i) + j] = vertexPlace[v];
                neighbours[(3 * i) + j] = work.Twin[h] < 0 ? -1 : place[work.Twin[h] / 3];
            }
        }

        double[] x = new double[count], y = new double[count];
        for (int v = 0; v < count; v++)
        {
            (x[v], y[v]) = (work.X[vertices[v]], work.Y[vertices[v]]);
        }

        MeshEdge[] edges = Edges(work, place, vertexPlace);
        return new TriangleMesh
        {
            Domain = domain,
            X = x,
            Y = y,
            Corners = corners,
            Neighbours = neighbours,
            Region = Regions.Find(domain, x, y, corners, neighbours, edges),
            Edges = edges,
        };
    }

    private static int[] Order(Triangulation work, Domain domain)
    {
        double x0 = domain.Vertices.Min(p => p.X), y0 = domain.Vertices.Min(p => p.Y);
        int count = 0;
        for (int t = 0; t < work.TriangleCount; t++)
        {
            count += work.Inside[t] ? 1 : 0;
        }

        int[] order = new int[count];
        ulong[] keys = new ulong[count];
        int i = 0;
        for (int t = 0; t < work.TriangleCount; t++)
        {
            if (work.Inside[t])
            {
                int a = work.Corner[3 * t], b = work.Corner[(3 * t) + 1], c = work.Corner[(3 * t) + 2];
                double cx = work.X[a] + (((work.X[b] - work.X[a]) + (work.X[c] - work.X[a])) / 3);
                double cy = work.Y[a] + (((work.Y[b] - work.Y[a]) + (work.Y[c] - work.Y[a])) / 3);
                keys[i] = SpatialOrder.Key(cx, cy, x0, y0, domain.Size);
                order[i++] = t;
            }
        }

        Array.Sort(keys, order);
        return order;
    }

    private static MeshEdge[] Edges(Triangulation work, int[] place, int[] vertexPlace)
    {
        Pieces p = work.Pieces;
        MeshEdge[] edges = new MeshEdge[p.Count];
        for (int s = 0; s < p.Count; s++)
        {
            int h = p.Half[s];
            edges[s] = new MeshEdge(
                vertexPlace[p.A[s]], vertexPlace[p.B[s]], p.Edge[s], p.FromT[s], p.ToT[s], place[h / 3], place[work.Twin[h] / 3]);
        }

        Array.Sort(edges, (a, b) => (a.DomainEdge, a.FromT).CompareTo((b.DomainEdge, b.FromT)));
        return edges;
    }
}
