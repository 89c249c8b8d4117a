using FieldSolve.Pictures;
using SkiaSharp;

namespace FieldSolve.Tests.PicturesTests;

public class TagPlacementTests
{
    private static readonly SKRect Frame = new(0, 0, 400, 300);

    [Fact]
    public void Names_of_crowded_points_cover_neither_one_another_nor_lines_nor_the_frame()
    {
        SKPoint[] line = [new(0, 150), new(400, 150)];
        TagPlacement placement = new(Frame, [line], _ => false);
        List<SKRect> boxes = [];
        for (int k = 0; k < 12; k++)
        {
            (SKRect box, SKPoint? anchor) = placement.Place(new(60, 15), [(new(200 + (6 * k), 140), default)], [], false);
            Assert.NotNull(anchor);
            Assert.True(Frame.Contains(box));
            Assert.True(box.Bottom < 150 || box.Top > 150, $"{box} crosses the line");
            Assert.All(boxes, b => Assert.False(b.IntersectsWith(box), $"{b} and {box} overlap"));
            boxes.Add(box);
        }
    }

    [Fact]
    public void A_name_goes_straight_out_when_nothing_is_in_the_way_and_off_the_sheet_when_asked()
    {
        TagPlacement placement = new(Frame, [], p => p.X < 200);
        (SKRect right, _) = placement.Place(new(40, 15), [(new(200, 150), new(1, 0))], [], true);
        Assert.Equal(208, right.Left, 0.01);
        Assert.Equal(150, right.MidY, 0.01);
        (SKRect other, _) = placement.Place(new(40, 15), [(new(195, 60), default)], [], true);
        Assert.True(other.MidX > 200);
    }

    [Fact]
    public void A_name_stands_in_its_own_outline_only_when_it_fits()
    {
        SKPoint[] wide = [new(100, 100), new(200, 100), new(200, 140), new(100, 140)], narrow = [new(100, 200), new(120, 200), new(120, 240), new(100, 240)];
        TagPlacement placement = new(Frame, [], _ => false);
        (SKRect inside, SKPoint? none) = placement.Place(new(40, 15), [(new(200, 120), new(1, 0))], wide, true);
        Assert.Null(none);
        Assert.Equal(new SKPoint(150, 120), new SKPoint(inside.MidX, inside.MidY));
        (SKRect outside, SKPoint? anchor) = placement.Place(new(40, 15), [(new(120, 220), new(1, 0))], narrow, true);
        Assert.NotNull(anchor);
        Assert.True(outside.Left > 120);
    }
}
