using System.Buffers.Binary;
using System.Globalization;
using System.IO.Compression;
using System.Text;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Readings;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>Corners of an outline, and one traced on a micrograph, in a real browser.</summary>
[Collection(ReportCollection.Name)]
public sealed class OutlinePageTests(ReportFixture shared) : LayoutPageBase(shared, OutlinePageTests.Text)
{
    private const string Outline = """{"type":"Polygon","coordinates":[[[-6,-2],[6,-2],[6,2],[0,2.6],[-6,2],[-6,-2]]]}""";

    private const string Text = """
        [sheet]
        outline = { file = "sheet.geojson", unit = "um" }   # from a drawing
        [law]
        kind = "ohmic"
        a = "1 mS"
        b = "1 mS"
        [[contact]]
        name = "left"
        edge = { from = ["-6 um", "-1 um"], to = ["-6 um", "1 um"] }
        [[contact]]
        name = "right"
        edge = { from = ["6 um", "-1 um"], to = ["6 um", "1 um"] }
        [[point]]
        name = "p"
        at = ["-2 um", "1 um"]
        [[point]]
        name = "q"
        at = ["2 um", "1 um"]
        [[wiring]]
        name = "bar"
        source = "left"
        drain = "right"
        along = ["p", "q"]
        [drive]
        current = { from = "0 uA", to = "100 uA", steps = 2 }
        [mesh]
        error = 2e-3
        """;

    private protected override void Prepare() => File.WriteAllText(Path.Combine(Folder, "sheet.geojson"), Outline);

    private static Reading Along(SheetDevice device) =>
        DriveRun.Execute(device, new DriveOptions { ForPictures = false }, null, CancellationToken.None).Rows[^1].Of("along")!;

    [BrowserFact]
    public async Task A_corner_is_dragged_and_moved_by_the_keys_contacts_follow_their_edge_and_a_saved_layout_comes_back()
    {
        IPage page = await Open();
        double before = await Shown(page, "along");
        await page.ClickAsync("[data-tool='corner']");
        await Drag(page, page.Locator("[data-corner='0:3']"), 0, -30, 20);
        await Accurate(page);
        double after = await Shown(page, "along");
        Assert.Contains("sheet.geojson stays as it is", await page.InnerTextAsync(".hint-line"), StringComparison.Ordinal);

        // The same as a file with that corner: another mesh, so within both bars. A wider sheet between the tips reads less.
        Point2 corner = Session.State.Device.Drawn[0][3].Start;
        Assert.InRange(corner.Y, 2.9e-6, 4e-6);
        File.WriteAllText(Path.Combine(Folder, "moved.geojson"), Outline.Replace("[0,2.6]", string.Create(CultureInfo.InvariantCulture, $"[{corner.X * 1e6:R},{corner.Y * 1e6:R}]"), StringComparison.Ordinal));
        Reading drawn = Along(DeviceFile.Parse(Text.Replace("sheet.geojson", "moved.geojson", StringComparison.Ordinal), Device, Folder).Device!);
        Assert.InRange(Math.Abs(drawn.Value - after), 0, drawn.Error + await Shown(page, "along", "error"));
        Assert.True(before - after > 5 * drawn.Error, "The change is too small to tell.");

        // By the keys: the left edge is tilted, and its contact keeps its share of the edge, from a quarter to three quarters.
        await page.FocusAsync("[data-corner='0:4']");
        for (int k = 0; k < 8; k++)
        {
            await page.Keyboard.PressAsync("ArrowLeft");
        }

        await Settled(page);
        Point2 upper = Session.State.Device.Drawn[0][4].Start, lower = Session.State.Device.Drawn[0][0].Start;
        Assert.InRange(upper.X, -6.5e-6, -6.1e-6);
        Contact left = Session.State.Device.Contacts[0];
        Assert.Equal(0, Point2.Distance(left.Middle, 0.5 * (upper + lower)), 2e-9);
        Assert.Equal(0.5 * Point2.Distance(upper, lower), left.Width, 4e-9);

        // A corner more, and one less.
        await page.FocusAsync("[data-corner='0:1']");
        await page.Keyboard.PressAsync("Insert");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.outline.loops[0].points.length === 12");
        await page.FocusAsync("[data-corner='0:4']");
        await page.Keyboard.PressAsync("Delete");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.outline.loops[0].points.length === 10");
        Assert.Equal("", await page.InnerTextAsync(".live > .fault-line"));

        // A corner across the other side makes no sheet: the message of the command line, and the outline stays.
        string good = Session.State.Text.Text;
        await page.FocusAsync("[data-corner='0:1']");
        ILocator field = page.Locator("details[data-table='corner'] input").First;
        await field.FillAsync("-30 um");
        await field.PressAsync("Enter");
        await page.WaitForFunctionAsync("() => [...document.querySelectorAll('.field-message, .fault-line')].some(n => !n.hidden && n.textContent.includes('outline'))");
        Assert.Equal(good, Session.State.Text.Text);

        await page.Keyboard.PressAsync("Control+s");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.saved");
        Assert.Equal(good, await File.ReadAllTextAsync(Device));
        Assert.Equal(Outline, await File.ReadAllTextAsync(Path.Combine(Folder, "sheet.geojson")));
        await Accurate(page);
        double saved = await Shown(page, "along");
        await page.ReloadAsync();
        await Accurate(page);
        Assert.Equal(saved, await Shown(page, "along"));
        Assert.Equal(Along(DeviceFile.Read(Device).Device!).Value, saved);
        while (await page.EvaluateAsync<bool>("fieldsolve.app.state.canUndo"))
        {
            await page.ClickAsync("[data-do='undo']");
            await Settled(page);
        }

        Assert.Equal(Text, Session.State.Text.Text);
        Assert.Empty(Complaints);
    }

