using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads where on the rim an edge contact sits.</summary>
/// <param name="sheet">The sheet.</param>
/// <param name="faults">Where to report.</param>
internal sealed class EdgeReader(SheetReading sheet, FaultList faults)
{
    /// <summary>A point given on the edge may miss it by this part of the sheet's size.</summary>
    private const double OffEdge = 1e-3;

    private static readonly string[][] Forms = [["at", "width"], ["from", "to"], ["end"], ["arm", "side"], ["rim"]];

    /// <summary>The stretch of live rim; null if it is faulty, or if the sheet is.</summary>
    /// <param name="edge">The table behind <c>edge</c>; is finished here.</param>
    /// <param name="shift">Metres along the edge, counter-clockwise.</param>
    public RimSpan? Read(Section edge, double shift)
    {
        HashSet<string> present = [.. Forms.SelectMany(f => f).Where(k => edge.Take(k) is not null)];
        string[][] given = [.. Forms.Where(f => f.Any(present.Contains))];
        RimSpan? span = null;
        if (given.Length == 0)
        {
            edge.MissingUnlessMisspelt($"'edge' needs {Allowed()}", [.. Forms.SelectMany(f => f)]);
        }
        else if (given.Length > 1)
        {
            string second = given[1].First(present.Contains), first = given[0].First(present.Contains);
            faults.Add(edge.Take(second)!.At, $"'{first}' and '{second}' cannot stand together; an edge contact takes {Allowed()}");
        }
        else
        {
            span = given[0][0] switch
            {
                "at" => ByAngle(edge),
                "from" => ByPoints(edge),
                "rim" => ByRim(edge, shift),
                "end" => ByEnd(edge),
                _ => ByArm(edge),
            };
        }

        edge.Finish();
        return span is { } s ? Shifted(s, shift) : null;
    }

    /// <summary>The stretch of the live outer rim about an angle.</summary>
    public RimSpan About(double angle, double width)
    {
        double radius = sheet.Live!.Size; // beyond the rim, so that the nearest place is the one at this angle
        return About(sheet.Live.NearestOn(0, new Point2(radius, 0).Turned(angle)), width);
    }

    public RimSpan Shifted(RimSpan span, double shift)
    {
        // Loops have the sheet to their left: the outer one runs counter-clockwise, holes run clockwise.
        double along = span.Loop == 0 ? shift : -shift;
        return span with { From = Outline.Wrapped(span.From + along, sheet.Live!.LoopLength(span.Loop)) };
    }

    private RimSpan About(RimPlace middle, double width) =>
        new(middle.Loop, Outline.Wrapped(middle.S - (width / 2), sheet.Live!.LoopLength(middle.Loop)), width);

    private RimSpan? ByAngle(Section edge)
    {
        TomlEntry? entry = edge.Need("at", "\"180 deg\"");
        double? at = edge.Quantity("at", Dimension.Angle, Range.Angle);
        double? width = edge.Quantity("width", Dimension.Length, Range.Extent, required: true, "0.7 um");
        if (entry is null || sheet.Plan is null)
        {
            return null;
        }

        if (!sheet.Plan.IsRound)
        {
            faults.Add(entry.At, $"'at' is an angle on the rim of a disc or ring; on this sheet an edge contact takes {Allowed()}");
            return null;
        }

        return at is { } a && width is { } w ? About(a, w) : null;
    }

    private RimSpan? ByPoints(Section edge)
    {
        TomlEntry? from = edge.Need("from", "[\"-15 um\", \"-3 um\"]"), to = edge.Need("to", "[\"-15 um\", \"3 um\"]");
        RimPlace? a = OnEdge(from), b = OnEdge(to);
        if (a is not { } start || b is not { } end)
        {
            return null;
        }

        Outline drawn = sheet.Plan!.Drawn, live = sheet.Live!;
        if (start.Loop != end.Loop)
        {
            faults.Add(to!.Value.At, "'from' and 'to' lie on different edges of the sheet, one of them on a hole");
            return null;
        }

        if (Math.Abs(Math.IEEERemainder(end.S - start.S, drawn.LoopLength(start.Loop))) <= drawn.Tolerance)
        {
            faults.Add(to!.Value.At, "'from' and 'to' are the same place of the edge; the contact has no width");
            return null;
        }

        RimSpan span = drawn.Between(start, end);
        return sheet.DeadEdge == 0 ? span : About(live.Nearest(drawn.At(span.Loop, span.From + (span.Length / 2))), span.Length);
    }

