using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>Four-terminal resistances alone.</summary>
public class FourTerminalTests
{
    // A rectangle with contacts at its corners: H. C. Montgomery, J. Appl. Phys. 42, 2971 (1971); B. F. Logan, S. O. Rice, R. F. Wick, J. Appl. Phys. 42, 2975 (1971).
    // R2/R1 and the side ratio L2/L1 of the equivalent isotropic rectangle, here a square whose ratio is that of sqrt(rho_y/rho_x); numbers from the exact series in
    // multi-precision arithmetic. The sheet resistance for R1 = 1, R2 = ratio is that of the f factor (see VanDerPauwFormulaTests). The contacts here are short stretches at the
    // corners; a point a distance d away from a corner changes a reading by the order of d² (the map near a right angle is a square), 1e-3 for the hundredth of the side used.
    [Theory]
    [InlineData(2, 1.115752502267, 6.52850260527)]
    [InlineData(5, 1.286510165745, 11.1721102749)]
    [InlineData(10, 1.42802900693, 17.4311262605)]
    [InlineData(100, 1.958995786848, 92.4346510544)]
    [InlineData(1000, 2.553409270221, 598.192629441)]
    public void Rectangle_with_corner_contacts_gives_sheet_resistance_and_anisotropy(double ratio, double sides, double sheet)
    {
        const double h = 0.5e-3, w = 0.01e-3;
        DeviceText text = DeviceText.Bar(2 * h, 2 * h, DeviceText.Ohmic(0.1, 0.1))
            .Stretch("a", -h, -h, -h + w, -h).Stretch("b", h - w, -h, h, -h).Stretch("c", h, h, h - w, h).Stretch("d", -h + w, h, -h, h).Wiring("ab", "a", "b").Drive(1e-3);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true");

        // R1: current along x at the lower edge, voltage at the upper one; the sign is that of source less drain side.
        MeasuredVoltages data = FitDevices.Resistances(device, 1e-3, 1e-6, ("a b d c", 1), ("b c a d", ratio));
        FitResult result = FitDevices.Fit(device, data);
        double a = result.Of("a").Value!.Value, b = result.Of("b").Value!.Value;
        Assert.True(result.AllOk);
        Assert.Equal(sides, Math.Sqrt(a / b), 2e-3 * sides);
        Assert.Equal(sheet, 1 / Math.Sqrt(a * b), 2e-3 * sheet);
        FormulaValue formula = result.Formulas.Single(f => f.Method == "van der Pauw");
        Assert.Equal(sheet, formula.Value, 1e-9 * sheet);
    }

    // Four equal arcs of half angle 5° at 0, 90, 180, 270°: R_AB,CD = 0.220026921546 Rs exactly (two elliptic integrals, W. Versnel, Solid-State Electron. 22, 911 (1979);
    // value in multi-precision arithmetic). By symmetry both readings are equal for any a and b along x and y, so that van der Pauw's theorem leaves only sqrt(a b).
    [Fact]
    public void Says_in_words_that_a_symmetric_disc_knows_only_the_mean()
    {
        const double exact = 0.220026921546;
        DeviceText text = DeviceText.Disc(1e-6, DeviceText.Ohmic(0.7e-3, 0.7e-3)).Arc("e", 0, 5, 1e-6).Arc("n", 90, 5, 1e-6).Arc("w", 180, 5, 1e-6).Arc("s", 270, 5, 1e-6)
            .Wiring("en", "e", "n").Drive(1e-5);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true");
        MeasuredVoltages data = FitDevices.Resistances(device, 1e-5, 1e-7, ("e n s w", 1000 * exact), ("n w e s", 1000 * exact));
        FitResult result = FitDevices.Fit(device, data, new FitOptions { Suggest = 2 });
        Assert.All(result.Parameters, p => Assert.Null(p.Value));
        FitDirection open = Assert.Single(result.Directions, d => !d.Determined);
        Assert.Contains("only sqrt(a b) is determined", open.Words, StringComparison.Ordinal);
        Assert.Contains(result.Warnings, w => w.Contains("sqrt(a b)", StringComparison.Ordinal));

        // Its value is there all the same; contact sizes are in the model, so it is the true one and not van der Pauw's.
        Assert.Equal(1e-3, Math.Sqrt(result.Of("a").Ended * result.Of("b").Ended), 1e-6);
        Assert.Equal(-0.002758750655, (result.Formulas.Single(f => f.Method == "van der Pauw").Value / 1000) - 1, 1e-5);

        // Two more readings cannot help: by the symmetry every reading between neighbours is the same. The diagonal one reads nothing.
        Assert.All(result.Next, n => Assert.NotEqual(n.Plus, n.Minus));
    }

