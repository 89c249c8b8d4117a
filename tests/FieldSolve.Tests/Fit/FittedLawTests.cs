using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>
/// Numbers of every law and of the device found again: from closed forms where there are any, else from made-up measurements with noise that were solved on another, finer mesh
/// than the fit uses.
/// </summary>
public class FittedLawTests
{
    private const double Degree = Math.PI / 180;
    private static readonly string[] Pairs = ["along", "across", "source"];

    // A bar between resistive ends, the crystal askew, tips on both edges: no field without bound, so that coarse meshes serve.
    private static DeviceText Bar(string law, double left)
    {
        string end(string which, double r) => string.Create(CultureInfo.InvariantCulture, $"edge = {{ end = \"{which}\" }}\nresistance = \"{r:R} ohm m\"");
        return DeviceText.Bar(12e-6, 6e-6, law).Contact("l", end("left", left)).Contact("r", end("right", 4e-4))
            .Tip("p", -2e-6, 3e-6).Tip("q", 2e-6, 3e-6).Tip("s", -2e-6, -3e-6).Wiring("x", "l", "r", "p q", "p s").Drive(3e-4);
    }

    private static MeasuredVoltages Layout(SheetDevice device, double sigma, params double[] currents) => FitDevices.Table(
        device, "wiring,pair,current_A,value_V,sigma_V\n" + string.Concat(Pairs.SelectMany(pair => currents.Select(current =>
            string.Create(CultureInfo.InvariantCulture, $"x,{pair},{current:R},0,{sigma:R}\n")))));

    [Fact]
    public void Saturating_fields()
    {
        static string Law(double a, double b, double fieldA, double fieldB) =>
            DeviceText.Law("saturating", a, b, 25, ("field_a", fieldA, "V/m"), ("field_b", fieldB, "V/m"), ("sharpness", 2, ""));
        SheetDevice truth = FitDevices.Read(Bar(Law(4e-3, 1.6e-3, 1e5, 2.5e5), 4e-4), "a = true");
        SheetDevice device = FitDevices.Read(Bar(Law(3.5e-3, 1.7e-3, 1.3e5, 2.2e5), 4e-4), "a = true\nb = true\nfield_a = true\nfield_b = true");
        FitResult result = FitDevices.Fit(device, FitDevices.Measure(truth, Layout(device, 5e-5, 3e-4, 1e-3, 1.5e-3), 1));
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        result.Near("a", 4e-3, 0.01);
        result.Near("b", 1.6e-3, 0.01);
        result.Near("field_a", 1e5, 0.1);
        result.Near("field_b", 2.5e5, 0.1);
    }

    [Fact]
    public void Second_and_third_order_elements()
    {
        static string Law(double a, double b, double d12, double c11, double c22) => DeviceText.Law(
            "cubic", a, b, 25, ("d12", d12, "A m/V^2"), ("c11", c11, "A m^2/V^3"), ("c22", c22, "A m^2/V^3"), ("field_limit", 3e5, "V/m"));
        SheetDevice truth = FitDevices.Read(Bar(Law(4e-3, 1e-3, 2e-9, -1e-14, 8e-15), 4e-4), "a = true");
        SheetDevice device = FitDevices.Read(Bar(Law(3.5e-3, 1.2e-3, 0, 0, 0), 4e-4), "a = true\nb = true\nd12 = true\nc11 = true\nc22 = true");
        FitResult result = FitDevices.Fit(device, FitDevices.Measure(truth, Layout(device, 1e-5, -6e-4, -3e-4, 3e-4, 6e-4), 2));
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        result.Near("a", 4e-3, 0.01);
        result.Near("b", 1e-3, 0.01);
        result.Near("d12", 2e-9, 0.5);
        result.Near("c11", -1e-14, 0.5);
        result.Near("c22", 8e-15, 0.5);
    }

