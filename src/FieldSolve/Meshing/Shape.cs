namespace FieldSolve.Meshing;

/// <summary>What refinement needs to know about one triangle.</summary>
internal readonly struct Shape
{
    public Shape(Triangulation mesh, int t)
    {
        int k = 3 * t;
        int a = mesh.Corner[k], b = mesh.Corner[k + 1], c = mesh.Corner[k + 2];
        double abx = mesh.X[b] - mesh.X[a], aby = mesh.Y[b] - mesh.Y[a];
        double acx = mesh.X[c] - mesh.X[a], acy = mesh.Y[c] - mesh.Y[a];
        double bcx = mesh.X[c] - mesh.X[b], bcy = mesh.Y[c] - mesh.Y[b];
        double ab = (abx * abx) + (aby * aby), ac = (acx * acx) + (acy * acy), bc = (bcx * bcx) + (bcy * bcy);
        double area = (abx * acy) - (aby * acx);
        RadiusSquared = ab * ac * bc / (4 * area * area);
        CentreX = mesh.X[a] + ((abx + acx) / 3);
        CentreY = mesh.Y[a] + ((aby + acy) / 3);
        double dx, dy;
        if (ab <= ac && ab <= bc)
        {
            (P, Q, dx, dy, ShortestSquared) = (a, b, abx, aby, ab);
        }
        else if (bc <= ac)
        {
            (P, Q, dx, dy, ShortestSquared) = (b, c, bcx, bcy, bc);
        }
        else
        {
            (P, Q, dx, dy, ShortestSquared) = (c, a, -acx, -acy, ac);
        }

        MiddleX = mesh.X[P] + (0.5 * dx);
        MiddleY = mesh.Y[P] + (0.5 * dy);
        double length = Math.Sqrt(ShortestSquared);
        NormalX = -dy / length;
        NormalY = dx / length;
    }

    /// <summary>Ends of the shortest edge, the triangle to its left.</summary>
    public int P { get; }

    public int Q { get; }

    public double ShortestSquared { get; }

    public double RadiusSquared { get; }

    public double CentreX { get; }

    public double CentreY { get; }

    /// <summary>Middle of the shortest edge.</summary>
    public double MiddleX { get; }

    public double MiddleY { get; }

    /// <summary>Unit vector from there into the triangle.</summary>
    public double NormalX { get; }

    public double NormalY { get; }
}