    // With the axis free too. A first-order change of the conductance of a disc between points on its rim: dR = -(1/s²) integral of grad u . dS grad w, u and w the fields of the
    // source pair and of the probe pair for s = 1. With f(z) = -(1/pi) [1/(z - source) - 1/(z - drain)] for E = conj(f), dS = diag(1, -1) gives Re f g and dS = offdiag(1, 1) gives -Im f g; an
    // analytic function integrates to pi times its value at the centre (mean value property), f(0) g(0) = (1/source - 1/drain)(1/plus - 1/minus)/pi². Contacts at 0, 90, 180, 270°:
    // ±2i for the two van der Pauw resistances, so an anisotropy along a contact changes neither and one at 45° changes both, in opposite ways, by 2/(pi s) for a part dS = s.
    [Theory]
    [InlineData(0)]
    [InlineData(20)]
    [InlineData(45)]
    public void Isotropic_disc_has_no_axis_and_only_one_part_of_its_anisotropy_is_known(double axis)
    {
        const double s = 1e-3, current = 1e-5;
        DeviceText text = DeviceText.Disc(0.5e-3, DeviceText.Ohmic(s, s, 0, axis)).Contacts(4, 1.15, 0.5e-3).Wiring("one", "c1", "c2", "c4 c3").Drive(current);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true\nhall = true\naxis = true");
        MeasuredVoltages data = FitDevices.Resistances(device, current, 1e-6, ("c1 c2 c4 c3", 220.6356), ("c2 c3 c1 c4", 220.6356), ("c1 c3 c2 c4", 5));
        var problem = new FitProblem(device, device.Fit!.Parameters, data, data.Data);
        int a = problem.Parameters.ToList().FindIndex(p => p.Key == "a"), b = problem.Parameters.ToList().FindIndex(p => p.Key == "b");
        double[,] jacobian = new FitModel(problem, FitDevices.Coarse(problem, problem.Start), new double[3]).Jacobian(problem.Start, default);

        // (a - b)/2 changes by s. A contact of half angle 0.02 is nearly a point.
        double expected = 2 / (Math.PI * s) * current * Math.Sin(2 * axis * Math.PI / 180);
        Assert.Equal(expected, s * (jacobian[0, a] - jacobian[0, b]), 2e-3 * current / s);
        Assert.Equal(-expected, s * (jacobian[1, a] - jacobian[1, b]), 2e-3 * current / s);

        FitResult result = FitDevices.Fit(device, data);
        string all = string.Join("; ", result.Directions.Select(d => $"{d.SingularValue} {string.Join(' ', d.Direction)} {d.Words}"));
        Assert.True(result.Of("a").Value is null && result.Of("b").Value is null && result.Of("axis").Value is null, all);
        Assert.True(result.Of("hall").Value is not null, all);
        Assert.Equal(1e-3, Math.Sqrt(result.Of("a").Ended * result.Of("b").Ended), 1e-6);
        Assert.Contains("axis is not determined by these data", result.Directions.Select(d => d.Words));
        Assert.Contains(
            result.Warnings, w => w.Contains("only sqrt(a b) is determined by these data; isotropic or not, with its axis along 0 or 90 deg the sheet gives the same", StringComparison.Ordinal));
    }

    // With an axis that is known the same contacts tell a from b unless it lies along a contact.
    [Theory]
    [InlineData(0, false)]
    [InlineData(45, true)]
    public void Known_axis_decides_whether_a_symmetric_disc_tells_a_from_b(double axis, bool told)
    {
        DeviceText text = DeviceText.Disc(0.5e-3, DeviceText.Ohmic(1e-3, 1e-3, 0, axis)).Contacts(4, 1.15, 0.5e-3).Wiring("one", "c1", "c2", "c4 c3").Drive(1e-5);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true\nhall = true");
        MeasuredVoltages data = FitDevices.Resistances(device, 1e-5, 1e-6, ("c1 c2 c4 c3", 220.6356), ("c2 c3 c1 c4", 220.6356), ("c1 c3 c2 c4", 5));
        FitResult result = FitDevices.Fit(device, data);
        Assert.Equal(told, result.Of("a").Value is not null);
        Assert.Equal(told, result.Of("b").Value is not null);
        Assert.NotNull(result.Of("hall").Value);
        if (told)
        {
            Assert.Equal(1e-3, result.Of("a").Value!.Value, 2e-6);
        }
    }

    // Six contacts know both parts: a and b have numbers, the axis has none as they are equal. R = ln[|13| |24| / (|14| |23|)]/(pi s) for points on the rim of a disc (L. J. van der Pauw,
    // Philips Res. Rep. 13, 1 (1958)); with chords of sqrt 3, 2 and 1 radii ln(3/2)/(pi s).
    [Fact]
    public void Isotropic_disc_with_six_contacts_knows_a_and_b_but_no_axis()
    {
        DeviceText text = DeviceText.Disc(0.5e-3, DeviceText.Ohmic(1.05e-3, 0.97e-3, 0, 10)).Contacts(6, 1.15, 0.5e-3).Wiring("one", "c1", "c2", "c4 c3").Drive(1e-5);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true\naxis = true");
        MeasuredVoltages same = FitDevices.Resistances(
            device, 1e-5, 1e-6, [.. Enumerable.Range(1, 6).Select(k => ($"c{k} c{(k % 6) + 1} c{((k + 2) % 6) + 1} c{((k + 1) % 6) + 1}", 1000 / Math.PI * Math.Log(1.5)))]);
        FitResult result = FitDevices.Fit(device, same);
        Assert.Equal(1e-3, result.Of("a").Value!.Value, 3e-6);
        Assert.Equal(1e-3, result.Of("b").Value!.Value, 3e-6);
        Assert.Null(result.Of("axis").Value);
    }

    [Fact]
    public void Names_a_number_that_no_reading_depends_on()
    {
        // Current along x between full ends: b plays no part.
        DeviceText text = DeviceText.Bar(30e-6, 6e-6, DeviceText.Ohmic(1e-3, 2e-3)).Whole("l", "end", "left").Whole("r", "end", "right")
            .Tip("p", -5e-6, 0).Tip("q", 5e-6, 0).Wiring("x", "l", "r", "p q").Drive(1e-5);
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true");
        FitResult result = FitDevices.Fit(device, FitDevices.Table(device, "wiring,pair,current_A,value_V,sigma_V\nx,along,1e-5,0.02,1e-6\n"));
        Assert.Equal(1e-5 * 10e-6 / (6e-6 * 0.02), result.Of("a").Value!.Value, 1e-9);
        Assert.Null(result.Of("b").Value);
        Assert.Equal("b is not determined by these data", result.Directions[^1].Words);

        // b carries no field along x, so the formulas of a strip, which need both, have nothing to say either.
        Assert.Empty(result.Formulas);
    }
}
