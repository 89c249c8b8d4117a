using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>Checks where contacts and tips sit together on the sheet.</summary>
internal static class PlacementReport
{
    /// <summary>Reports every contact and tip that is wrongly placed, leaving out those that are faulty by themselves.</summary>
    public static void Check(SheetReading sheet, ContactReader read, FaultList faults)
    {
        if (sheet.Live is not { } live)
        {
            return;
        }

        ContactDraft[] contacts = [.. read.Contacts.Where(c => c.Placement is not null)];
        TipDraft[] tips = [.. read.Tips.Where(t => t.At is not null)];
        HashSet<Place> reported = [];
        foreach (PlacementProblem p in DomainBuilder.Check(live, [.. contacts.Select(c => c.Placement!)], [.. tips.Select(t => t.At!.Value)]))
        {
            if (p.Tip >= 0)
            {
                TipDraft tip = tips[p.Tip];
                faults.Add(tip.Place, p.Fault == PlacementFault.TipInPad
                    ? $"{Called(tip.Name, "the point")} lies inside {(p.Contact < 0 ? "a pad" : "the pad " + Called(contacts[p.Contact].Name, ""))}, where there is no sheet; use the contact itself in the pair"
                    : $"{Called(tip.Name, "the point")} at {Values.Point(tip.At!.Value)} lies off the {(sheet.DeadEdge > 0 ? "live " : "")}sheet");
                continue;
            }

            // Of two contacts the later one is at fault; one fault for each table is enough to see what is wrong.
            ContactDraft a = contacts[Math.Max(0, p.Contact)];
            ContactDraft? b = p.OtherContact < 0 ? null : contacts[p.OtherContact];
            (ContactDraft at, ContactDraft? other) = b is null || (a.At.Line, a.At.Column).CompareTo((b.At.Line, b.At.Column)) > 0 ? (a, b) : (b, a);
            if (p.Fault == PlacementFault.NothingLeft)
            {
                faults.Add(sheet.At, "ideal pads cover the whole sheet; nothing is left to conduct");
            }
            else if (reported.Add(at.At))
            {
                faults.Add(at.At, Message(p, at, other, live));
            }
        }

        foreach (ContactDraft c in contacts.Where(c => c.Placement!.Pad is not null && !reported.Contains(c.At)))
        {
            if (RimStrip.Of(live, c.Placement!.Pad!, c.Placement.IdealPad) is { Squares: > NarrowStrips.TooMany } strip)
            {
                string words = NarrowStrips.Words(c.Name, strip);
                faults.Add(c.At, $"{char.ToLowerInvariant(words[0])}{words[1..]}, too thin a strip for any mesh; move the side well off the edge, or let the pad reach across it");
            }
        }
    }

    private static string Message(PlacementProblem p, ContactDraft at, ContactDraft? other, Outline live)
    {
        string me = Called(at.Name, "this contact"), it = Called(other?.Name, "another contact");
        string where = $"near {Values.Point(p.At)}";
        return p.Fault switch
        {
            PlacementFault.SpanWiderThanRim => string.Create(
                CultureInfo.InvariantCulture,
                $"{me} is {Values.Length(at.Span!.Value.Length)} wide, more than the {Values.Length(live.LoopLength(at.Span.Value.Loop))} of its rim"),
            PlacementFault.SpanInvalid => $"{me} is too narrow to be told from a point",
            PlacementFault.SpansOverlap or PlacementFault.PadOverlapsPad or PlacementFault.PadOverlapsContact =>
                $"{me} overlaps {it} {where}; contacts must stay clear of each other",
            PlacementFault.SpansTouch or PlacementFault.PadsTouch or PlacementFault.PadTouchesContact =>
                $"{me} touches {it} {where}; leave a gap, or make one contact of the two",
            PlacementFault.PadOutside => $"the pad of {me} lies outside the sheet",
            PlacementFault.PadLeavesCusp =>
                $"a side of the pad of {me} leaves the rim at no angle {where}; move the pad's corner there across the rim, or well inside",
            PlacementFault.PadInvalid => $"the pad of {me} crosses itself or has no area, {where}",
            _ => $"{me} is misplaced {where}",
        };
    }

    private static string Called(string? name, string otherwise) => name is null ? otherwise : $"'{name}'";
}
