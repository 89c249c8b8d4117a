using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Sensitivity;

namespace FieldSolve.Tests.SensitivityTests;

/// <summary>Every derivative against differences of full solves on the same, moved mesh: the derivative of the discrete equations is exact.</summary>
public class SensitivityTests
{
    private const string Disc = """
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "quadratic"
        axis = "25 deg"
        a = "4 mS"
        b = "1 mS"
        hall = "0.5 mS"
        d11 = "1e-9 A m/V^2"
        d12 = "4e-9 A m/V^2"
        d26 = "2e-9 A m/V^2"
        field_limit = "150 kV/m"
        [[contacts]]
        ring = 6
        width = "1.2 um"
        prefix = "c"
        [[contact]]
        name = "r"
        edge = { at = "30 deg", width = "0.8 um" }
        resistance = "300 ohm um"
        [[wiring]]
        name = "one"
        source = "c4"
        drain = "r"
        along = ["c3", "c2"]
        across = ["c3", "c6"]
        [drive]
        current = { from = "200 uA", to = "200 uA", steps = 1 }
        """;

    private const string Flake = ContactedBar.Sheet + """
        [law]
        kind = "saturating"
        axis = "20 deg"
        a = "3 mS"
        b = "1 mS"
        hall = "0.3 mS"
        field_a = "200 kV/m"
        field_b = "500 kV/m"
        sharpness = 2.5

        """ + ContactedBar.Ends + """
        [[contact]]
        name = "p"
        pad = [["-1 um", "1 um"], ["0.5 um", "1.2 um"], ["0.5 um", "4 um"], ["-1 um", "4 um"]]
        resistivity = "2e-7 ohm cm^2"
        [[contact]]
        name = "q"
        pad = [["-0.5 um", "-2 um"], ["0.5 um", "-1.8 um"], ["0.2 um", "-1 um"]]
        resistivity = "1e-7 ohm cm^2"

        """ + ContactedBar.Wiring + """
        [drive]
        current = { from = "300 uA", to = "300 uA", steps = 1 }
        """;

    private static readonly SmallMesh Ideal = new(
        Disc[..Disc.IndexOf("[law]", StringComparison.Ordinal)] + Flake[Flake.IndexOf("[law]", StringComparison.Ordinal)..Flake.IndexOf("sharpness", StringComparison.Ordinal)]
        + "sharpness = 2.5\n" + Disc[Disc.IndexOf("[[contacts]]", StringComparison.Ordinal)..], split: false);

    private static readonly SmallMesh DiscMesh = new(Disc, split: true), FlakeMesh = new(Flake, split: false);
    private static readonly StateSensitivity DiscState = DiscMesh.State, FlakeState = FlakeMesh.State;

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void Every_parameter_of_the_law_and_the_axis(bool disc)
    {
        (SmallMesh m, StateSensitivity s) = disc ? (DiscMesh, DiscState) : (FlakeMesh, FlakeState);
        foreach (LawParameter p in LawSensitivity.Parameters(m.Device.Law))
        {
            double value = LawSensitivity.Value(m.Device.Law, p.Key);
            double step = 1e-4 * (value != 0 ? Math.Abs(value) : p.Key[0] == 'd' ? 1e-9 : 1e-3);
            Near(
                m.Difference(x => m.Device with { Law = LawSensitivity.With(m.Device.Law, new Dictionary<string, double> { [p.Key] = value + x }) }, step),
                r => s.ByLaw(r, p.Key), 1e-5, p.Key);
        }

        Near(m.Difference(x => m.Device with { Axis = m.Device.Axis + x }, 1e-4), s.ByAxis, 1e-6, "axis");
    }

