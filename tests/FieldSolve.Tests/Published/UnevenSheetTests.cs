using FieldSolve.Readings;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Sheets without symmetry and without a closed form: uneven and floating contacts, a Hall part, a turned crystal, contact resistances, a re-entrant corner.
/// The reference values come from an independent method without a mesh: rational functions with poles that gather exponentially at corners and contact ends,
/// fitted on the edge by least squares (A. Gopal and L. N. Trefethen, SIAM J. Numer. Anal. 57 (2019) 2074), after the map that makes the sheet isotropic.
/// They were computed outside this repository with up to 80 poles at each end; two sets of poles agree in the digits given. Even parts are
/// V = -integral of E_w . D(E, E), by reciprocity, with the field E_w of the probes in the transposed sheet.
/// </summary>
public class UnevenSheetTests(ITestOutputHelper output)
{
    private const double Micron = 1e-6, Degree = 180 / Math.PI;
    private const string SecondOrder = "A m/V^2";
    private readonly Honesty honesty = new(output);

    [Fact]
    public void Five_uneven_contacts_on_a_disc_with_a_hall_part()
    {
        DeviceText text = FiveContacts(DeviceText.Ohmic(4e-3, 1e-3, 0.7e-3, 0.3 * Degree)).Wiring("w", "c1", "c3", "c2 c4", "c5 c4").Drive(1e-4);
        DriveResult r = TestDrive.Run(text);
        honesty.Reading("five contacts, hall", r, "along", 3.716844487385e-2 - 4.942405323463e-2, 1e-12);
        honesty.Reading("five contacts, hall", r, "across", 5.234784731541e-2 - 4.942405323463e-2, 1e-12);
        honesty.Reading("five contacts, hall", r, "source", 8.200168164754e-2, 1e-11);
    }

    [Fact]
    public void Even_part_of_a_disc_with_five_uneven_contacts()
    {
        string law = DeviceText.Law("quadratic", 4e-3, 1e-3, 0.3 * Degree,
            ("d11", 3e-9, SecondOrder), ("d12", -1e-9, SecondOrder), ("d16", 2e-9, SecondOrder), ("d21", 0.5e-9, SecondOrder), ("d22", 1e-9, SecondOrder), ("d26", -1.5e-9, SecondOrder));
        const double Current = 3e-8;   // even over along 5e-5
        DriveResult r = TestDrive.Run(FiveContacts(law).Wiring("w", "c1", "c3", "c5 c4", "c2 c4").Drive(Current, bothSigns: true));
        honesty.Even("five contacts", r, r.Rows[0], "across", 4.62526e4 * Current * Current, 3e-6 * 4.62526e4 * Current * Current);
    }

    [Fact]
    public void Even_parts_of_a_disc_with_two_floating_contacts_and_a_hall_part()
    {
        const double Radius = 4 * Micron, Current = 2e-7;
        string law = DeviceText.Law("quadratic", 2e-3, 1.5e-3, -0.6 * Degree, ("hall", 0.2e-3, "S"), ("d12", 2e-9, SecondOrder), ("d26", 2e-9, SecondOrder));
        DeviceText text = Contacts(DeviceText.Disc(Radius, law), Radius, (0, 0.8), (0.8, 0.5), (1.6, 0.4), (3.0, 0.9), (3.9, 0.3), (4.8, 0.6))
            .Wiring("w", "c1", "c4", "c2 c3", "c2 c6").Drive(Current, bothSigns: true);
        DriveResult r = TestDrive.Run(text);
        honesty.Even("two floating", r, r.Rows[0], "along", 8767.175 * Current * Current, 1e-6 * 8767 * Current * Current);
        honesty.Even("two floating", r, r.Rows[0], "across", 53566.18 * Current * Current, 1e-6 * 53566 * Current * Current);
    }

    [Fact]
    public void Even_parts_of_a_disc_with_contact_resistances()
    {
        const double Radius = 15 * Micron, Current = 5e-8;
        string law = DeviceText.Law("quadratic", 1e-3, 1e-4, 0.4 * Degree, ("d11", 1e-9, SecondOrder), ("d21", 1e-9, SecondOrder));
        (double At, double Width, double Resistance)[] contacts = [(0, 1, 1e-3), (1.2, 1, 1e-3), (1.9, 1.5, 2e-3), (3.14, 1, 5e-4), (4.4, 0.7, 1e-3)];
        DeviceText text = DeviceText.Disc(Radius, law);
        for (int k = 0; k < contacts.Length; k++)
        {
            text.Contact($"c{k + 1}", FormattableString.Invariant(
                $"edge = {{ at = \"{contacts[k].At} rad\", width = \"{contacts[k].Width} um\" }}\nresistance = \"{contacts[k].Resistance} ohm m\""));
        }

        DriveResult r = TestDrive.Run(text.Wiring("w", "c1", "c4", "c2 c3", "c3 c5").Drive(Current, bothSigns: true));
        honesty.Even("contact resistances", r, r.Rows[0], "along", -60525.6 * Current * Current, 2e-6 * 60526 * Current * Current);
        honesty.Even("contact resistances", r, r.Rows[0], "across", 1170097.5 * Current * Current, 2e-6 * 1170097 * Current * Current);
    }

