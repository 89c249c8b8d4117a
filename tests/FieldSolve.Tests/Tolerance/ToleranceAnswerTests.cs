using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>
/// The sentences a referee gets, from budgets made up so that every number in them can be worked out by hand: variances are sums of squares, and a bar of 1 mS and
/// 10 um at 100 uA has 100 mV between two tips 10 um apart.
/// </summary>
public class ToleranceAnswerTests
{
    private static readonly SheetDevice Device = ToleranceDevices.Read(
        DeviceText.Bar(30e-6, 10e-6, DeviceText.Law("quadratic", 1e-3, 1e-3, 0, ("d12", 1e-10, "A m/V^2"), ("field_limit", 1e6, "V/m")))
            .Whole("l", "end", "left").Whole("r", "end", "right").Stretch("t", 13e-6, 5e-6, 12e-6, 5e-6).Stretch("u", 12e-6, -5e-6, 13e-6, -5e-6)
            .Tip("p", -12e-6, 0).Tip("q", -2e-6, 0).Tip("n", 0, 3e-6).Tip("m", 0, -3e-6)
            .Wiring("hall", "l", "r", "p q", "n m").Wiring("long", "l", "r", "p q").Wiring("two", "l", "r").Wiring("cross", "l", "r", null, "n m").Drive(1e-4).Wanted(1e-2, 0.5),
        "axis = \"1 deg\"");

    private static readonly ToleranceModel Model = ToleranceModel.Build(Device, _ => { }, new StageClock(), default);

    private static readonly SheetCause PositionT = Cause(new PositionCause(), 2, 50e-9), PositionU = Cause(new PositionCause(), 3, 50e-9), WidthT = Cause(new WidthCause(), 2, 20e-9);
    private static readonly SheetCause Axis = new(new AxisCause(), CauseTarget.Sheet, Math.PI / 180, CauseShape.Normal);
    private static readonly SheetCause Conductance = Law("a", 10e-6), Element = Law("d12", 1e-10), Sharpness = Law("sharpness", 0.5);
    private static readonly SheetCause LayerX = new(new LayerShiftCause(true), new("gold", [2, 3], default), 30e-9, CauseShape.Normal);
    private static readonly SheetCause LayerTurn = new(new LayerRotationCause(), new("gold", [2, 3], default), 2 * Math.PI / 180, CauseShape.Normal);
    private static readonly SheetCause Growth = new(new OutlineGrowthCause(), CauseTarget.Sheet, 20e-9, CauseShape.Normal);

    private static SheetCause Cause(CauseKind kind, int contact, double sigma) => new(kind, CauseTarget.One(Device, contact), sigma, CauseShape.Normal);

    private static SheetCause Law(string key, double sigma) => new(CauseCatalogue.Find(key, CauseScope.Sheet)!, CauseTarget.Sheet, sigma, CauseShape.Normal);

    // What is said of one wiring when one of its quantities is as given; the largest part first, as a budget has it. All other quantities are untouched.
    private static string[] Words(
        string wiring, string label, double design, (SheetCause Cause, double Contribution)[] parts, ToleranceOptions? options = null, double scatter = 0, double error = 0, bool second = false)
    {
        ToleranceQuantity about = Model.Quantities.Single(q => q.Wiring == wiring && q.Label == label);
        BudgetEntry[] budget = [.. parts.Select(p => second
            ? new BudgetEntry(about, p.Cause, 0, 2 * p.Contribution / (p.Cause.Sigma * p.Cause.Sigma), p.Contribution, 0)
            : new BudgetEntry(about, p.Cause, p.Contribution / p.Cause.Sigma, null, p.Contribution, 0))];
        double first = second ? 0 : Math.Sqrt(parts.Sum(p => p.Contribution * p.Contribution));
        SampleStatistics[] statistics = [.. Model.Quantities.Select(q => q == about
            ? new SampleStatistics(q, design, scatter > 0 ? 64 : 0, default, new(scatter, 0, 0), [default, default, default], first, error, 0)
            : new SampleStatistics(q, 0, 0, default, default, [default, default, default], 0, 0, 0))];
        string start = $"Wiring '{wiring}': ";
        return [.. ToleranceAnswers.Of(Model, budget, statistics, options ?? new()).Where(a => a.StartsWith(start, StringComparison.Ordinal)).Select(a => a[start.Length..])];
    }

    [Fact]
    public void The_bar_is_the_one_the_numbers_are_worked_out_for() => Assert.Equal(0.1, Model.States[0].Row.Of("along")!.Odd!.Value, 1e-4);