    private RimPlace? OnEdge(TomlEntry? entry)
    {
        if (entry is null || Values.Point(entry.Value, $"'{entry.Key}'", faults) is not { } point || sheet.Plan is null)
        {
            return null;
        }

        Outline drawn = sheet.Plan.Drawn;
        RimPlace place = drawn.Nearest(point);
        if (place.Distance <= OffEdge * drawn.Size)
        {
            return place;
        }

        faults.Add(entry.Value.At, $"'{entry.Key}' lies {Values.Length(place.Distance)} off the edge; the nearest point of the edge is {Values.Point(drawn.At(place.Loop, place.S))}");
        return null;
    }

    private RimSpan? ByEnd(Section edge)
    {
        TomlText? name = edge.Text("end", "left", required: true);
        if (name is null || sheet.Plan is not { } plan)
        {
            return null;
        }

        if (plan.Ends.Count == 0)
        {
            faults.Add(edge.Take("end")!.At, $"a {plan.Shape} has no ends; on this sheet an edge contact takes {Allowed()}");
            return null;
        }

        int k = Named(name, "end", [.. plan.Ends.Select(e => e.Name)]);
        return k < 0 ? null : LiveEnd(plan.Ends[k].Middle, name.At, $"the {name.Value} end");
    }

    private RimSpan? ByArm(Section edge)
    {
        TomlEntry? arm = edge.Need("arm", "1");
        double? number = edge.Number("arm", new(1, int.MaxValue, "1 or more"), integer: true);
        TomlText? side = edge.Text("side", "top", required: true);
        int k = side is null ? -1 : Named(side, "side", ["top", "bottom"]);
        if (arm is null || sheet.Plan is not { } plan)
        {
            return null;
        }

        if (plan.Arms.Count == 0)
        {
            faults.Add(arm.At, $"a {plan.Shape} has no arms; on this sheet an edge contact takes {Allowed()}");
            return null;
        }

        if (number > plan.Arms.Count)
        {
            faults.Add(arm.Value.At, $"there is no arm {number:0}; 'arms_at' lists {plan.Arms.Count}");
            return null;
        }

        if (number is null || k < 0)
        {
            return null;
        }

        (Point2 top, Point2 bottom) = plan.Arms[(int)number - 1];
        return LiveEnd(k == 0 ? top : bottom, arm.Value.At, $"arm {number:0}");
    }

    private RimSpan? ByRim(Section edge, double shift)
    {
        TomlText? name = edge.Text("rim", "inner", required: true);
        if (name is null || sheet.Plan is not { } plan)
        {
            return null;
        }

        if (plan.Rims.Count == 0)
        {
            faults.Add(edge.Take("rim")!.At, $"'rim' is for a ring; on this sheet an edge contact takes {Allowed()}");
            return null;
        }

        int k = Named(name, "rim", [.. plan.Rims.Select(r => r.Name)]);
        if (k >= 0 && shift != 0)
        {
            faults.Add(name.At, "a contact round the whole rim cannot be shifted; remove 'shift'");
            return null;
        }

        return k < 0 ? null : new RimSpan(plan.Rims[k].Loop, 0, sheet.Live!.LoopLength(plan.Rims[k].Loop));
    }

    /// <summary>The whole straight piece of live rim in front of the middle of a drawn end.</summary>
    private RimSpan? LiveEnd(Point2 middle, Place at, string what)
    {
        Outline live = sheet.Live!;
        int piece = live.NearestPiece(middle);
        Curve c = live.Pieces[piece];
        if (Point2.Distance(c.At(c.Nearest(middle)), middle) > (sheet.DeadEdge * 1.001) + live.Tolerance)
        {
            faults.Add(at, $"the dead edge leaves nothing of {what}");
            return null;
        }

        return new(live.LoopOf(piece), live.StartOf(piece), c.Length);
    }

    private int Named(TomlText name, string key, string[] names)
    {
        int k = Array.IndexOf(names, name.Value);
        if (k < 0)
        {
            faults.Add(name.At, $"'{key}' is \"{Values.Short(name.Value)}\"; it must be {Suggest.List(names)}");
        }

        return k;
    }

    private string Allowed()
    {
        List<string> forms = [];
        if (sheet.Plan?.IsRound != false)
        {
            forms.Add("{ at, width }");
        }

        if (sheet.Plan?.Ends.Count > 0)
        {
            forms.Add("{ end }");
        }

        if (sheet.Plan?.Arms.Count > 0)
        {
            forms.Add("{ arm, side }");
        }

        if (sheet.Plan?.Rims.Count > 0)
        {
            forms.Add("{ rim }");
        }

        forms.Add("{ from, to }");
        return string.Join(" or ", forms);
    }
}
