namespace FieldSolve.Geometry;

/// <summary>Decides which of the cut stretches of rim and of pads' edges belong to the domain, and what they are.</summary>
internal sealed class SheetEdges
{
    private readonly Outline _live;
    private readonly VertexSet _vertices;
    private readonly List<PadOutline> _pads;
    private readonly List<PlacementProblem> _problems;
    private readonly List<RimPiece> _rim;
    private readonly int[] _contactOf; // of each rim piece: the edge contact there, or -1
    private readonly bool[] _gone; // rim below an ideal pad
    private readonly HashSet<(int Rim, int Pad)> _together = []; // rim that runs along a pad's edge
    private readonly List<int> _padOf = []; // of each pad edge in the sheet
    private readonly bool[] _onSheet; // pads with some area on the sheet
    private readonly SortedDictionary<(int, int), (PlacementFault Fault, Point2 At)> _meetings = [];

    public SheetEdges(
        Outline live, VertexSet vertices, CutRim rim, List<PadOutline> pads, List<SpanCheck.Placed> spans, List<PlacementProblem> problems)
    {
        (_live, _vertices, _pads, _problems) = (live, vertices, pads, problems);
        _rim = rim.Pieces();
        SpanCheck.Placed[][] byLoop = [.. live.Loops.Select((_, i) => spans.Where(p => p.Span.Loop == i).ToArray())];
        _contactOf = [.. _rim.Select(p => ContactAt(byLoop[p.Loop], p))];
        _gone = new bool[_rim.Count];
        _onSheet = new bool[pads.Count];

        List<DomainEdge> padEdges = PadEdges();
        CoverRim();
        AddProblems();
        All = [.. RimEdges(), .. padEdges];
        AddCusps(All.Count - padEdges.Count);
    }

    /// <summary>Rim first, in the order of its loops, then the pads' edges by contact.</summary>
    public List<DomainEdge> All { get; }

    // The contact whose span covers the middle of a piece, or -1. The spans of its loop are sorted and apart.
    private int ContactAt(SpanCheck.Placed[] spans, RimPiece piece)
    {
        double length = _live.LoopLength(piece.Loop), s = Outline.Wrapped(piece.Middle, length);
        int low = 0, high = spans.Length;
        while (low < high)
        {
            int middle = (low + high) / 2;
            (low, high) = spans[middle].Span.From <= s ? (middle + 1, high) : (low, middle);
        }

        if (spans.Length == 0)
        {
            return -1;
        }

        // Before the first start only the last span can reach, across the loop's first point.
        ((int contact, RimSpan span), double turn) = low > 0 ? (spans[low - 1], 0) : (spans[^1], length);
        return s + turn < span.From + span.Length ? contact : -1;
    }

    // Which pads' edges are inside the sheet and which run along its rim.
    private List<DomainEdge> PadEdges()
    {
        var atEnds = new Dictionary<(int, int), List<int>>();
        var contactAt = new Dictionary<int, int>();
        for (int k = 0; k < _rim.Count; k++)
        {
            (int, int) ends = Ends(_rim[k].From, _rim[k].To);
            (atEnds.TryGetValue(ends, out List<int>? list) ? list : atEnds[ends] = []).Add(k);
            if (_contactOf[k] >= 0)
            {
                contactAt[_rim[k].From] = contactAt[_rim[k].To] = _contactOf[k];
            }
        }

        var edges = new List<DomainEdge>();
        for (int i = 0; i < _pads.Count; i++)
        {
            PadOutline pad = _pads[i];
            foreach ((int a, int b) in pad.Pieces())
            {
                if (contactAt.TryGetValue(a, out int touched))
                {
                    Meet(pad.Contact, touched, PlacementFault.PadTouchesContact, _vertices[a]);
                }

                int along = atEnds.GetValueOrDefault(Ends(a, b))?.FindIndex(k => _rim[k].Curve.Bulge() <= _live.Tolerance) ?? -1;
                if (along >= 0)
                {
                    RunTogether(i, atEnds[Ends(a, b)][along], sameWay: _rim[atEnds[Ends(a, b)][along]].From == a);
                }
                else if (_live.SignedDistance(0.5 * (_vertices[a] + _vertices[b])) > 0)
                {
                    _onSheet[i] = true;
                    _padOf.Add(i);
                    edges.Add(pad.IsIdeal
                        ? new(b, a, Curve.Segment(_vertices[b], _vertices[a]), true, pad.Contact)
                        : new(a, b, Curve.Segment(_vertices[a], _vertices[b]), false, -1));
                }
            }
        }

        return edges;
    }

