namespace FieldSolve.Fields;

/// <summary>Checks that current can reach every part of the sheet.</summary>
internal static class SheetParts
{
    /// <summary>Throws unless all triangles and contacts hang together, by shared nodes or by metal.</summary>
    /// <exception cref="FieldSpaceException">They do not.</exception>
    public static void RequireOne(FieldSpace space)
    {
        int nodes = space.Mesh.VertexCount;   // the middles of edges hang on them
        int[] parent = new int[nodes + space.Contacts.Count];
        for (int i = 0; i < parent.Length; i++)
        {
            parent[i] = i;
        }

        int Root(int i)
        {
            while (parent[i] != i)
            {
                i = parent[i] = parent[parent[i]];
            }

            return i;
        }

        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            for (int k = 1; k < 3; k++)
            {
                parent[Root(space.Nodes[(6 * t) + k])] = Root(space.Nodes[6 * t]);
            }

            if (space.Mesh.Region[t] >= 0)
            {
                parent[Root(space.Nodes[6 * t])] = Root(nodes + space.Mesh.Region[t]);
            }
        }

        foreach (Meshing.MeshEdge e in space.Mesh.Edges)
        {
            int contact = space.Mesh.Domain.Edges[e.DomainEdge].Contact;
            if (contact >= 0)
            {
                parent[Root(e.A)] = Root(nodes + contact);
            }
        }

        int main = Root(nodes);
        for (int i = 0; i < parent.Length; i++)
        {
            if (Root(i) != main)
            {
                throw new FieldSpaceException(i < nodes
                    ? string.Create(
                        System.Globalization.CultureInfo.InvariantCulture,
                        $"The sheet falls into parts that no metal joins: the part around ({space.NodeX[i]:G4}, {space.NodeY[i]:G4}) m has no way to contact '{space.Contacts[0].Name}'; its potential is not determined.")
                    : $"Contact '{space.Contacts[i - nodes].Name}' touches a part of the sheet that no metal joins to contact '{space.Contacts[0].Name}'.");
            }
        }
    }
}
