using System.Text.Json;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The shares of one reading.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Quantity">What is read.</param>
/// <param name="Roles">Roles of the contacts.</param>
/// <param name="Share">Share of the variance per contact, 0 to 1.</param>
/// <param name="Words">What makes it up.</param>
/// <param name="Rest">What all contacts carry together, and what the rest comes from.</param>
internal sealed record ShareView(string Wiring, string Quantity, IReadOnlyList<string> Roles, double[] Share, string[] Words, string Rest);

/// <summary>The device with each contact coloured by the share of a reading's variance that its own causes carry.</summary>
internal sealed class LiveShare
{
    private const int MostNamed = 3;

    private readonly SheetDevice device;

    private LiveShare(SheetDevice device, IReadOnlyList<ShareView> views) => (this.device, Views) = (device, views);

    /// <summary>By wiring, across first.</summary>
    public IReadOnlyList<ShareView> Views { get; }

    /// <summary>The shares of all readings; null when no contact has causes of its own.</summary>
    public static LiveShare? Of(ToleranceResult result)
    {
        SheetDevice device = result.Device;
        List<ShareView> views = [];
        foreach (Wiring wiring in device.Wirings)
        {
            IReadOnlyList<string> roles = LiveDevice.Roles(device, wiring);
            foreach (ToleranceQuantity q in result.Quantities.Where(q => q.Wiring == wiring.Name).OrderBy(q => q.IsRatio ? 1 : q.Pair switch { "across" => 0, "along" => 2, _ => 3 }))
            {
                BudgetEntry[] entries = [.. result.Budget.Where(e => e.Quantity == q && e.Order == 1)];
                double all = entries.Sum(e => e.Contribution * e.Contribution);
                BudgetEntry[][] own = [.. device.Contacts.Select((_, k) => entries.Where(e => e.Cause.Kind.Scope == CauseScope.Contact && e.Cause.Target.Contacts[0] == k && e.Contribution != 0).ToArray())];
                double[] share = [.. own.Select(c => all > 0 ? c.Sum(e => e.Contribution * e.Contribution) / all : 0)];
                if (share.Any(s => s > 0))
                {
                    views.Add(new(wiring.Name, q.Label, roles, share, [.. own.Select((c, k) => Words(q, c))], Rest(entries, all, share)));
                }
            }
        }

        return views.Count == 0 ? null : new(device, views);
    }

    /// <summary>Writes it as the page reads it.</summary>
    public void Write(Utf8JsonWriter w)
    {
        w.WriteStartObject("share");
        w.WriteString("title", "Which contact matters");
        w.WriteString("note", "Contributions of one standard deviation each, first order, squared and over their sum. Point at a contact, or go from one to the next with the arrow keys.");
        w.WriteNumber("axis", device.Axis);
        LiveData.WriteOutline(w, LiveDevice.Rim(device), [.. LiveDevice.Contacts(device, device.Wirings[0]).Take(device.Contacts.Count)]);
        LiveData.Array(w, "views", Views, (w, v) =>
        {
            w.WriteString("wiring", v.Wiring);
            w.WriteString("quantity", v.Quantity);
            LiveData.Words(w, "roles", v.Roles.Take(device.Contacts.Count));
            LiveData.Numbers(w, "share", v.Share);
            LiveData.Words(w, "words", v.Words);
            w.WriteString("rest", v.Rest);
        });
        w.WriteEndObject();
    }

    private static string Words(ToleranceQuantity q, BudgetEntry[] own)
    {
        string Text(double v) => q.IsRatio ? SiScale.Number(Math.Abs(v), 3) : SiScale.Text(Math.Abs(v), "V", 3);
        return own.Length == 0 ? "None of its causes moves this reading."
            : $"One standard deviation moves the reading by {Text(Math.Sqrt(own.Sum(e => e.Contribution * e.Contribution)))} (" + string.Join(", ", own.Take(MostNamed).Select(e => $"{e.Cause.Kind.Key} {Text(e.Contribution)}")) + ").";
    }

    private static string Rest(BudgetEntry[] entries, double all, double[] share)
    {
        string[] others = [.. entries.Where(e => e.Cause.Kind.Scope != CauseScope.Contact && e.Contribution != 0).Take(MostNamed)
            .Select(e => $"{e.Cause.Label} {SiScale.Number(100 * e.Contribution * e.Contribution / all, 3)} %")];
        return $"All contacts together carry {SiScale.Number(100 * share.Sum(), 3)} % of the variance" + (others.Length > 0 ? $"; the largest of the rest: {string.Join(", ", others)}." : ".");
    }
}