    [Fact]
    public void Flake_with_a_reentrant_corner_a_turned_crystal_and_a_hall_part()
    {
        using var folder = new EndToEndTests.TempFolder();
        folder.Write("flake.wkt", "POLYGON ((0 0, 9e-6 1e-6, 12e-6 7e-6, 7e-6 5e-6, 6e-6 10e-6, 1e-6 8e-6, 0 0))");
        (double X, double Y)[] corners = [(0, 0), (9, 1), (12, 7), (7, 5), (6, 10), (1, 8)];
        DeviceText text = DeviceText.Outline("flake.wkt", DeviceText.Ohmic(3e-3, 1.2e-3, 0.3e-3, 0.7 * Degree));
        foreach ((string name, int edge, double from, double to) in new[] { ("L", 5, 0.2, 0.8), ("R", 1, 0.3, 0.7), ("T", 3, 0.4, 0.5), ("B", 0, 0.35, 0.5), ("S", 4, 0.3, 0.6) })
        {
            (double x0, double y0) = corners[edge];
            (double x1, double y1) = corners[(edge + 1) % corners.Length];
            text.Stretch(name, At(x0, x1, from), At(y0, y1, from), At(x0, x1, to), At(y0, y1, to));
        }

        DriveResult r = TestDrive.Run(text.Wiring("w", "L", "R", "S T", "T B").Drive(1e-4), folder.Path);
        honesty.Reading("flake", r, "along", 8.6715906690e-2 - 7.5710614554e-2, 1e-11);
        honesty.Reading("flake", r, "across", 7.5710614554e-2 - 6.4897605255e-2, 1e-11);
        honesty.Reading("flake", r, "source", 1.0157593749e-1, 1e-10);
    }

    [Fact]
    public void Bar_with_two_skew_arms_in_a_field()
    {
        using var folder = new EndToEndTests.TempFolder();
        folder.Write("bar.wkt", "POLYGON ((-10e-6 -2e-6, -3e-6 -2e-6, -3e-6 -5e-6, -2e-6 -5e-6, -2e-6 -2e-6, 10e-6 -2e-6, 10e-6 2e-6, 3e-6 2e-6, 3e-6 5e-6, 2e-6 5e-6, 2e-6 2e-6, -10e-6 2e-6, -10e-6 -2e-6))");
        DriveResult r = TestDrive.Run(DeviceText.Outline("bar.wkt", DeviceText.Ohmic(2e-3, 2e-3, 0.6e-3))
            .Stretch("L", -10 * Micron, 2 * Micron, -10 * Micron, -2 * Micron).Stretch("R", 10 * Micron, -2 * Micron, 10 * Micron, 2 * Micron)
            .Stretch("B", -3 * Micron, -5 * Micron, -2 * Micron, -5 * Micron).Stretch("T", 3 * Micron, 5 * Micron, 2 * Micron, 5 * Micron)
            .Wiring("w", "L", "R", "L R", "T B").Drive(1e-4), folder.Path);
        honesty.Reading("skew arms", r, "along", 2.3063506370e-1, 1e-10);
        honesty.Reading("skew arms", r, "across", 8.0000897699e-2 - 1.5063416600e-1, 1e-10);
    }

    private static DeviceText FiveContacts(string law) =>
        Contacts(DeviceText.Disc(10 * Micron, law), 10 * Micron, (0.1, 3.0), (1.4, 1.2), (2.9, 2.5), (4.6, 0.8), (5.6, 1.0));

    // Middles in rad, widths in um.
    private static DeviceText Contacts(DeviceText text, double radius, params (double At, double Width)[] contacts)
    {
        for (int k = 0; k < contacts.Length; k++)
        {
            text.Arc($"c{k + 1}", contacts[k].At * Degree, contacts[k].Width * Micron / 2 / radius * Degree, radius);
        }

        return text;
    }

    private static double At(double from, double to, double share) => (from + ((to - from) * share)) * Micron;
}
