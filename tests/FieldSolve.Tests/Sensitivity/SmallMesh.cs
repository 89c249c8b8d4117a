using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;
using FieldSolve.Solving;

namespace FieldSolve.Tests.SensitivityTests;

/// <summary>A device on its first mesh, once split, with what its wirings read.</summary>
internal sealed class SmallMesh
{
    public SmallMesh(string text)
    {
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", "");
        Device = reading.Device ?? throw new InvalidOperationException(string.Join('\n', reading.Faults));
        Plan = new ReadingPlan(Device.Wirings[0]);
        Mesh = Mesher.Generate(Device.Domain, MeshSizes.First(Device));
        Level = FieldLevel.Build(Device, UniformSplit.Split(Mesh), new LabLaw(Device.Law, Device.Axis), default);
        Mover = new MeshMover(Mesh);
        Motion = new NodeMotion(Mover, Level.Space);
    }

    public SheetDevice Device { get; }

    public ReadingPlan Plan { get; }

    public TriangleMesh Mesh { get; }

    public FieldLevel Level { get; }

    public MeshMover Mover { get; }

    public NodeMotion Motion { get; }

    public double Current => Device.Drive!.Currents[^1];

    public double[] Solve(FieldLevel level)
    {
        double[] u = new double[level.Equations.Length];
        Assert.True(new DrivePath(level, Plan.Wiring.Source, Plan.Wiring.Drain).Solve(Current, u, null, default).Converged);
        return u;
    }

    public StateSensitivity State() => StateSensitivity.Of(Level, Solve(Level), Plan.Vectors(Level), default);

    /// <summary>What a changed device reads on the same mesh, moved.</summary>
    public double[] Read(SheetDevice changed)
    {
        TriangleMesh moved = Mover.Move(changed.Domain) ?? throw new InvalidOperationException("The mesh cannot follow.");
        FieldLevel level = Level.Moved(changed, UniformSplit.Split(moved), new LabLaw(changed.Law, changed.Axis));
        return Plan.Read(level, Solve(level));
    }

    /// <summary>Central difference of all readings on the moved mesh.</summary>
    public double[] Difference(Func<double, SheetDevice> change, double step)
    {
        double[] plus = Read(change(step)), minus = Read(change(-step));
        return [.. plus.Zip(minus, (p, m) => (p - m) / (2 * step))];
    }
}
