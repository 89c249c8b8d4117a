using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Measured;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Turning;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>A small drive with its report, and the browser; made once for all tests.</summary>
public sealed class ReportFixture : IAsyncLifetime
{
    /// <summary>What the title tries.</summary>
    public const string Title = "<img src=x onerror=\"document.body.dataset.broken='yes'\"> & disc";

    private const string Text = """
        title = '''<img src=x onerror="document.body.dataset.broken='yes'"> & disc'''
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "quadratic"
        axis = "20 deg"
        a = "4 mS"
        b = "1 mS"
        hall = "0.3 mS"
        d12 = "4e-10 A m/V^2"
        d26 = "2e-10 A m/V^2"
        field_limit = "400 kV/m"
        [[contacts]]
        ring = 6
        width = "0.9 um"
        prefix = "c"
        [[wiring]]
        name = "0 <b>deg</b>"
        source = "c4"
        drain = "c1"
        along = ["c3", "c2"]
        across = ["c3", "c5"]
        [[wiring]]
        name = "60 deg"
        source = "c5"
        drain = "c2"
        along = ["c4", "c3"]
        across = ["c4", "c6"]
        [drive]
        current = { from = "0 uA", to = "200 uA", steps = 5 }
        both_signs = true
        [mesh]
        error = 2e-3
        even_error = 2e-2
        """;

    private readonly string folder = Directory.CreateTempSubdirectory("page-").FullName;
    private IPlaywright? playwright;
    private IBrowser? browser;
    private OpenReport? shared;

    private (TurnResult Result, string Path)? ring, axis;
    private (LockinResult Result, string Path)? lockin;
    private (ToleranceResult Result, string Path)? tolerance;
    private (FitResult Result, string Path)? fit;

    internal DriveResult Result { get; private set; } = null!;

    internal string Path { get; private set; } = "";

    /// <summary>Another place for files.</summary>
    internal string Other(string name) => System.IO.Path.Combine(folder, name);

    /// <inheritdoc/>
    public async Task InitializeAsync()
    {
        if (Chromium.Missing is not null)
        {
            return;
        }

        string device = Other("device.toml");
        await File.WriteAllTextAsync(device, Text);
        DeviceReading reading = DeviceFile.Read(device);
        Result = DriveRun.Execute(reading.Device ?? throw new InvalidDataException(string.Join('\n', reading.Faults)), new(), null, CancellationToken.None);
        Path = Other("report.html");
        Write(Path);
        playwright = await Playwright.CreateAsync();
        browser = await playwright.Chromium.LaunchAsync(new()
        {
            ExecutablePath = Chromium.Program,
            Headless = true,
            Args = ["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync"],
        });
    }

    /// <inheritdoc/>
    public async Task DisposeAsync()
    {
        if (browser is not null)
        {
            await browser.DisposeAsync();
        }

        playwright?.Dispose();
        Directory.Delete(folder, recursive: true);
    }

    /// <summary>A window of its own, with the network.</summary>
    internal Task<IBrowserContext> Window(BrowserNewContextOptions options) => browser!.NewContextAsync(options);

    internal void Write(string path) => ReportPage.Write(Result, DrivePictures.Write(Result, Other("pictures"), CancellationToken.None), path);

    /// <summary>The same disc with its wiring stepped round the ring, made when first asked for.</summary>
    internal (TurnResult Result, string Path) Ring => ring ??= Turned("ring", 0);

    /// <summary>The same disc with its crystal turned.</summary>
    internal (TurnResult Result, string Path) Axis => axis ??= Turned("axis", 6);

    /// <summary>The same disc driven with AC.</summary>
    internal (LockinResult Result, string Path) Lockin
    {
        get
        {
            if (lockin is null)
            {
                SheetDevice device = Read("lockin.toml", Text.Replace("from = \"0 uA\"", "from = \"50 uA\"", StringComparison.Ordinal).Replace("steps = 5", "steps = 3", StringComparison.Ordinal)
                    .Replace("both_signs = true", "", StringComparison.Ordinal));
                lockin = (LockinRun.Execute(device, new(), null, CancellationToken.None), Other("lockin.html"));
                WriteLockin(lockin.Value.Path);
            }

            return lockin.Value;
        }
    }

    /// <summary>The same disc with a few causes of error and a few sampled devices.</summary>
    internal (ToleranceResult Result, string Path) Tolerance
    {
        get
        {
            if (tolerance is null)
            {
                SheetDevice device = Read("tolerance.toml", Text.Replace("steps = 5", "steps = 3", StringComparison.Ordinal)
                    + "\n[tolerance]\naxis = \"1 deg\"\na = \"0.05 mS\"\n[tolerance.contacts]\nposition = \"50 nm\"\n");
                ToleranceResult result = ToleranceRun.Execute(device, new() { Samples = 32 }, null, null, CancellationToken.None);
                tolerance = (result, Other("tolerance.html"));
                WriteTolerance(tolerance.Value.Path);
            }

            return tolerance.Value;
        }
    }

