using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>What [sheet] says.</summary>
internal sealed class SheetReading
{
    /// <summary>Null if the shape is faulty; contacts then cannot be placed.</summary>
    public SheetPlan? Plan { get; init; }

    /// <summary>The rim without the dead edge; null if there is none.</summary>
    public Outline? Live { get; init; }

    public double DeadEdge { get; init; }

    public double? Thickness { get; init; }

    public double? MeanFreePath { get; init; }

    public double? GateCapacitance { get; init; }

    /// <summary>Where the shape stands.</summary>
    public Place At { get; init; }
}

/// <summary>Reads [sheet].</summary>
internal static class SheetReader
{
    public static SheetReading Read(Section root, FileSource files)
    {
        if (root.Header("sheet") is not { } sheet)
        {
            if (root.Table.Find("sheet") is null)
            {
                root.MissingUnlessMisspelt("the file has no [sheet], which says what the sheet is, for example disc = { diameter = \"8 um\" }", "sheet");
            }

            return new SheetReading();
        }

        (SheetPlan? plan, Place at) = Shape(sheet, files);
        double? thickness = sheet.Quantity("thickness", Dimension.Length, Range.Extent, example: "12 nm");
        double? deadEdge = sheet.Quantity("dead_edge", Dimension.Length, Range.Margin, example: "50 nm");
        double? path = sheet.Quantity("mean_free_path", Dimension.Length, Range.Extent, example: "100 nm");
        double? gate = sheet.Quantity("gate_capacitance", Dimension.CapacitancePerArea, Range.NonNegative);
        sheet.Finish();

        Outline? live = plan?.Drawn;
        if (plan is not null && deadEdge > 0)
        {
            try
            {
                live = plan.Drawn.Inset(deadEdge.Value);
            }
            catch (LayoutException e)
            {
                sheet.Faults.Add(sheet.Table.Find("dead_edge")!.Value.At, $"'dead_edge': {e.Message}; make it narrower");
                (plan, live) = (null, null);
            }
        }
        else if (deadEdge is null && sheet.Table.Find("dead_edge") is not null)
        {
            (plan, live) = (null, null);
        }

        return new SheetReading
        {
            Plan = plan,
            Live = live,
            DeadEdge = deadEdge ?? 0,
            Thickness = thickness,
            MeanFreePath = path,
            GateCapacitance = gate,
            At = at,
        };
    }

    private static (SheetPlan? Plan, Place At) Shape(Section sheet, FileSource files)
    {
        SheetPlan? plan = null;
        TomlEntry? first = null;
        bool several = false;
        foreach (ISheetShape shape in ShapeCatalogue.Shapes.Where(s => sheet.Take(s.Key) is not null)
            .OrderBy(s => sheet.Take(s.Key)!.At.Line).ThenBy(s => sheet.Take(s.Key)!.At.Column))
        {
            TomlEntry entry = sheet.Take(shape.Key)!;
            if (first is not null)
            {
                sheet.Faults.Add(entry.At, $"a sheet has one shape, and '{first.Key}' stands already; remove one of them");
                several = true;
            }

            first ??= entry;
            if (sheet.Inner(shape.Key, shape.Example) is { } keys)
            {
                plan = shape.Read(keys, files);
                keys.Finish();
            }
        }

        if (first is null)
        {
            string[] names = [.. ShapeCatalogue.Shapes.Select(s => s.Key)];
            ISheetShape shape = ShapeCatalogue.Shapes[0];
            sheet.MissingUnlessMisspelt($"[sheet] needs one of {Suggest.List(names)}, for example {shape.Key} = {shape.Example}", names);
        }

        return (several ? null : plan, first?.Value.At ?? sheet.At);
    }
}
