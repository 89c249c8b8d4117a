namespace FieldSolve.Geometry;

/// <summary>Finds what is wrong with edge contacts along the rim.</summary>
internal static class SpanCheck
{
    /// <summary>A span that can be placed, with its start taken into the loop.</summary>
    public readonly record struct Placed(int Contact, RimSpan Span);

    /// <summary>The spans that can be placed, sorted by loop and start; those that cannot are added to the problems.</summary>
    public static List<Placed> Sound(Outline live, IReadOnlyList<ContactPlacement> contacts, List<PlacementProblem> problems)
    {
        var placed = new List<Placed>();
        for (int c = 0; c < contacts.Count; c++)
        {
            if (contacts[c].Span is not { } span)
            {
                continue;
            }

            if (span.Loop < 0 || span.Loop >= live.Loops.Count || !double.IsFinite(span.From) || !(span.Length > live.Tolerance))
            {
                problems.Add(new(c, -1, -1, PlacementFault.SpanInvalid, live.Pieces[0].Start));
                continue;
            }

            double loop = live.LoopLength(span.Loop), from = Outline.Wrapped(span.From, loop);
            if (!(span.Length <= loop + live.Tolerance))
            {
                problems.Add(new(c, -1, -1, PlacementFault.SpanWiderThanRim, live.At(span.Loop, from + (span.Length / 2))));
                continue;
            }

            placed.Add(new(c, span with { From = from, Length = span.Length >= loop - live.Tolerance ? loop : span.Length }));
        }

        return [.. placed.OrderBy(p => p.Span.Loop).ThenBy(p => p.Span.From).ThenBy(p => p.Contact)];
    }

    /// <summary>Adds every pair of sorted spans that overlap or share an end.</summary>
    public static void AddMeetings(Outline live, List<Placed> sorted, List<PlacementProblem> problems)
    {
        var found = new SortedDictionary<(int, int), (PlacementFault Fault, Point2 At)>();
        for (int first = 0, end; first < sorted.Count; first = end)
        {
            int loop = sorted[first].Span.Loop;
            end = sorted.FindIndex(first, p => p.Span.Loop != loop);
            end = end < 0 ? sorted.Count : end;
            int n = end - first;
            for (int i = 0; i < n; i++)
            {
                (int contact, RimSpan span) = sorted[first + i];
                double stop = span.From + span.Length;
                for (int step = 1; step < n; step++)
                {
                    (int other, RimSpan next) = sorted[first + ((i + step) % n)];
                    double start = next.From + (i + step >= n ? live.LoopLength(loop) : 0);
                    if (start > stop + live.Tolerance)
                    {
                        break;
                    }

                    PlacementFault fault = start < stop - live.Tolerance ? PlacementFault.SpansOverlap : PlacementFault.SpansTouch;
                    (int, int) pair = (Math.Min(contact, other), Math.Max(contact, other));
                    if (fault == PlacementFault.SpansOverlap || !found.ContainsKey(pair))
                    {
                        found[pair] = (fault, live.At(loop, start));
                    }
                }
            }
        }

        problems.AddRange(found.Select(f => new PlacementProblem(f.Key.Item1, -1, f.Key.Item2, f.Value.Fault, f.Value.At)));
    }
}