    [BrowserFact]
    public async Task A_large_micrograph_is_drawn_from_smaller_copies_and_a_faulty_one_leaves_it_there()
    {
        IPage page = await Open();
        await page.ClickAsync(".picture-box summary");
        await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = "wide.png", MimeType = "image/png", Buffer = Png(6000, 900) });
        await page.WaitForFunctionAsync("() => fieldsolve.app.stage.picture.there");
        Assert.Equal<IEnumerable<int>>([6000, 3000, 1500], await page.EvaluateAsync<int[]>("fieldsolve.app.stage.picture.levels.map(l => l.width)"));

        // Where a place of the picture is seen: as the picture has it, on the whole sheet and ten times larger, turned or not. Its left third is dark, the rest bright.
        const string Seen = """
            ([turn, zoom]) => {
                const s = fieldsolve.app.stage, p = s.picture;
                p.angle = turn;
                s.whole();
                s.zoomBy(zoom, ...s.toScreen(...p.toPlace(2000, 450)));
                s.drawNow();
                return [1980, 2020].map(i => {
                    const [u, v] = s.toScreen(...p.toPlace(2000 + (i - 2000) * 3 / zoom, 450));
                    return p.frame.getContext('2d').getImageData(Math.round(u - s.margin.left), Math.round(v - s.margin.top), 1, 1).data[0];
                });
            }
            """;
        foreach (double[] view in new double[][] { [0, 1], [0, 10], [30, 1], [30, 10] })
        {
            Assert.Equal<IEnumerable<int>>([40, 200], await page.EvaluateAsync<int[]>(Seen, view));
        }

        await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = "half.png", MimeType = "image/png", Buffer = Png(300, 200)[..200] });
        await page.WaitForFunctionAsync("() => document.querySelector('.picture-box .fault-line').textContent.startsWith('half.png')");
        Assert.Equal("wide.png, 6000 × 900 pixels", await page.InnerTextAsync(".picture-box .bar .soft"));
        Assert.Empty(Complaints);
    }

    // A grey picture, its left third dark (ISO/IEC 15948: chunks with CRC-32, rows behind a filter byte, deflated as in RFC 1950).
    private static byte[] Png(int width, int height)
    {
        byte[] head = [0, 0, 0, 0, 0, 0, 0, 0, 8, 0, 0, 0, 0], row = new byte[width + 1];
        BinaryPrimitives.WriteInt32BigEndian(head, width);
        BinaryPrimitives.WriteInt32BigEndian(head.AsSpan(4), height);
        row.AsSpan(1, width / 3).Fill(40);
        row.AsSpan(1 + (width / 3)).Fill(200);
        using MemoryStream rows = new(), png = new();
        using (ZLibStream pack = new(rows, CompressionLevel.Fastest, leaveOpen: true))
        {
            for (int k = 0; k < height; k++)
            {
                pack.Write(row);
            }
        }

        png.Write([0x89, 0x50, 0x4E, 0x47, 0x0D, 0x0A, 0x1A, 0x0A]);
        foreach ((string name, byte[] data) in new[] { ("IHDR", head), ("IDAT", rows.ToArray()), ("IEND", []) })
        {
            byte[] chunk = [.. Encoding.ASCII.GetBytes(name), .. data];
            byte[] number = new byte[4];
            BinaryPrimitives.WriteInt32BigEndian(number, data.Length);
            png.Write(number);
            png.Write(chunk);
            BinaryPrimitives.WriteUInt32BigEndian(number, Crc(chunk));
            png.Write(number);
        }

        return png.ToArray();
    }

    private static uint Crc(byte[] data)
    {
        uint crc = uint.MaxValue;
        foreach (byte b in data)
        {
            crc ^= b;
            for (int k = 0; k < 8; k++)
            {
                crc = (crc & 1) != 0 ? 0xEDB88320 ^ (crc >> 1) : crc >> 1;
            }
        }

        return ~crc;
    }

    [BrowserFact]
    public async Task An_outline_and_pads_traced_on_a_micrograph_are_saved_read_back_and_used()
    {
        IPage page = await Open();
        await page.ClickAsync(".picture-box summary");

        // 200 megapixels by its header alone (ISO/IEC 15948: signature, IHDR with width and height); there is nothing to decode.
        byte[] huge = [0x89, 0x50, 0x4E, 0x47, 0x0D, 0x0A, 0x1A, 0x0A, 0, 0, 0, 13, 0x49, 0x48, 0x44, 0x52, 0, 0, 0, 0, 0, 0, 0, 0, 8, 2, 0, 0, 0, 0, 0, 0, 0];
        BinaryPrimitives.WriteInt32BigEndian(huge.AsSpan(16), 20000);
        BinaryPrimitives.WriteInt32BigEndian(huge.AsSpan(20), 10000);
        await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = "huge.png", MimeType = "image/png", Buffer = huge });
        await page.WaitForFunctionAsync("() => !document.querySelector('.picture-box .fault-line').hidden");
        Assert.Equal("huge.png has 200 megapixels (20000 × 10000); up to 50 are taken, so make it smaller first", await page.InnerTextAsync(".picture-box .fault-line"));

        // A text under such a name, and the start of a picture.
        foreach ((string name, byte[] content, string words) in new[]
        {
            ("notes.png", "nothing to see"u8.ToArray(), "notes.png: it is neither PNG nor JPEG; a PNG or JPEG is wanted"),
            ("half.png", Png(300, 200)[..200], "half.png cannot be decoded; is it whole?"),
        })
        {
            await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = name, MimeType = "image/png", Buffer = content });
            await page.WaitForFunctionAsync("words => document.querySelector('.picture-box .fault-line').textContent === words", words);
            Assert.False(await page.EvaluateAsync<bool>("fieldsolve.app.stage.picture.there"));
        }

        // 400 by 200 pixels; the two marks are 300 pixels or 9 um apart.
        string made = await page.EvaluateAsync<string>("() => { const c = document.createElement('canvas'); c.width = 400; c.height = 200; c.getContext('2d').fillRect(40, 30, 320, 140); return c.toDataURL('image/jpeg'); }");
        await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = "flake.jpg", MimeType = "image/jpeg", Buffer = Convert.FromBase64String(made.Split(',')[1]) });
        await page.WaitForFunctionAsync("() => fieldsolve.app.stage.picture.there && document.querySelector('.picture-box .fault-line').hidden");
        async Task Click(double i, double j)
        {
            await page.EvaluateAsync("document.querySelector('.layout-stage').scrollIntoView()");
            double[] at = await page.EvaluateAsync<double[]>("([i, j]) => { const s = fieldsolve.app.stage, b = s.stage.getBoundingClientRect(), p = s.toScreen(...s.picture.toPlace(i, j)); return [b.left + p[0], b.top + p[1]]; }", new[] { i, j });
            await page.Mouse.ClickAsync((float)at[0], (float)at[1]);
        }

        await page.ClickAsync("[data-tool='measure']");
        await Click(50, 100);
        await Click(350, 100);
        ILocator distance = page.Locator("[data-do='distance']");
        await distance.FillAsync("9 kg");
        await distance.PressAsync("Enter");
        Assert.StartsWith("\"9 kg\" is no length", await page.InnerTextAsync(".field:has([data-do='distance']) .field-message"), StringComparison.Ordinal);
        await distance.FillAsync("9 um");
        await distance.PressAsync("Enter");
        Assert.Matches("^30(\\.0[0-9]*|)? nm$|^29\\.9[0-9]* nm$", await page.InputValueAsync("[data-do='pixel']"));

        // Without snapping (Alt), but the first corner ends each polygon.
        (double I, double J)[] rim = [(60, 50), (340, 40), (350, 160), (60, 150)];
        await page.ClickAsync("[data-trace='outline']");
        await page.Keyboard.DownAsync("Alt");
        foreach ((double i, double j) in rim)
        {
            await Click(i, j);
        }

        await page.Keyboard.UpAsync("Alt");
        await Click(rim[0].I, rim[0].J);
        // The right side of the second lies on the traced rim, and is set across it.
        foreach ((double i, double top, double bottom) in new[] { (70.0, 100.0, 100.0), (300.0, 343 + (1.0 / 3), 346 + (2.0 / 3)) })
        {
            await page.ClickAsync("[data-trace='pad']");
            foreach ((double x, double y) in new[] { (i, 80.0), (top, 80.0), (bottom, 120.0), (i, 120.0) })
            {
                await Click(x, y);
            }

            await page.ClickAsync("[data-do='trace-close']");
        }

        await page.Locator(".trace-list input").Nth(0).FillAsync("left");
        await page.Locator(".trace-list input").Nth(1).FillAsync("right");
        await page.Locator(".trace-list input").Nth(1).PressAsync("Enter");
        double[] wanted = await page.EvaluateAsync<double[]>(
            "rim => rim.flatMap((v, k) => k % 2 ? [] : fieldsolve.app.stage.picture.toPlace(v, rim[k + 1]))", rim.SelectMany(r => new[] { r.I, r.J }).ToArray());
        double pixel = await page.EvaluateAsync<double>("1 / (fieldsolve.app.stage.fit * fieldsolve.app.stage.zoom)");
        await page.FillAsync("[data-do='trace-name']", "../traced.geojson");
        await page.ClickAsync("[data-do='trace-save']");
        await page.WaitForFunctionAsync("() => !document.querySelector('.picture-box .fault-line').hidden");
        Assert.StartsWith("the name must be a plain file name that ends in .geojson", await page.InnerTextAsync(".picture-box .fault-line"), StringComparison.Ordinal);
        Assert.Equal(2, Directory.GetFiles(Folder).Length);
        await page.FillAsync("[data-do='trace-name']", "traced.geojson");
        await page.ClickAsync("[data-do='trace-save']");
        await page.ClickAsync("[data-do='trace-use']");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.outline?.file === 'traced.geojson'");

        // Back from the file: the corners lie where was clicked, to a pixel of the screen, whatever their direction; the pads took the places of the contacts.
        SheetDevice device = Session.State.Device;
        Assert.Equal(4, device.Drawn[0].Count);
        Assert.All(wanted.Chunk(2), w => Assert.InRange(device.Drawn[0].Min(c => Point2.Distance(c.Start, new Point2(w[0], w[1]))), 0, pixel));
        Assert.Equal(["left", "right"], device.Contacts.Select(c => c.Name));
        Assert.Equal(2, device.Layout.Contacts[1].Pad!.Count(p => !device.Layout.Live.Contains(p)));
        Assert.All(device.Contacts, c => Assert.Equal(ContactKind.Pad, c.Kind));
        Assert.Equal(30e-9 * Math.Sqrt(30 * 40), device.Contacts[0].Width, 2 * pixel);
        Assert.Matches(new Regex("outline = \\{ file = \"traced.geojson\", unit = \"um\" \\}   # from a drawing"), Session.State.Text.Text);
        await Accurate(page);
        Assert.Equal(Along(device).Value, await Shown(page, "along"));

        // The tab keeps the trace when the page is loaded anew, and where the picture was.
        double before = await page.EvaluateAsync<double>("fieldsolve.app.stage.picture.pixel");
        string traced = await page.EvaluateAsync<string>("JSON.stringify(fieldsolve.app.stage.trace.request)");
        await page.ReloadAsync();
        await page.WaitForFunctionAsync("() => window.fieldsolve?.app.stage.trace.shapes.length === 3");
        Assert.Equal(traced, await page.EvaluateAsync<string>("JSON.stringify(fieldsolve.app.stage.trace.request)"));
        Assert.Equal("traced.geojson", await page.InputValueAsync("[data-do='trace-name']"));
        Assert.True(await page.IsEnabledAsync("[data-do='trace-use']"));
        await page.SetInputFilesAsync("[data-do='picture-file']", new FilePayload { Name = "flake.jpg", MimeType = "image/jpeg", Buffer = Convert.FromBase64String(made.Split(',')[1]) });
        await page.WaitForFunctionAsync("() => fieldsolve.app.stage.picture.there");
        Assert.Equal(before, await page.EvaluateAsync<double>("fieldsolve.app.stage.picture.pixel"));
        for (int left = 3; left > 0; left--)
        {
            await page.Locator(".trace-list button").First.ClickAsync();
        }

        await page.ReloadAsync();
        await Accurate(page);
        Assert.Equal(0, await page.EvaluateAsync<int>("fieldsolve.app.stage.trace.shapes.length"));
        Assert.Empty(Complaints);
    }
}
