using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The device with each contact coloured by the share of the variance of the across voltage that its own causes carry.</summary>
internal static class SharePicture
{
    private const int MostPanels = 6, KeySteps = 4;

    // From nearly white to a dark blue that prints black: lightness alone carries the order, so colour-blind readers lose nothing.
    private static readonly Color Least = Color.FromHex("#C9D6E3"), Most = Color.FromHex("#08306B");

    /// <summary>Draws the picture; null when no contact has causes of its own.</summary>
    public static Figure? Draw(ToleranceResult result)
    {
        Wiring[] wirings = [.. result.Device.Wirings.Where(w => Shares(result, w) is not null).Take(MostPanels)];
        if (wirings.Length == 0)
        {
            return null;
        }

        double most = wirings.Max(w => Shares(result, w)!.Max());
        double target = wirings.Length == 1 ? 520 : 380;
        SheetFrame[] panels = [.. wirings.Select(w => Panel(result.Device, w, Shares(result, w)!, most, target))];
        IEnumerable<KeyEntry> key = Enumerable.Range(0, KeySteps + 1)
            .Select(k => new KeyEntry($"{SiScale.Number(100 * most * k / KeySteps, 2)} %", Shade((double)k / KeySteps), 8, null, MarkerShape.None));
        return Figure.Rows([.. panels.Select(p => p.Plot)], wirings.Length == 1 ? 1 : 2, panels[0].Width, panels[0].Height).WithKeyRight([.. key]);
    }

    /// <summary>Share of the variance of the across odd part (of along where nothing is read across) per contact; null when none has causes of its own.</summary>
    public static double[]? Shares(ToleranceResult result, Wiring wiring)
    {
        string pair = wiring.Across is not null ? "across" : wiring.Along is not null ? "along" : "source";
        BudgetEntry[] entries = [.. result.Budget.Where(e => e.Quantity.Wiring == wiring.Name && e.Quantity.Pair == pair && e.Quantity.Part == ReadingPart.Odd && e.Order == 1)];
        double all = entries.Sum(e => e.Contribution * e.Contribution);
        double[] shares = new double[result.Device.Contacts.Count];
        foreach (BudgetEntry e in entries.Where(e => e.Cause.Kind.Scope == CauseScope.Contact))
        {
            shares[e.Cause.Target.Contacts[0]] += e.Contribution * e.Contribution / all;
        }

        return all > 0 && shares.Any(s => s > 0) ? shares : null;
    }

    private static SheetFrame Panel(SheetDevice device, Wiring wiring, double[] shares, double most, double target)
    {
        SheetFrame frame = SheetFrame.Around(device, $"{Look.Short(wiring.Name, 20)}: {SiScale.Number(100 * shares.Sum(), 3)} % of the variance by contacts", false, (0.34, 0.14), target);
        IReadOnlyList<Point2[]> rim = SheetFrame.RimLoops(device.Domain);
        frame.Plot.PlottableList.Add(new SheetFill(rim, frame.Scale.Factor));
        frame.AddLines(rim, Look.Ink, 1.2f);
        List<Point2[]> lines = [.. rim];
        List<NameTag> tags = [];
        for (int k = 0; k < device.Contacts.Count; k++)
        {
            Contact contact = device.Contacts[k];
            Color shade = Shade(shares[k] / most);
            Point2[] points = SheetFrame.Points(contact.Shape);
            if (contact.Kind == ContactKind.Pad)
            {
                frame.Plot.PlottableList.Add(new SheetFill([points], frame.Scale.Factor) { Colour = shade });
                frame.AddContact(contact, Look.Ink, 1);
            }
            else
            {
                // A dark line under the shade keeps a contact without a share in sight.
                frame.AddContact(contact, Look.Ink, 9);
                frame.AddLines([points], shade, 6);
            }

            lines.Add(points);
            string share = shares[k] >= 0.005 ? $" {SiScale.Number(100 * shares[k], 2)} %" : "";
            tags.Add(DevicePicture.TagOf(contact, share, Look.Ink));
        }

        frame.Plot.PlottableList.Add(new Compass(device.Axis));
        frame.Plot.PlottableList.Add(new NameTags(tags, lines, rim, frame.Scale.Factor));
        return frame;
    }

    private static Color Shade(double share)
    {
        double t = Math.Clamp(share, 0, 1);
        byte Mix(byte a, byte b) => (byte)Math.Round(a + (t * (b - a)));
        return new Color(Mix(Least.R, Most.R), Mix(Least.G, Most.G), Mix(Least.B, Most.B));
    }
}