    private void RunTogether(int pad, int rim, bool sameWay)
    {
        PadOutline p = _pads[pad];
        _together.Add((rim, pad));
        _onSheet[pad] |= sameWay;
        _gone[rim] |= sameWay && p.IsIdeal;
        if (_contactOf[rim] >= 0)
        {
            PlacementFault fault = sameWay ? PlacementFault.PadOverlapsContact : PlacementFault.PadTouchesContact;
            Meet(p.Contact, _contactOf[rim], fault, _rim[rim].Curve.At(0.5));
        }
        else if (p.IsIdeal && !sameWay)
        {
            _contactOf[rim] = p.Contact; // metal beside the sheet, against its edge
        }
    }

    // Rim that lies below a pad.
    private void CoverRim()
    {
        var tree = new BoxTree([.. _pads.Select(p => p.Outline.Bounds)]);
        for (int k = 0; k < _rim.Count; k++)
        {
            Point2 middle = _rim[k].Curve.At(0.5);
            foreach (int i in tree.Query(Box.Of(middle)))
            {
                if (!_together.Contains((k, i)) && _pads[i].Outline.SignedDistance(middle) > 0)
                {
                    _onSheet[i] = true;
                    _gone[k] |= _pads[i].IsIdeal;
                    if (_contactOf[k] >= 0 && _contactOf[k] != _pads[i].Contact)
                    {
                        Meet(_pads[i].Contact, _contactOf[k], PlacementFault.PadOverlapsContact, middle);
                    }
                }
            }
        }
    }

    private void AddProblems()
    {
        _problems.AddRange(_meetings.Select(m => new PlacementProblem(m.Key.Item1, -1, m.Key.Item2, m.Value.Fault, m.Value.At)));
        for (int i = 0; i < _pads.Count; i++)
        {
            if (!_onSheet[i])
            {
                _problems.Add(new(_pads[i].Contact, -1, -1, PlacementFault.PadOutside, _pads[i].Corners[0]));
            }
        }
    }

    // Where a pad's side leaves the rim at no angle. Points of the outline itself are the mesher's to refuse.
    private void AddCusps(int firstPadEdge)
    {
        if (_problems.Count > 0)
        {
            return; // edges that cross need not close
        }

        foreach (SheetWedge wedge in SheetWedges.Of(All, _vertices.Count))
        {
            int edge = Math.Max(wedge.First, wedge.Second);
            if (wedge.Angle < SheetWedges.Cusp && edge >= firstPadEdge)
            {
                _problems.Add(new(_pads[_padOf[edge - firstPadEdge]].Contact, -1, -1, PlacementFault.PadLeavesCusp, _vertices[wedge.Vertex]));
            }
        }
    }

    private IEnumerable<DomainEdge> RimEdges() => Enumerable.Range(0, _rim.Count).Where(k => !_gone[k])
        .Select(k => new DomainEdge(_rim[k].From, _rim[k].To, _rim[k].Curve, true, _contactOf[k]));

    private void Meet(int contact, int other, PlacementFault fault, Point2 at)
    {
        (int, int) pair = Ends(contact, other);
        if (!_meetings.TryGetValue(pair, out (PlacementFault Fault, Point2 At) known)
            || (known.Fault == PlacementFault.PadTouchesContact && fault == PlacementFault.PadOverlapsContact))
        {
            _meetings[pair] = (fault, at);
        }
    }

    private static (int, int) Ends(int a, int b) => (Math.Min(a, b), Math.Max(a, b));
}
