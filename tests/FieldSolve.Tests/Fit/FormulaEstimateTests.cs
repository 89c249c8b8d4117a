using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>
/// The textbook's numbers from voltages that are made by the textbook's own field: on a square sheet the extent across a current is its side, or its diagonal for a current
/// from one side to the next, and V between two tips is E times what lies between them.
/// </summary>
public class FormulaEstimateTests
{
    private const double A = 3e-3, B = 1e-3, Hall = 0.4e-3, Axis = 25 * Math.PI / 180, Side = 10e-6, Degree = Math.PI / 180;
    private const string Header = "wiring,pair,current_A,current_rms_A,harmonic,value_V,sigma_V\n";
    private static readonly string[] Tips = ["p", "q", "r"];
    private static readonly Dictionary<string, Point2> Places = new() { ["p"] = new(-2e-6, 1e-6), ["q"] = new(2e-6, 1.5e-6), ["r"] = new(1e-6, -2e-6) };
    private static readonly Dictionary<string, Point2> Ways = new() { ["x"] = new(1, 0), ["y"] = new(0, 1), ["xy"] = new(Math.Sqrt(0.5), Math.Sqrt(0.5)) };
    private static readonly double[] Elements = [2e-9, -1e-9, 0.5e-9, 1.5e-9, 0.7e-9, -0.9e-9];

    // Contacts in the middle of the four sides.
    private static DeviceText Square(string law)
    {
        const double h = Side / 2, w = 0.5e-6;
        DeviceText text = DeviceText.Bar(Side, Side, law)
            .Stretch("left", -h, w, -h, -w).Stretch("right", h, -w, h, w).Stretch("down", -w, -h, w, -h).Stretch("up", w, h, -w, h);
        foreach ((string name, Point2 at) in Places)
        {
            text.Tip(name, at.X, at.Y);
        }

        // From the left to the upper side the current runs along the diagonal.
        return text.Wiring("x", "left", "right", "p q", "r q", "more: r p").Wiring("y", "down", "up", "p q", "r q", "more: r p").Wiring("xy", "left", "up", "p q", "r q", "more: r p")
            .Drive(1e-4);
    }

    private static SheetDevice Device(string free, double axis = Axis / Degree, string kind = "quadratic") =>
        FitDevices.Read(Square(kind == "ohmic" ? DeviceText.Ohmic(A, B, Hall, axis) : DeviceText.Law(kind, A, B, axis, ("field_limit", 1e9, "V/m"))), free);

    private static FittedParameter[] Fitted(SheetDevice device, Func<string, double> ended, double? error = null) =>
        [.. device.Fit!.Parameters.Select(p => new FittedParameter(p, error is null ? null : ended(p.Key), error * Math.Abs(ended(p.Key)), null, false) { Ended = ended(p.Key) })];

    private static (Point2 From, Point2 To) Pair(string pair) =>
        pair switch { "along" => (Places["p"], Places["q"]), "across" => (Places["r"], Places["q"]), _ => (Places["r"], Places["p"]) };

    private static double Width(string wiring) => wiring == "xy" ? Side * Math.Sqrt(2) : Side;

    // Resistivity from K = sigma E in the laboratory, with K_a = a E_a + h E_b and K_b = b E_b - h E_a in the crystal (README, law "ohmic").
    private static Point2 Field(Point2 k, double hall)
    {
        (double s, double c) = Math.SinCos(Axis);
        double ka = (c * k.X) + (s * k.Y), kb = (c * k.Y) - (s * k.X), det = (A * B) + (hall * hall);
        double ea = ((B * ka) - (hall * kb)) / det, eb = ((A * kb) + (hall * ka)) / det;
        return new((c * ea) - (s * eb), (s * ea) + (c * eb));
    }

    // sigma E2 = -N(E1): the second-order current is taken back by a field of the same order.
    private static Point2 SecondField(Point2 k)
    {
        (double s, double c) = Math.SinCos(Axis);
        Point2 e = Field(k, 0);
        double ea = (c * e.X) + (s * e.Y), eb = (c * e.Y) - (s * e.X);
        double na = (Elements[0] * ea * ea) + (Elements[1] * eb * eb) + (2 * Elements[2] * ea * eb), nb = (Elements[3] * ea * ea) + (Elements[4] * eb * eb) + (2 * Elements[5] * ea * eb);
        return Field(new((-c * na) + (s * nb), (-s * na) - (c * nb)), 0);
    }

    private static double First(string wiring, string pair, double hall) =>
        Point2.Dot(Field((1 / Width(wiring)) * Ways[wiring], hall), Pair(pair).To - Pair(pair).From);

    private static double Second(string wiring, string pair) =>
        Point2.Dot(SecondField((1 / Width(wiring)) * Ways[wiring]), Pair(pair).To - Pair(pair).From);