    // Beside ideal contacts a saturating law reaches its guard, whose beginning is searched for anew for other numbers, in steps of some 1e-4 of itself. With that beginning held the
    // differences agree; with the new one they hold the jumps of the search over the step, and what a moved beginning does, which a derivative leaves out.
    [Theory]
    [InlineData("a")]
    [InlineData("b")]
    [InlineData("field_a")]
    [InlineData("field_b")]
    public void A_guard_that_the_field_reaches_is_held(string key)
    {
        GuardedLaw law = Assert.IsType<GuardedLaw>(Ideal.Device.Law);
        double value = LawSensitivity.Value(law, key), step = 1e-4 * value;
        ISheetLaw With(double x) => LawSensitivity.With(law, new Dictionary<string, double> { [key] = value + x });
        Near(Ideal.Difference(x => Ideal.Device with { Law = ((GuardedLaw)With(x)).With(law.Guard!) }, step), r => Ideal.State.ByLaw(r, key), 1e-5, key);

        // The field does reach it: bent elsewhere the sheet reads something else.
        double[] here = Ideal.Read(Ideal.Device), there = Ideal.Read(Ideal.Device with { Law = law.With(new(0.9 * law.Guard!.From, 0.9 * law.Guard.Limit)) });
        Assert.True(here.Zip(there, (x, y) => Math.Abs(x - y)).Max() > 1e-6 * here.Max(Math.Abs));
    }

    [Theory]
    [InlineData(true, "r")]
    [InlineData(false, "s")]
    [InlineData(false, "p")]
    [InlineData(false, "q")]
    public void Resistance_of_a_contact(bool disc, string name)
    {
        (SmallMesh m, StateSensitivity s) = disc ? (DiscMesh, DiscState) : (FlakeMesh, FlakeState);
        int k = m.Device.Contacts.ToList().FindIndex(c => c.Name == name);
        Contact was = m.Device.Contacts[k];
        SheetDevice With(double by) => m.Device with
        {
            Contacts = [.. m.Device.Contacts.Select((c, i) => i != k ? c : c with
            {
                LineResistance = was.LineResistance > 0 ? was.LineResistance + by : 0,
                Resistivity = was.Resistivity > 0 ? was.Resistivity + by : 0,
            })],
        };
        Near(m.Difference(With, 1e-4 * (was.LineResistance + was.Resistivity)), r => s.ByContact(r, k), 1e-6, name);
    }

    [Theory]
    [InlineData("c4")]
    [InlineData("r")]
    public void Position_and_width_of_a_contact_on_an_arc(string name)
    {
        int k = DiscMesh.Device.Contacts.ToList().FindIndex(c => c.Name == name);
        foreach ((double from, double length) in new[] { (1.0, 0.0), (-0.5, 1.0) })
        {
            SheetDevice With(double by)
            {
                RimSpan span = DiscMesh.Device.Layout.Contacts[k].Span!.Value;
                var moved = new ContactPlacement(span with { From = span.From + (from * by) + (2 * Math.PI * 4e-6), Length = span.Length + (length * by) }, null, false);
                return DiscMesh.Device.Layout.With(k, moved).Apply(DiscMesh.Device);
            }

            MotionField field = DiscMesh.Motion.Velocity(x => With(x).Domain, 8e-6)!;
            Near(DiscMesh.Difference(With, 2e-10), r => DiscState.ByMotion(r, field), 1e-5, name);
        }
    }

    [Theory]
    [InlineData("d")]
    [InlineData("p")]
    [InlineData("q")]
    public void Motion_of_a_pad_inside_and_across_the_rim(string name)
    {
        int k = FlakeMesh.Device.Contacts.ToList().FindIndex(c => c.Name == name);
        foreach (Func<Point2, double, Point2> move in new Func<Point2, double, Point2>[] { (p, x) => new(p.X + x, p.Y), (p, x) => new(p.X, p.Y + x), (p, x) => p.Turned(x / 5e-6) })
        {
            SheetDevice With(double by)
            {
                ContactPlacement was = FlakeMesh.Device.Layout.Contacts[k];
                return FlakeMesh.Device.Layout.With(k, was with { Pad = [.. was.Pad!.Select(p => move(p, by))] }).Apply(FlakeMesh.Device);
            }

            MotionField field = FlakeMesh.Motion.Velocity(x => With(x).Domain, 8e-6)!;
            Near(FlakeMesh.Difference(With, 2e-10), r => FlakeState.ByMotion(r, field), 1e-5, name);
        }
    }

    private static void Near(double[] expected, Func<int, double> actual, double tolerance, string what)
    {
        double scale = expected.Max(Math.Abs);
        Assert.True(scale > 0, what);
        for (int r = 0; r < expected.Length; r++)
        {
            Assert.True(Math.Abs(actual(r) - expected[r]) <= tolerance * scale, $"{what}, reading {r}: {actual(r)} against {expected[r]} (largest {scale})");
        }
    }
}
