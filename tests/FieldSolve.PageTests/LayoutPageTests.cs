using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Readings;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The page on which layouts are tried, in a real browser, served by the program.</summary>
[Collection(ReportCollection.Name)]
public sealed class LayoutPageTests(ReportFixture shared) : LayoutPageBase(shared, LayoutPageTests.Text)
{
    private const string Text = """
        title = '''<img src=x onerror="document.body.dataset.broken='yes'"> & disc'''   # stays as it is
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "quadratic"
        axis = "20 deg"   # as measured
        a = "4 mS"
        b = "1 mS"
        d12 = "4e-10 A m/V^2"
        field_limit = "400 kV/m"
        [[contacts]]
        ring = 6
        width = "0.9 um"
        prefix = "c"
        [[point]]
        name = "tip"
        at = ["0 um", "1 um"]
        [[wiring]]
        name = "0 <b>deg</b>"
        source = "c4"
        drain = "c1"
        along = ["c3", "c2"]
        across = ["c3", "c5"]
        [drive]
        current = { from = "0 uA", to = "200 uA", steps = 3 }
        both_signs = true
        [mesh]
        error = 5e-3
        even_error = 5e-2
        """;

    [BrowserFact]
    public async Task A_drag_of_many_moves_leaves_one_answer_that_of_drive_for_the_saved_file_and_undo_the_same_bytes()
    {
        IPage page = await Open();
        double before = await Shown(page, "across");
        await Drag(page, page.Locator("[data-contact='c3'] .grip"), -30, 14, 200);
        await Accurate(page);

        // Moves that wait for their turn make way for the newest: of 200 at once the first and the last are sent.
        int sent = await page.EvaluateAsync<int>(
            "() => { const { app } = fieldsolve, c = app.state.contacts.find(x => x.name === 'c3'), before = app.link.sent; for (let k = 0; k < 200; k++) { app.stage.act.move('c3', c.middle[0] - k * 1e-9, c.middle[1] - k * 5e-10, 'many'); } return before; }");
        await Settled(page);
        Assert.Equal(sent + 2, await page.EvaluateAsync<int>("fieldsolve.app.link.sent"));
        await Accurate(page);
        double after = await Shown(page, "across");
        Assert.NotEqual(before, after);
        await page.Keyboard.PressAsync("Control+s");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.saved");
        DriveResult drive = DriveRun.Execute(DeviceFile.Read(Device).Device!, new DriveOptions { ForPictures = false }, null, CancellationToken.None);
        Assert.Equal(drive.Rows[^1].Of("across")!.Value, after);

        // As the file of before with "drive --shift c3=…": the length of rim between the two angles. Another mesh, so within both bars.
        SheetDevice was = DeviceFile.Parse(Text, Device, Folder).Device!, now = DeviceFile.Read(Device).Device!;
        Point2 from = was.Contacts[2].Middle, to = now.Contacts[2].Middle;
        double metres = 4e-6 * (Math.Atan2(to.Y, to.X) - Math.Atan2(from.Y, from.X));
        Assert.True(metres > 1e-7, "The contact hardly moved.");
        SheetDevice shifted = CauseText.Apply(was, [string.Create(CultureInfo.InvariantCulture, $"c3={metres * 1e9:R}nm")]).Device!;
        Reading reference = DriveRun.Execute(shifted, new DriveOptions { ForPictures = false }, null, CancellationToken.None).Rows[^1].Of("across")!;
        Assert.InRange(Math.Abs(reference.Value - after), 0, reference.Error + await Shown(page, "across", "error"));
        Assert.True(Math.Abs(after - before) > 5 * reference.Error, "The change is too small to tell.");

        // What was not touched stayed: comments, order, spacing.
        string saved = await File.ReadAllTextAsync(Device);
        Assert.StartsWith(Text[..Text.IndexOf("[[contacts]]", StringComparison.Ordinal)], saved, StringComparison.Ordinal);
        Assert.EndsWith(Text[Text.IndexOf("[[point]]", StringComparison.Ordinal)..], saved, StringComparison.Ordinal);
        for (int k = 0; k < 2; k++)
        {
            await page.ClickAsync("[data-do='undo']");
            await Settled(page);
        }

        await page.WaitForFunctionAsync("() => !fieldsolve.app.state.canUndo");
        Assert.Equal(Text, Session.State.Text.Text);
        await page.Locator("[data-do='save']").ClickAsync();
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.saved");
        Assert.Equal(Text, await File.ReadAllTextAsync(Device));
        Assert.Empty(Complaints);
    }