    // A table holds the same law as numbers on a grid; the measured sheet has the written law. What can be free is where the crystal lies and what the contacts resist.
    [Fact]
    public void Axis_and_contact_resistance_with_a_law_from_a_table()
    {
        using var folder = new EndToEndTests.TempFolder();
        const double a = 4e-3, b = 1e-3, c11 = -1e-15, c22 = 2e-15;
        var table = new StringBuilder("ea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n");
        double[] grid = [.. Enumerable.Range(-12, 25).Select(k => k * 2e4)];
        foreach (double ea in grid)
        {
            foreach (double eb in grid)
            {
                table.Append(CultureInfo.InvariantCulture, $"{ea:R},{eb:R},{(a * ea) + (c11 * ea * ea * ea):R},{(b * eb) + (c22 * eb * eb * eb):R}\n");
            }
        }

        folder.Write("law.csv", table.ToString());
        SheetDevice truth = FitDevices.Read(
            Bar(DeviceText.Law("cubic", a, b, 25, ("c11", c11, "A m^2/V^3"), ("c22", c22, "A m^2/V^3")), 4e-4), "a = true");
        SheetDevice device = FitDevices.Read(
            Bar("[law]\nkind = \"table\"\naxis = \"15 deg\"\nfile = \"law.csv\"\n", 7e-4), "axis = true\n[[fit.contact]]\nname = \"l\"\nresistance = true", folder.Path);
        MeasuredVoltages layout = Layout(device, 2e-5, 1e-4, 3e-4, -3e-4);
        FitResult result = FitDevices.Fit(device, FitDevices.Measure(truth, layout, 3));
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        result.Near("axis", 25 * Degree, 0.002, 1);
        result.Near("l.resistance", 4e-4, 0.05);
        Assert.Empty(LawKeys(device));

        static IEnumerable<string> LawKeys(SheetDevice device) => Laws.LawSensitivity.Parameters(device.Law).Select(p => p.Key);
    }

    // A uniform strip: with the rim out by g and tips where they were, V_along = I d/(a (W + 2g)) and V_source = I (L + 2g)/(a (W + 2g)) between full ends.
    [Fact]
    public void Growth_of_a_strip_by_its_formulas()
    {
        const double a = 2e-3, g = 120e-9, length = 12e-6, width = 6e-6, apart = 4e-6, current = 1e-4;
        DeviceText text = DeviceText.Bar(length, width, DeviceText.Ohmic(1.5e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right")
            .Tip("p", -apart / 2, 1e-6).Tip("q", apart / 2, 1e-6).Wiring("x", "l", "r", "p q").Drive(current);
        SheetDevice device = FitDevices.Read(text, "a = true\ngrowth = true");
        double along = current * apart / (a * (width + (2 * g))), source = current * (length + (2 * g)) / (a * (width + (2 * g)));
        FitResult result = FitDevices.Fit(device, FitDevices.Table(
            device, string.Create(CultureInfo.InvariantCulture, $"wiring,pair,current_A,value_V,sigma_V\nx,along,{current:R},{along:R},1e-6\nx,source,{current:R},{source:R},1e-6\n")));
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        Assert.Equal(g, result.Of("growth").Value!.Value, 1e-4 * g);
        Assert.Equal(a, result.Of("a").Value!.Value, 1e-6 * a);
    }

    // The same strip with line resistance r at both ends: V_source = I (L/(a W) + 2 r/W).
    [Fact]
    public void Contact_resistance_of_a_strip_by_its_formulas()
    {
        const double a = 2e-3, r = 3e-4, length = 12e-6, width = 6e-6, apart = 4e-6, current = 1e-4;
        DeviceText text = DeviceText.Bar(length, width, DeviceText.Ohmic(1.5e-3, 1e-3)).Contact("l", "edge = { end = \"left\" }\nresistance = \"100 ohm um\"")
            .Contact("r", "edge = { end = \"right\" }\nresistance = \"300 ohm um\"").Tip("p", -apart / 2, 1e-6).Tip("q", apart / 2, 1e-6).Wiring("x", "l", "r", "p q").Drive(current);
        SheetDevice device = FitDevices.Read(text, "a = true\n[[fit.contact]]\nname = \"l\"\nresistance = true");
        double along = current * apart / (a * width), source = current * ((length / (a * width)) + (2 * r / width));
        FitResult result = FitDevices.Fit(device, FitDevices.Table(
            device, string.Create(CultureInfo.InvariantCulture, $"wiring,pair,current_A,value_V,sigma_V\nx,along,{current:R},{along:R},1e-6\nx,source,{current:R},{source:R},1e-6\n")));
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        Assert.Equal(r, result.Of("l.resistance").Value!.Value, 1e-5 * r);
        Assert.Equal(a, result.Of("a").Value!.Value, 1e-6 * a);
    }
}
