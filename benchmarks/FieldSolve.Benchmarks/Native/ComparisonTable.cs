using System.Globalization;

namespace FieldSolve.Benchmarks.Native;

/// <summary>A Markdown table of ratios: ours, the peer's, what is wanted and whether it is met. Every row is printed at once.</summary>
internal sealed class ComparisonTable
{
    private readonly TextWriter to;

    public ComparisonTable(TextWriter to)
    {
        this.to = to;
        to.WriteLine("| on | work | peer | ours | peer's | ratio | wanted | |");
        to.WriteLine("| --- | --- | --- | --- | --- | --- | --- | --- |");
    }

    public static string Text(FormattableString text) => FormattableString.Invariant(text);

    public void Seconds(string on, string work, string peer, double? wanted, double ours, double? peers) =>
        Row(on, work, peer, wanted, ours, peers, s => s < 1 ? Text($"{1e3 * s:G3} ms") : Text($"{s:F2} s"));

    public void Millions(string on, string work, string peer, double? wanted, double ours, double? peers) =>
        Row(on, work, peer, wanted, ours, peers, n => Text($"{1e-6 * n:F2} M"));

    public void Megabytes(string on, string work, string peer, double? wanted, double ours, double? peers) =>
        Row(on, work, peer, wanted, ours, peers, b => Text($"{b / 1048576:F0} MiB"));

    public void Plain(string on, string work, string wanted, string ours) => Line(on, work, "-", ours, "-", "-", wanted, "");

    /// <summary>A number that is judged by itself.</summary>
    public void Number(string on, string work, double? wanted, double ours) =>
        Line(on, work, "-", Text($"{ours:F2}"), "-", "-", Wanted(wanted), Verdict(wanted, ours));

    private void Row(string on, string work, string peer, double? wanted, double ours, double? peers, Func<double, string> text)
    {
        double? ratio = ours / peers;
        Line(
            on, work, peer, text(ours), peers is { } p ? text(p) : "absent", ratio is { } r ? Text($"{r:F2}") : "absent", Wanted(wanted),
            ratio is { } q ? Verdict(wanted, q) : "");
    }

    private static string Wanted(double? wanted) => wanted is { } w ? w.ToString("0.##", CultureInfo.InvariantCulture) : "-";

    private static string Verdict(double? wanted, double found) =>
        wanted is not { } w ? "" : found <= w ? "met" : Text($"missed by {100 * ((found / w) - 1):F0} %");

    private void Line(params string[] cells)
    {
        to.WriteLine("| " + string.Join(" | ", cells) + " |");
        to.Flush();
    }
}