    [Fact]
    public void Pick_up_is_a_share_of_along_with_the_contact_that_makes_most_of_it()
    {
        // sqrt(4² + 3²) = 5 mV by contacts, with 2 mV of the conductance sqrt(29) = 5.39 mV in all: 16, 9 and 4 of 29 parts are 55, 31 and 14 %; of the contacts' 25 parts 16 are 64 %.
        string[] words = Words("hall", "across odd", 2e-3, [(PositionT, -4e-3), (PositionU, 3e-3), (Conductance, 2e-3)]);
        Assert.Equal(
            "the across odd part is 2 mV as designed and scatters by 5.39 mV (1 sigma), 5.4 % of the along voltage. Most of it comes from position of t (55 % of the variance; 4 mV for 50 nm)."
            + " 5 mV of it is pick-up of 5 % of along for 50 nm placement; contact 't' has the largest part of that (64 % of the variance).",
            words[0]);

        // To 1 % of along, 1 mV: the conductance alone makes 2 mV. Placement alone would do with a fifth, 10 nm for each contact.
        Assert.Equal(
            "no placement keeps the scatter under 1 mV (1 % of along): the other causes make 2 mV. Placement alone would stay under it with 10 nm for position of t and the others in proportion.",
            words[1]);
        Assert.Equal("the across even part is 0 V as designed and scatters by 0 V (1 sigma): these causes cannot fake it.", words[2]);
        Assert.Equal(3, words.Length);
    }

    [Fact]
    public void Samples_say_how_far_it_scatters_where_there_are_some() => Assert.StartsWith(
        "the across odd part is 0 V as designed and scatters by 12 mV (1 sigma), 12 % of the along voltage. Most of it comes from position of t (100 % of the variance; 4 mV for 50 nm).",
        Words("hall", "across odd", 0, [(PositionT, 4e-3)], scatter: 12e-3)[0], StringComparison.Ordinal);

    [Fact]
    public void Causes_that_move_nothing_are_no_pick_up()
    {
        Assert.Equal("the along odd part (100 mV) is untouched by these causes in first order.", Assert.Single(Words("long", "along odd", 0.1, [])));
        Assert.EndsWith("Most of it comes from axis (100 % of the variance; 1 mV for 1 deg).", Assert.Single(Words("long", "along odd", 0.1, [(Axis, 1e-3)])), StringComparison.Ordinal);

        // The rim moves, but no contact is misplaced against another.
        Assert.EndsWith("Most of it comes from growth (100 % of the variance; 1 mV for 20 nm).", Assert.Single(Words("long", "along odd", 0.1, [(Growth, 1e-3)])), StringComparison.Ordinal);
        Assert.Equal(2, Words("hall", "across odd", 1e-3, [(Axis, 1e-3)]).Length);
    }

    [Fact]
    public void Without_a_voltage_along_the_pick_up_is_no_share_of_one()
    {
        Assert.Equal(
            "the source odd part is 300 mV as designed and scatters by 1 mV (1 sigma). Most of it comes from position of t (100 % of the variance; 1 mV for 50 nm)."
            + " 1 mV of it comes from 50 nm placement; contact 't' has the largest part of that (100 % of the variance).",
            Assert.Single(Words("two", "source odd", 0.3, [(PositionT, 1e-3)])));

        // No level to keep to unless one is asked for.
        Assert.DoesNotContain(Words("cross", "across odd", 1e-3, [(PositionT, 1e-3)]), w => w.Contains("placement must", StringComparison.Ordinal));
        Assert.Contains("to keep the scatter under 500 µV, the placement must be 2 times better, for instance 25 nm for position of t.", Words("cross", "across odd", 1e-3, [(PositionT, 1e-3)], new() { Wanted = 0.5e-3 }));
    }

    [Fact]
    public void Several_sizes_and_layers_are_not_called_by_one_size()
    {
        Assert.Contains("for the stated placement; contact 't'", Words("hall", "across odd", 0, [(PositionT, 4e-3), (LayerX, 3e-3)])[0], StringComparison.Ordinal);
        Assert.EndsWith("3 mV of it is pick-up of 3 % of along for 30 nm placement.", Words("hall", "across odd", 0, [(LayerX, 3e-3)])[0], StringComparison.Ordinal);
        Assert.EndsWith("is pick-up of 3 % of along for the stated placement.", Words("hall", "across odd", 0, [(LayerTurn, 3e-3)])[0], StringComparison.Ordinal);
        Assert.Contains("for the stated placement; contact 't'", Words("hall", "across odd", 0, [(WidthT, 3e-3)])[0], StringComparison.Ordinal);
    }