    [BrowserFact]
    public async Task A_bad_number_shows_its_message_beside_the_field_and_keeps_the_answer()
    {
        IPage page = await Open();
        double before = await Shown(page, "across");
        ILocator field = page.Locator("[data-path='law.a']");
        await field.FillAsync("4 S/m");
        await field.PressAsync("Enter");
        ILocator message = page.Locator(".field:has([data-path='law.a']) .field-message");
        await message.WaitForAsync();
        string expected = DeviceFile.Parse(Text.Replace("a = \"4 mS\"", "a = \"4 S/m\"", StringComparison.Ordinal), Device, Folder).Faults.Single().Message;
        Assert.Equal(expected, await message.InnerTextAsync());
        Assert.Equal(before, await Shown(page, "across"));
        Assert.Equal(1, Session.State.Version);
        await field.FillAsync("3 mS");
        await field.PressAsync("Enter");
        await message.WaitForAsync(new() { State = WaitForSelectorState.Hidden });
        Assert.Equal(3e-3, Session.State.Device.Law.AtZeroField.Aa);
        Assert.Empty(Complaints);
    }

    [BrowserFact]
    public async Task Two_pages_follow_each_other_the_keys_move_contacts_and_axis_and_the_title_stays_text()
    {
        IPage one = await Open(), two = await Open();
        Assert.Equal("<img src=x onerror=\"document.body.dataset.broken='yes'\"> & disc", await one.InnerTextAsync("h1"));
        Assert.Null(await one.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        await one.Locator("[data-contact='tip']").FocusAsync();
        await one.Keyboard.PressAsync("ArrowRight");
        await one.Keyboard.PressAsync("ArrowRight");
        await two.WaitForFunctionAsync("() => fieldsolve.app.state.contacts.find(c => c.name === 'tip').middle[0] > 3e-8");
        Assert.Equal("tip", await one.EvaluateAsync<string>("document.activeElement.dataset.contact"));
        await two.Locator(".axis-handle").FocusAsync();
        await two.Keyboard.PressAsync("ArrowLeft");
        await one.WaitForFunctionAsync("() => fieldsolve.app.state.axis === 21");
        Assert.Contains("axis = \"21 deg\"   # as measured", Session.State.Text.Text, StringComparison.Ordinal);
        await Accurate(one);
        await Accurate(two);
        Assert.Equal(await Shown(one, "across"), await Shown(two, "across"));

        // Pinned, then changed: the difference stands beside the reading.
        double before = await Shown(one, "across");
        await one.ClickAsync("[data-do='pin']");
        await two.ClickAsync("[data-do='undo']");
        await one.WaitForFunctionAsync("() => fieldsolve.app.state.axis === 20");
        await Accurate(one);
        Assert.NotEqual(before, await Shown(one, "across"));
        Assert.StartsWith("Δ", await one.InnerTextAsync("tr[data-pair='across'] .change"), StringComparison.Ordinal);

        // Somebody else writes the file: both are told, and a save does not replace it.
        await File.AppendAllTextAsync(Device, "\n# somebody else\n");
        await one.ClickAsync("[data-do='take']");
        await two.WaitForFunctionAsync("() => !fieldsolve.app.state.changedOnDisk");
        Assert.EndsWith("# somebody else\n", Session.State.Text.Text, StringComparison.Ordinal);
        Assert.Empty(Complaints);
    }
}
