using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Fields;

/// <summary>
/// Quadratic triangles on a mesh, isoparametric where an edge lies on an arc, with the unknowns of a device: one per free node, one
/// per contact. The nodes on an ideal contact share its unknown; a resistive contact keeps its metal's unknown behind the resistance. One
/// contact's metal is the zero of the potential while solving. In a steady state readings are differences, so the choice does not matter; a sheet
/// over a gate wants the drain.
/// </summary>
public sealed class FieldSpace
{
    private FieldSpace(TriangleMesh mesh, IReadOnlyList<Contact> contacts, int ground)
    {
        Mesh = mesh;
        Contacts = contacts;
        (int[] edge, int edges) = EdgeNumbers.Of(mesh);
        int nv = mesh.VertexCount;
        NodeX = [.. mesh.X, .. new double[edges]];
        NodeY = [.. mesh.Y, .. new double[edges]];
        Nodes = new int[6 * mesh.TriangleCount];
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = mesh.Corners[(3 * t) + k], b = mesh.Corners[(3 * t) + ((k + 1) % 3)], m = nv + edge[(3 * t) + k];
                Nodes[(6 * t) + k] = a;
                Nodes[(6 * t) + 3 + k] = m;
                NodeX[m] = 0.5 * (mesh.X[a] + mesh.X[b]);
                NodeY[m] = 0.5 * (mesh.Y[a] + mesh.Y[b]);
            }
        }

        Curved = BendRim(edge);
        (Unknown, ContactUnknown, Size) = Number(edge, ground);
        (Pattern, TrianglePlaces) = UnknownPattern.Build(this);
    }

    // The same unknowns and pattern on a mesh whose vertices have moved.
    private FieldSpace(FieldSpace from, TriangleMesh mesh, IReadOnlyList<Contact> contacts)
    {
        Mesh = mesh;
        Contacts = contacts;
        (Nodes, Unknown, ContactUnknown, Size) = (from.Nodes, from.Unknown, from.ContactUnknown, from.Size);
        (Pattern, TrianglePlaces, Curved) = (from.Pattern, from.TrianglePlaces, from.Curved);
        int nv = mesh.VertexCount;
        NodeX = new double[from.NodeCount];
        NodeY = new double[from.NodeCount];
        mesh.X.CopyTo(NodeX, 0);
        mesh.Y.CopyTo(NodeY, 0);
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = Nodes[(6 * t) + k], b = Nodes[(6 * t) + ((k + 1) % 3)], m = Nodes[(6 * t) + 3 + k];
                NodeX[m] = 0.5 * (NodeX[a] + NodeX[b]);
                NodeY[m] = 0.5 * (NodeY[a] + NodeY[b]);
            }
        }

        foreach (MeshEdge e in mesh.Edges)
        {
            if (Bends(from.Mesh, e))
            {
                Point2 p = mesh.Domain.Edges[e.DomainEdge].Curve.At(0.5 * (e.FromT + e.ToT));
                int m = MiddleOf(e);
                (NodeX[m], NodeY[m]) = (p.X, p.Y);
            }
        }
    }

    /// <summary>The triangles.</summary>
    public TriangleMesh Mesh { get; }

    /// <summary>The device's contacts.</summary>
    public IReadOnlyList<Contact> Contacts { get; }

    /// <summary>x of each node, metres: the vertices, then the middles of edges.</summary>
    public double[] NodeX { get; }

    /// <summary>y of each node, metres.</summary>
    public double[] NodeY { get; }

    /// <summary>Six nodes per triangle: corners 0, 1, 2, then the middles of edges 01, 12, 20.</summary>
    public int[] Nodes { get; }

    /// <summary>Number of nodes.</summary>
    public int NodeCount => NodeX.Length;

    /// <summary>True for a triangle with an edge on an arc.</summary>
    public bool[] Curved { get; }

    /// <summary>
    /// Unknown of each node. <see cref="Size"/> stands for the zero of the potential: vectors of unknowns have one entry more than there
    /// are unknowns, and that entry is 0.
    /// </summary>
    public int[] Unknown { get; }

    /// <summary>Unknown of each contact's metal; <see cref="Size"/> for the one at zero potential.</summary>
    public int[] ContactUnknown { get; }

    /// <summary>Number of unknowns.</summary>
    public int Size { get; }

    /// <summary>Places of the matrix's non-zeros.</summary>
    public SymmetricPattern Pattern { get; }

    /// <summary>
    /// 36 per triangle: where the entries of its block (rows and columns as in <see cref="Nodes"/>, row by row) stand among the values of the
    /// pattern; those in the row or column of the zero of the potential have the place behind the last value.
    /// </summary>
    internal int[] TrianglePlaces { get; }

    /// <summary>Builds the space.</summary>
    /// <param name="device">Gives the contacts.</param>
    /// <param name="mesh">Triangles of the device's domain.</param>
    /// <param name="ground">Contact whose metal is the zero of the potential.</param>
    /// <exception cref="FieldSpaceException">A part of the sheet is joined to the rest by no metal.</exception>
    public static FieldSpace Build(SheetDevice device, TriangleMesh mesh, int ground = 0)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(mesh);
        var space = new FieldSpace(mesh, device.Contacts, ground);
        SheetParts.RequireOne(space);
        return space;
    }

    /// <summary>The same nodes and unknowns on a mesh with the same triangles whose vertices have moved.</summary>
    /// <param name="mesh">Same corners and edges as <see cref="Mesh"/>; other places.</param>
    /// <param name="device">Its contacts, ideal and resistive ones as before.</param>
    internal FieldSpace Moved(TriangleMesh mesh, SheetDevice device) => new(this, mesh, device.Contacts);

    /// <summary>Unknown that a terminal reads.</summary>
    public int UnknownOf(Terminal terminal) => terminal.IsTip
        ? Unknown[Mesh.Domain.Tips[terminal.Index]]
        : ContactUnknown[terminal.Index];

    /// <summary>True when the contact's nodes share its unknown.</summary>
    public bool IsIdeal(int contact) => Contacts[contact].LineResistance == 0 && Contacts[contact].Resistivity == 0;

    /// <summary>The node in the middle of a rim piece or inner edge.</summary>
    internal int MiddleOf(MeshEdge e) =>
        Nodes[(6 * e.LeftTriangle) + 3 + EdgeNumbers.LocalEdge(Mesh, e.LeftTriangle, e.A, e.B)];

    /// <summary>The straight or the curved triangles, ascending.</summary>
    internal int[] TrianglesThatAre(bool curved)
    {
        int[] found = new int[Curved.Length];
        int count = 0;
        for (int t = 0; t < found.Length; t++)
        {
            found[count] = t;
            count += Curved[t] == curved ? 1 : 0;
        }

        return found[..count];
    }

    /// <summary>Coordinates of the unknowns for the ordering; a contact's metal stands at its middle.</summary>
    internal (double[] X, double[] Y) Places()
    {
        double[] x = new double[Size], y = new double[Size];
        for (int n = 0; n < NodeCount; n++)
        {
            if (Unknown[n] < Size)
            {
                x[Unknown[n]] = NodeX[n];
                y[Unknown[n]] = NodeY[n];
            }
        }

        for (int c = 0; c < Contacts.Count; c++)
        {
            if (ContactUnknown[c] < Size)
            {
                x[ContactUnknown[c]] = Contacts[c].Middle.X;
                y[ContactUnknown[c]] = Contacts[c].Middle.Y;
            }
        }

        return (x, y);
    }

    /// <summary>
    /// Whether the middle of an edge lies on an arc. Where the rise of the arc over its chord is below 1e-9 of the chord, the triangle stays
    /// straight: its error would be far below rounding in the results, and straight triangles are cheaper.
    /// </summary>
    internal static bool Bends(TriangleMesh mesh, MeshEdge e)
    {
        const double NegligibleRise = 1e-9;
        Curve curve = mesh.Domain.Edges[e.DomainEdge].Curve;
        return curve.IsArc && Math.Abs(curve.Sweep) * (e.ToT - e.FromT) / 8 >= NegligibleRise;
    }

    // Moves the middles of edges on arcs onto the arc.
    private bool[] BendRim(int[] edge)
    {
        bool[] curved = new bool[Mesh.TriangleCount];
        foreach (MeshEdge e in Mesh.Edges)
        {
            if (!Bends(Mesh, e))
            {
                continue;
            }

            Curve curve = Mesh.Domain.Edges[e.DomainEdge].Curve;

            int k = EdgeNumbers.LocalEdge(Mesh, e.LeftTriangle, e.A, e.B);
            int m = Mesh.VertexCount + edge[(3 * e.LeftTriangle) + k];
            Point2 p = curve.At(0.5 * (e.FromT + e.ToT));
            (NodeX[m], NodeY[m]) = (p.X, p.Y);
            curved[e.LeftTriangle] = true;
            if (e.RightTriangle >= 0)
            {
                curved[e.RightTriangle] = true;
            }
        }

        return curved;
    }

    private (int[] Unknown, int[] ContactUnknown, int Size) Number(int[] edge, int ground)
    {
        const int Free = -1;
        int[] owner = new int[NodeCount];
        Array.Fill(owner, Free);
        foreach (MeshEdge e in Mesh.Edges)
        {
            int contact = Mesh.Domain.Edges[e.DomainEdge].Contact;
            if (contact >= 0 && IsIdeal(contact))
            {
                int k = EdgeNumbers.LocalEdge(Mesh, e.LeftTriangle, e.A, e.B);
                owner[e.A] = owner[e.B] = owner[Mesh.VertexCount + edge[(3 * e.LeftTriangle) + k]] = contact;
            }
        }

        int[] unknown = new int[NodeCount];
        int size = 0;
        for (int n = 0; n < NodeCount; n++)
        {
            unknown[n] = owner[n] == Free ? size++ : Free;
        }

        int[] ofContact = new int[Contacts.Count];
        for (int c = 0; c < Contacts.Count; c++)
        {
            ofContact[c] = c == ground ? 0 : size++;
        }

        ofContact[ground] = size;
        for (int n = 0; n < NodeCount; n++)
        {
            if (unknown[n] == Free)
            {
                unknown[n] = ofContact[owner[n]];
            }
        }

        return (unknown, ofContact, size);
    }
}