    [Fact]
    public void How_much_better_or_worse_the_placement_may_be()
    {
        // Left for the placement: sqrt(1² - 0.6²) = 0.8 mV.
        Assert.Equal("the placement is good enough for 1 mV (1 % of along): it could be 4 times worse, for instance 200 nm for position of t.", Words("hall", "across odd", 0, [(Conductance, 0.6e-3), (PositionT, 0.2e-3)])[1]);
        Assert.Equal("to keep the scatter under 1 mV (1 % of along), the placement must be 2 times better, for instance 25 nm for position of t.", Words("hall", "across odd", 0, [(PositionT, 1.6e-3), (Conductance, 0.6e-3)])[1]);
        Assert.Equal("the placement is good enough for 2 mV: it could be 2 times worse, for instance 100 nm for position of t.", Words("hall", "across odd", 0, [(PositionT, 1e-3)], new() { Wanted = 2e-3 })[1]);

        // A length is the better example; an angle alone is none.
        Assert.EndsWith("2 times better, for instance 10 nm for width of t.", Words("hall", "across odd", 0, [(LayerTurn, Math.Sqrt(3) * 1e-3), (WidthT, 1e-3)])[1], StringComparison.Ordinal);
        Assert.EndsWith("the placement must be 2 times better.", Words("hall", "across odd", 0, [(LayerTurn, 2e-3)])[1], StringComparison.Ordinal);
        Assert.EndsWith("the other causes make 2 mV.", Words("hall", "across odd", 0, [(Axis, 2e-3), (LayerTurn, 1e-3)])[1], StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(1e-6, 0.05e-6, false, 0, "the across even part is 1 µV as designed and scatters by 50 nV (1 sigma), 5 % of it: these causes cannot fake it. Most of it comes from axis.")]
    [InlineData(1e-6, 0.5e-6, true, 0, "the across even part is 1 µV as designed and scatters by 500 nV (1 sigma), 50 % of it: these causes change it, but do not make it up. Most of it comes from axis, in second order.")]
    [InlineData(-1e-6, 2e-6, false, 3e-6, "the across even part is -1 µV as designed (below its numerical error of 3 µV) and scatters by 2 µV (1 sigma), 200 % of it: these causes alone could fake it. Most of it comes from axis.")]
    public void An_even_part_is_or_is_not_what_the_causes_can_fake(double design, double scatter, bool second, double error, string expected) =>
        Assert.Equal(expected, Words("hall", "across even", design, [(Axis, scatter)], scatter: scatter, error: error, second: second)[^1]);

    [Fact]
    public void A_voltage_is_explained_by_one_cause_or_by_all_at_once()
    {
        ToleranceOptions explain = new() { Explain = 3e-3 };

        // 3 mV is 2 mV off. Slopes: 1 mV for 50 nm, 0.5 mV for 1 deg, 0.25 mV for 10 uS, 0.2 mV for 1e-10 A m/V²: the three largest are named.
        (SheetCause, double)[] parts = [(PositionT, 1e-3), (Axis, 0.5e-3), (Element, -0.25e-3), (Sharpness, 0.2e-3), (Growth, 0)];
        Assert.Equal(
            "an across voltage of 3 mV lies 2 mV from the 1 mV as designed. One cause alone would explain it: position of t off by 100 nm; or axis off by 4 deg; or d12 off by -8E-10 A m/V^2 (first order)."
            + " With all causes at once it takes 1.7 times the stated tolerances, which is likely enough to be misalignment.",
            Words("hall", "across odd", 1e-3, parts, explain)[^1]);
        Assert.EndsWith("it takes 4 times the stated tolerances.", Words("hall", "across odd", 1e-3, [(PositionT, 0.5e-3)], explain)[^1], StringComparison.Ordinal);
        Assert.EndsWith("it takes 20 times the stated tolerances, so misalignment does not explain it.", Words("hall", "across odd", 1e-3, [(PositionT, 0.1e-3)], explain)[^1], StringComparison.Ordinal);
        Assert.Contains("sharpness off by 5 (first order)", Words("hall", "across odd", 1e-3, [(Sharpness, 0.2e-3)], explain)[^1], StringComparison.Ordinal);
        Assert.Contains("; or a off by 20 µS (first order)", Words("hall", "across odd", 1e-3, [(PositionT, 1e-3), (Conductance, 1e-3)], explain)[^1], StringComparison.Ordinal);
        Assert.Equal("no cause changes the across odd part in first order, so none explains 3 mV.", Words("hall", "across odd", 1e-3, [(Axis, 1e-3)], explain, second: true)[^1]);
    }
}
