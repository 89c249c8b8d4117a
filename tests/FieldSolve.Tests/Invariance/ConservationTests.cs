using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Solving;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.InvarianceTests;

/// <summary>The current through every contact of the discrete solution, and reciprocity on one mesh.</summary>
public class ConservationTests
{
    private const double Radius = 1e-6;

    [Theory]
    [InlineData("ohmic")]
    [InlineData("saturating")]
    [InlineData("cubic")]
    public void Every_contact_carries_what_its_wiring_says(string kind)
    {
        string law = kind switch
        {
            "saturating" => DeviceText.Law(kind, 2e-3, 1e-3, 20, ("field_a", 1e5, "V/m"), ("field_b", 2e5, "V/m"), ("sharpness", 2, "")),
            "cubic" => DeviceText.Law(kind, 2e-3, 1e-3, 20, ("hall", 1e-3, "S"), ("d12", 1e-8, "A m/V^2"), ("c11", 1e-12, "A m^2/V^3"), ("field_limit", 1e5, "V/m")),
            _ => DeviceText.Law(kind, 2e-3, 1e-3, 20, ("hall", 1e-3, "S")),
        };
        SheetDevice device = TestDrive.Device(Text(law));
        FieldLevel level = Level(device);
        const double Current = 1e-5;
        double[] u = new double[level.Equations.Length], net = new double[u.Length];
        NewtonOutcome outcome = new DrivePath(level, 2, 1).Solve(Current, u, null, default);
        Assert.True(outcome.Converged);

        // With no current fed in, the equation of a contact's metal is the net current that enters the sheet there.
        level.Equations.Residual(u, 2, 2, 0, net);
        double[] contacts = [.. level.Space.ContactUnknown.Select(k => net[k])];
        double[] expected = [0, -Current, Current, 0];
        contacts[0] = -net.Sum(); // the first contact is the zero of the potential; what all the others leave is its own
        for (int c = 0; c < contacts.Length; c++)
        {
            Assert.Equal(expected[c], contacts[c], 1e-10 * Current);
        }

        // Contact b is resistive; a positive current needs its metal below the source's.
        Assert.True(u[level.Space.ContactUnknown[2]] > u[level.Space.ContactUnknown[1]]);
    }

    [Fact]
    public void On_one_mesh_reciprocity_is_exact()
    {
        FieldLevel Build(double hall) => Level(TestDrive.Device(Text(DeviceText.Ohmic(2e-3, 1e-3, hall, 20))));
        FieldLevel plus = Build(1e-3), minus = Build(-1e-3);
        double[] u = plus.UnitSolution(0, 1), v = minus.UnitSolution(2, 3);
        int[] c = plus.Space.ContactUnknown;
        double forward = u[c[2]] - u[c[3]], back = v[c[0]] - v[c[1]];
        Assert.Equal(1, forward / back, 1e-10);
    }

    private static DeviceText Text(string law) => DeviceText.Disc(Radius, law)
        .Arc("a", 10, 6, Radius)
        .Contact("b", FormattableString.Invariant($"edge = {{ at = \"130 deg\", width = \"{0.3 * Radius} m\" }}\nresistance = \"1e-4 ohm m\""))
        .Arc("c", 75, 5, Radius).Arc("d", 250, 7, Radius)
        .Wiring("w", "c", "b", "a d").Drive(1e-5);

    private static FieldLevel Level(SheetDevice device) => FieldLevel.Build(
        device, Mesher.Generate(device.Domain, new GradedSize(Radius / 8, [])), new LabLaw(device.Law, device.Axis), default);
}
