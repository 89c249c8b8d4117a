using System.Globalization;
using FieldSolve.Cli.Open;
using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sessions;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The page on which layouts are tried, in a real browser, served by the program.</summary>
[Collection(ReportCollection.Name)]
public sealed class LayoutPageTests(ReportFixture shared) : IAsyncLifetime
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

    private readonly string folder = Directory.CreateTempSubdirectory("layout-").FullName;
    private readonly List<string> complaints = [];
    private EditSession session = null!;
    private OpenServer server = null!;
    private IBrowserContext context = null!;

    private string Device => Path.Combine(folder, "device.toml");

    /// <inheritdoc/>
    public async Task InitializeAsync()
    {
        if (Chromium.Missing is not null)
        {
            return;
        }

        await File.WriteAllTextAsync(Device, Text);
        session = EditSession.Open(Device).Session!;
        server = await OpenServer.Start(session, new OpenOptions());
        context = await shared.Window(new() { ViewportSize = new() { Width = 1400, Height = 1000 }, ReducedMotion = ReducedMotion.Reduce });
    }

    /// <inheritdoc/>
    public async Task DisposeAsync()
    {
        if (Chromium.Missing is null)
        {
            await context.DisposeAsync();
            await server.DisposeAsync();
        }

        Directory.Delete(folder, recursive: true);
    }

    private async Task<IPage> Open()
    {
        IPage page = await context.NewPageAsync();
        page.SetDefaultTimeout(120_000);
        page.Console += (_, m) => Complain(m.Type, m.Text);
        page.PageError += (_, m) => Complain("error", m);
        await page.GotoAsync(server.Address);
        await Accurate(page);
        return page;
    }

    // A refused change is an answer of 422, which the browser also writes to its console.
    private void Complain(string kind, string text)
    {
        if (kind is "error" or "warning" && !text.Contains("status of 422", StringComparison.Ordinal))
        {
            complaints.Add($"{kind}: {text}");
        }
    }

    // The accurate answer of the newest layout stands.
    private async Task Accurate(IPage page)
    {
        await page.WaitForFunctionAsync(
            "version => { const a = window.fieldsolve?.app; return a?.answer?.complete && a.answer.version === version && a.state?.version === version && a.badge.dataset.accuracy === 'accurate'; }",
            session.State.Version);
    }

    private static async Task<double> Shown(IPage page, string pair) =>
        double.Parse((await page.GetAttributeAsync($"tr[data-pair='{pair}']", "data-value"))!, CultureInfo.InvariantCulture);

    private static async Task Drag(IPage page, string name, float dx, float dy, int moves)
    {
        LocatorBoundingBoxResult box = (await page.Locator($"[data-contact='{name}'] .grip").BoundingBoxAsync())!;
        (float x, float y) = (box.X + (box.Width / 2), box.Y + (box.Height / 2));
        await page.Mouse.MoveAsync(x, y);
        await page.Mouse.DownAsync();
        await page.Mouse.MoveAsync(x + dx, y + dy, new() { Steps = moves });
        await page.Mouse.UpAsync();
        await page.WaitForFunctionAsync("() => !fieldsolve.app.link.busy && !fieldsolve.app.link.queue.length");
    }

    [BrowserFact]
    public async Task A_drag_of_many_moves_leaves_one_answer_that_of_drive_for_the_saved_file_and_undo_the_same_bytes()
    {
        IPage page = await Open();
        double before = await Shown(page, "across");
        await Drag(page, "c3", -30, 14, 200);
        await Accurate(page);
        Assert.InRange(await page.EvaluateAsync<int>("fieldsolve.app.painted.accurate.length"), 1, 2);
        double after = await Shown(page, "across");
        Assert.NotEqual(before, after);
        await page.Keyboard.PressAsync("Control+s");
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.saved");
        DriveResult drive = DriveRun.Execute(DeviceFile.Read(Device).Device!, new DriveOptions { ForPictures = false }, null, CancellationToken.None);
        Assert.Equal(drive.Rows[^1].Of("across")!.Value, after);

        // What was not touched stayed: comments, order, spacing.
        string saved = await File.ReadAllTextAsync(Device);
        Assert.StartsWith(Text[..Text.IndexOf("[[contacts]]", StringComparison.Ordinal)], saved, StringComparison.Ordinal);
        Assert.EndsWith(Text[Text.IndexOf("[[point]]", StringComparison.Ordinal)..], saved, StringComparison.Ordinal);
        await page.ClickAsync("[data-do='undo']");
        await page.WaitForFunctionAsync("() => !fieldsolve.app.state.canUndo");
        Assert.Equal(Text, session.State.Text.Text);
        await page.Locator("[data-do='save']").ClickAsync();
        await page.WaitForFunctionAsync("() => fieldsolve.app.state.saved");
        Assert.Equal(Text, await File.ReadAllTextAsync(Device));
        Assert.Empty(complaints);
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
        string expected = DeviceFile.Parse(Text.Replace("a = \"4 mS\"", "a = \"4 S/m\"", StringComparison.Ordinal), Device, folder).Faults.Single().Message;
        Assert.Equal(expected, await message.InnerTextAsync());
        Assert.Equal(before, await Shown(page, "across"));
        Assert.Equal(1, session.State.Version);
        await field.FillAsync("3 mS");
        await field.PressAsync("Enter");
        await message.WaitForAsync(new() { State = WaitForSelectorState.Hidden });
        Assert.Equal(3e-3, session.State.Device.Law.AtZeroField.Aa);
        Assert.Empty(complaints);
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
        Assert.Contains("axis = \"21 deg\"   # as measured", session.State.Text.Text, StringComparison.Ordinal);
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
        Assert.EndsWith("# somebody else\n", session.State.Text.Text, StringComparison.Ordinal);
        Assert.Empty(complaints);
    }
}