    /// <summary>Three numbers of the law from the drive's own voltages, a few of them shaken by hand.</summary>
    internal (FitResult Result, string Path) Fit
    {
        get
        {
            if (fit is null)
            {
                SheetDevice device = Read("fit.toml", Text.Replace("a = \"4 mS\"", "a = \"3.8 mS\"", StringComparison.Ordinal) + "\n[fit]\na = { interval = true }\nb = true\naxis = true\nnumerical_share = 0.5\n");
                System.Text.StringBuilder data = new("wiring,pair,current_A,value_V,sigma_V\n");
                int number = 0;
                foreach (CurveRow row in Result.Rows.Concat(Result.ReversedRows).Where(r => r.Current != 0 && Math.Abs(r.Current) != 5e-5))
                {
                    foreach (string pair in (string[])["along", "across"])
                    {
                        double value = row.Of(pair)!.Value, sigma = 1e-5 + (1e-3 * Math.Abs(value));
                        data.Append(System.Globalization.CultureInfo.InvariantCulture, $"{row.Wiring},{pair},{row.Current:R},{value + (sigma * Math.Sin(2.4 * ++number)):R},{sigma:R}\n");
                    }
                }

                File.WriteAllText(Other("fit.csv"), data.ToString());
                (MeasuredVoltages? measured, IReadOnlyList<Fault> faults) = VoltageTable.Read(Other("fit.csv"), device, null);
                FitResult result = FitRun.Execute(device, measured ?? throw new InvalidDataException(string.Join('\n', faults)), new(), null, CancellationToken.None);
                fit = (result, Other("fit.html"));
                WriteFit(fit.Value.Path);
            }

            return fit.Value;
        }
    }

    internal void WriteFit(string path) => FitReport.Write(fit!.Value.Result, FitPictures.Write(fit.Value.Result, Other("pictures-of-fit"), CancellationToken.None), path);

    /// <summary>Path of a report by its kind.</summary>
    internal string PathOf(string kind) => kind switch
    {
        "drive" => Path,
        "ring" => Ring.Path,
        "axis" => Axis.Path,
        "lockin" => Lockin.Path,
        "tolerance" => Tolerance.Path,
        _ => Fit.Path,
    };

    internal void WriteTolerance(string path) => ToleranceReport.Write(
        tolerance!.Value.Result, TolerancePictures.Write(tolerance.Value.Result, Other("pictures-of-tolerance"), CancellationToken.None), path);

    internal void WriteTurn((TurnResult Result, string Path) turn, string path) =>
        TurnReport.Write(turn.Result, TurnPictures.Write(turn.Result, Other("pictures-of-turn"), CancellationToken.None), path);

    internal void WriteLockin(string path) =>
        LockinReport.Write(lockin!.Value.Result, LockinPictures.Write(lockin.Value.Result, Other("pictures-of-lockin"), CancellationToken.None), path);

    private (TurnResult Result, string Path) Turned(string name, int steps)
    {
        SheetDevice device = Read(name + ".toml", Text.Replace("steps = 5", "steps = 3", StringComparison.Ordinal) + (steps == 0 ? "\n[turn]\naround = \"c\"\n" : ""));
        TurnResult result = TurnRun.Execute(device, new() { AxisSteps = steps, Ratios = steps == 0 ? [1, 4] : [] }, null, CancellationToken.None);
        (TurnResult, string) turn = (result, Other(name + ".html"));
        WriteTurn(turn, turn.Item2);
        return turn;
    }

    // Coarser than the drive: what is tested is the page.
    private SheetDevice Read(string name, string text)
    {
        File.WriteAllText(Other(name), text.Replace("error = 2e-3", "error = 5e-3", StringComparison.Ordinal).Replace("even_error = 2e-2", "even_error = 1e-1", StringComparison.Ordinal));
        DeviceReading reading = DeviceFile.Read(Other(name));
        return reading.Device ?? throw new InvalidDataException(string.Join('\n', reading.Faults));
    }

    /// <summary>An open report for tests that only ask its script; never changed.</summary>
    internal async Task<IPage> Shared() => (shared ??= await Open()).Page;

    /// <summary>Opens the report and waits for its live parts; every request, error and message is kept.</summary>
    internal async Task<OpenReport> Open(string draw = "", BrowserNewContextOptions? options = null, string? path = null)
    {
        options ??= new() { ViewportSize = new() { Width = 1200, Height = 1000 } };
        options.ReducedMotion = ReducedMotion.Reduce;
        IBrowserContext context = await browser!.NewContextAsync(options);
        await context.SetOfflineAsync(true);
        IPage page = await context.NewPageAsync();
        page.SetDefaultTimeout(120_000);
        var report = new OpenReport(page);
        await page.GotoAsync(new Uri(path ?? Path).AbsoluteUri + (draw.Length > 0 ? "#draw=" + draw : ""));
        if (options.JavaScriptEnabled != false)
        {
            await page.WaitForFunctionAsync("() => document.documentElement.dataset.ready === 'yes'");
        }

        return report;
    }
}

/// <summary>An open page.</summary>
internal sealed class OpenReport : IAsyncDisposable
{
    public OpenReport(IPage page)
    {
        Page = page;
        page.Console += (_, m) => Complain(m.Type, m.Text);
        page.PageError += (_, m) => Complain("error", m);
        page.Request += (_, r) => Requests.Add(r.Url);
    }

    public IPage Page { get; }

    public List<string> Requests { get; } = [];

    public List<string> Complaints { get; } = [];

    public async ValueTask DisposeAsync() => await Page.Context.DisposeAsync();

    // The graphics driver in software grumbles about speed, and so does a canvas whose pixels a test reads; that is no fault of the page.
    private void Complain(string kind, string text)
    {
        if (kind is "error" or "warning" && !text.Contains("GL Driver Message", StringComparison.Ordinal) && !text.Contains("Canvas2D: Multiple readback", StringComparison.Ordinal))
        {
            Complaints.Add($"{kind}: {text}");
        }
    }
}

/// <summary>Shares the report and the browser.</summary>
[CollectionDefinition(Name)]
public class ReportCollection : ICollectionFixture<ReportFixture>
{
    /// <summary>Name of the collection.</summary>
    public const string Name = "one browser";
}