    // Columns: DC current, or RMS current and harmonic.
    private static string Row(string wiring, string pair, double current, int? harmonic, double volts) => harmonic is { } n
        ? string.Create(CultureInfo.InvariantCulture, $"{wiring},{pair},,{current:R},{n},{volts:R},1e-7\n")
        : string.Create(CultureInfo.InvariantCulture, $"{wiring},{pair},{current:R},,,{volts:R},1e-7\n");

    private static string Table(Func<string, string, string> rows)
    {
        StringBuilder text = new(Header);
        foreach (string wiring in Ways.Keys)
        {
            foreach (string pair in new[] { "along", "across", "more" })
            {
                text.Append(rows(wiring, pair));
            }
        }

        return text.ToString();
    }

    private static Dictionary<string, FormulaValue> Strip(SheetDevice device, string table, FittedParameter[] fitted) =>
        FormulaEstimate.Of(device, FitDevices.Table(device, table), fitted).Where(f => f.Method == "uniform strip").ToDictionary(f => f.Key);

    // Either naming of the axes describes the sheet; the one is meant that lies nearer to where the fit ended.
    [Theory]
    [InlineData(15, 25, A, B)]
    [InlineData(110, 115, B, A)]
    [InlineData(-70, -65, B, A)]
    public void A_free_axis_with_a_hall_part_is_found_in_three_directions(double ended, double axis, double a, double b)
    {
        SheetDevice device = Device("a = true\nb = true\nhall = true\naxis = true", 10, "ohmic");
        Dictionary<string, FormulaValue> found = Strip(
            device, Table((w, p) => Row(w, p, 1e-4, null, 1e-4 * First(w, p, Hall))), Fitted(device, key => key == "axis" ? ended * Degree : 2e-3, 0.5));
        Assert.Equal(axis, found["axis"].Value, 1e-7);
        Assert.Equal(a, found["a"].Value, 1e-10);
        Assert.Equal(b, found["b"].Value, 1e-10);
        Assert.Equal(Hall, found["hall"].Value, 1e-10);
        Assert.Equal(("deg", "S"), (found["axis"].Unit, found["hall"].Unit));

        // (formula - fit) / standard error, with a fit of 2 mS +- 1 mS.
        Assert.Equal((a - 2e-3) / 1e-3, found["a"].Off!.Value, 1e-6);
        Assert.Equal(2e-3, found["a"].Fitted!.Value, 1e-15);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Second_order_elements_come_from_both_signs_or_from_harmonics(bool harmonics)
    {
        SheetDevice device = Device("a = true\nb = true\nd11 = true\nd12 = true\nd16 = true\nd21 = true\nd22 = true\nd26 = true");
        const double i = 1e-4, third = 5e6;

        // Of V = R1 I + R2 I² under I = sqrt(2) i sin(wt): R1 i, R2 i² for the DC part, and -R2 i²/sqrt(2) along cos(2wt). Five DC currents also hold a third order, which must not leak.
        string table = Table((w, p) =>
        {
            double r1 = First(w, p, 0), r2 = Second(w, p);
            return harmonics
                ? Row(w, p, i, 1, r1 * i) + Row(w, p, i, 0, r2 * i * i) + Row(w, p, i, 2, -r2 * i * i / Math.Sqrt(2)) + Row(w, p, i, 3, 7)
                : string.Concat(new[] { -2, -1, 1, 2, 3 }.Select(k => Row(w, p, k * i, null, (r1 * k * i) + (r2 * k * k * i * i) + (third * Math.Pow(k * i, 3)))));
        });
        Dictionary<string, FormulaValue> found = Strip(device, table, Fitted(device, _ => 1));
        Assert.Equal(A, found["a"].Value, 1e-6 * A);
        Assert.Equal(B, found["b"].Value, 1e-6 * B);
        string[] keys = ["d11", "d12", "d16", "d21", "d22", "d26"];
        for (int k = 0; k < keys.Length; k++)
        {
            Assert.Equal(Elements[k], found[keys[k]].Value, 1e-14);
        }

        Assert.All(found.Values, f => Assert.Null(f.Off)); // nothing is said of numbers that the fit left open
    }

    [Fact]
    public void Elements_need_as_many_even_voltages_and_no_more_are_listed_than_are_free()
    {
        const double i = 1e-4;
        SheetDevice one = Device("a = true\nb = true\nd12 = true");

        // Three currents of one sign are enough for R2; two are not.
        string Currents(string w, string p, int n) => string.Concat(Enumerable.Range(1, n).Select(k => Row(w, p, k * i, null, (First(w, p, 0) * k * i) + (Second(w, p) * k * k * i * i))));
        Assert.DoesNotContain("d12", Strip(one, Table((w, p) => Currents(w, p, 2)), Fitted(one, _ => 1)).Keys);
        Assert.Equal(["a", "b", "d12"], Strip(one, Table((w, p) => Currents(w, p, 3)), Fitted(one, _ => 1)).Keys.Order());
    }

    // What can not be told from the data is not listed, and nothing else suffers.
    [Theory]
    [InlineData("a = true\nb = true", 0, "x,along", 1)]             // one voltage for two numbers
    [InlineData("a = true\nb = true", 0, "x,flat;x,flat2", 1)]      // b carries no field along x
    [InlineData("a = true\nb = true", 45, "x,flat;x,flat2", 1)]     // a and b act alike
    [InlineData("a = true\nb = true", 0, "x,flat;y,steep", -1)]      // a resistance below zero
    [InlineData("field_limit = true", 0, "x,along;y,along", 1)]      // neither is free
    public void Nothing_is_listed_that_the_data_do_not_tell(string free, double axis, string pairs, double sign)
    {
        string law = DeviceText.Law("quadratic", A, B, axis, ("field_limit", 1e9, "V/m"));
        SheetDevice device = FitDevices.Read(
            Square(law).Tip("s", 2e-6, 1e-6).Tip("t", 3e-6, 1e-6).Tip("u", -2e-6, 3e-6).Wiring("flat", "left", "right", "p s", null, "flat2: p t").Wiring("steep", "down", "up", "p u"), free);
        string[] rows = [.. pairs.Split(';').Select(p => p.Split(',') switch
        {
            [_, "flat"] => Row("flat", "along", 1e-4, null, 1e-3),
            [_, "flat2"] => Row("flat", "flat2", 1e-4, null, 2e-3),
            [_, "steep"] => Row("steep", "along", 1e-4, null, sign * 1e-3),
            [var w, var p2] => Row(w, p2, 1e-4, null, 1e-3),
            _ => throw new ArgumentException(p),
        })];
        Assert.Empty(Strip(device, Header + string.Concat(rows), Fitted(device, _ => 1)));
    }

    [Fact]
    public void Zero_currents_and_lone_second_harmonics_say_nothing()
    {
        SheetDevice device = Device("a = true\nb = true");
        string good = Table((w, p) => Row(w, p, 1e-4, null, 1e-4 * First(w, p, 0)) + Row(w, p, 0, null, 5));
        Assert.Equal(A, Strip(device, good, Fitted(device, _ => 1))["a"].Value, 1e-10);
        Assert.Empty(Strip(device, Table((w, p) => Row(w, p, 1e-4, 2, 1e-6)), Fitted(device, _ => 1)));
        Assert.Empty(Strip(device, Table((w, p) => Row(w, p, 0, null, 1e-6)), Fitted(device, _ => 1)));
    }

    // R_A = R_B = R: Rs = pi R / ln 2 (L. J. van der Pauw, Philips Res. Rep. 13, 1 (1958)). Neighbours in the order of the rim are left, down, right, up.
    [Theory]
    [InlineData("left down up right 1;down right left up 1", 1, 1)]
    [InlineData("left down up right 1;left up down right 1", 1, 1)]                           // current and voltage pair exchanged: the same resistance by reciprocity
    [InlineData("left down up right 1;right up down left 3;down right left up 2", 2, 1)]     // means of what was read twice, the four contacts listed once
    [InlineData("left down up right 1", 0, 0)]                                               // one of the two is missing
    [InlineData("left down up right 1;down right left up 0", 0, 0)]                          // a zero resistance
    [InlineData("left down up p 1;down right left up 1", 0, 0)]                              // a tip is no contact on the rim
    [InlineData("left down up left 1;down right left up 1", 0, 0)]                           // three contacts
    [InlineData("left right up down 1;down up left right 1", 0, 0)]                          // crossed pairs
    public void Four_contacts_are_van_der_Pauw_s(string readings, double mean, int listed)
    {
        SheetDevice device = Device("a = true", 0, "ohmic");
        MeasuredVoltages data = FitDevices.Resistances(device, 1e-4, 1e-6, [.. readings.Split(';').Select(r => (r[..r.LastIndexOf(' ')], double.Parse(r[(r.LastIndexOf(' ') + 1)..], CultureInfo.InvariantCulture)))]);
        FormulaValue[] found = [.. FormulaEstimate.Of(device, data, Fitted(device, _ => 4e-3, 0.1)).Where(f => f.Method == "van der Pauw")];
        Assert.Equal(listed, found.Length);
        if (listed > 0)
        {
            Assert.Equal(Math.PI * mean / Math.Log(2), found[0].Value, 1e-9);

            // In the order of the rim, wherever that begins.
            string[] names = found[0].Key["sheet resistance (".Length..^1].Split(' ');
            Assert.Contains("left down right up", string.Join(' ', names.Concat(names)), StringComparison.Ordinal);

            // Beside it what the fit says: a as fitted, b of the device file.
            Assert.Equal(1 / Math.Sqrt(4e-3 * B), found[0].Fitted!.Value, 1e-9);
        }
    }
}
