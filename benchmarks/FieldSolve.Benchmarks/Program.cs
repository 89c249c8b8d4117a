using BenchmarkDotNet.Configs;
using BenchmarkDotNet.Exporters;
using BenchmarkDotNet.Jobs;
using BenchmarkDotNet.Running;
using BenchmarkDotNet.Toolchains.InProcess.Emit;

// "accuracy" prints benchmarks/accuracy.md instead of timing anything.
if (args is ["accuracy"])
{
    FieldSolve.Benchmarks.AccuracyTables.Print(Console.Out);
    return;
}

// "page" times the report: written, shown, and following the slider in a browser.
if (args is ["page"])
{
    await FieldSolve.Benchmarks.PageTimes.Print(Console.Out);
    return;
}

// "layout" times the answers of the layout page; a second word is the number of moves for the look at memory, "browser" for the times in the browser alone, or "bars" for the bars of the coarse answers.
if (args is ["layout", "bars"])
{
    FieldSolve.Benchmarks.CoarseAnswers.Print(Console.Out);
    return;
}

if (args is ["layout", "browser"])
{
    await FieldSolve.Benchmarks.LayoutPageTimes.Print(Console.Out);
    return;
}

if (args is ["layout", ..])
{
    int drags = args.Length > 1 ? int.Parse(args[1], System.Globalization.CultureInfo.InvariantCulture) : 0;
    FieldSolve.Benchmarks.LayoutTimes.Print(Console.Out, drags);
    await FieldSolve.Benchmarks.LayoutPageTimes.Print(Console.Out);
    return;
}

// "native" compares with SuiteSparse where it is installed; a second word is the largest number of unknowns.
if (args is ["native", ..])
{
    int most = args.Length > 1 ? int.Parse(args[1], System.Globalization.CultureInfo.InvariantCulture) : 1_000_000;
    FieldSolve.Benchmarks.Native.NativeComparison.Print(Console.Out, most);
    return;
}

// What "native" starts for the libraries' side.
if (args is ["peer", _, _])
{
    FieldSolve.Benchmarks.Native.PeerProcess.Serve(args[1], int.Parse(args[2], System.Globalization.CultureInfo.InvariantCulture), Console.Out);
    return;
}

// Short runs inside this process: a whole round takes a few minutes. "--filter *Mesher*" picks one question, "--list flat" shows them all.
ManualConfig config = ManualConfig.Create(DefaultConfig.Instance)
    .AddJob(Job.ShortRun.WithToolchain(InProcessEmitToolchain.Instance))
    .AddExporter(MarkdownExporter.GitHub);
BenchmarkSwitcher.FromAssembly(typeof(FieldSolve.Benchmarks.Sample).Assembly).Run(args.Length == 0 ? ["--filter", "*"] : args, config);
