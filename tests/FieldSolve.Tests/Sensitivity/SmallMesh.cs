using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;
using FieldSolve.Solving;

namespace FieldSolve.Tests.SensitivityTests;

/// <summary>A device on its first mesh, or on that mesh once split, with the state of its first wiring.</summary>
internal sealed class SmallMesh
{
    private readonly bool split;
    private readonly double[] reference;

    public SmallMesh(string text, bool split)
    {
        this.split = split;
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", "");
        Device = reading.Device ?? throw new InvalidOperationException(string.Join('\n', reading.Faults));
        Plan = new ReadingPlan(Device.Wirings[0]);
        Mesh = Mesher.Generate(Device.Domain, MeshSizes.First(Device));
        Level = FieldLevel.Build(Device, On(Mesh), new LabLaw(Device.Law, Device.Axis), default);
        Mover = new MeshMover(Mesh);
        Motion = new NodeMotion(Mover, Level.Space);
        reference = new double[Level.Equations.Length];
        Assert.True(new DrivePath(Level, Plan.Wiring.Source, Plan.Wiring.Drain).Solve(Current, reference, null, default).Converged);
        State = StateSensitivity.Of(Level, reference, Plan.Vectors(Level), default);
    }

    public StateSensitivity State { get; }

    public SheetDevice Device { get; }

    public ReadingPlan Plan { get; }

    public TriangleMesh Mesh { get; }

    public FieldLevel Level { get; }

    public MeshMover Mover { get; }

    public NodeMotion Motion { get; }

    public double Current => Device.Drive!.Currents[^1];

    /// <summary>What a changed device reads on the same mesh, moved.</summary>
    public double[] Read(SheetDevice changed)
    {
        TriangleMesh moved = Mover.Move(changed.Domain) ?? throw new InvalidOperationException("The mesh cannot follow.");
        FieldLevel level = Level.Moved(changed, On(moved), new LabLaw(changed.Law, changed.Axis));
        double[] u = [.. reference];
        Assert.True(new NewtonSolver(level, State.Factor).Solve(u, Plan.Wiring.Source, Plan.Wiring.Drain, Current, default).Converged);
        return Plan.Read(level, u);
    }

    /// <summary>Central difference of all readings on the moved mesh.</summary>
    public double[] Difference(Func<double, SheetDevice> change, double step)
    {
        double[] plus = Read(change(step)), minus = Read(change(-step));
        return [.. plus.Zip(minus, (p, m) => (p - m) / (2 * step))];
    }

    private TriangleMesh On(TriangleMesh mesh) => split ? UniformSplit.Split(mesh) : mesh;
}
