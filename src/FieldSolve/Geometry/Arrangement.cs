namespace FieldSolve.Geometry;

/// <summary>
/// The sheet, its contacts and tips cut at each other's vertices: finds what is wrong with the placements and yields the domain.
/// </summary>
/// <remarks>
/// Everything nearer than a billionth of the sheet's size is first made to coincide (pad corners and tips move onto the rim,
/// close vertices become one, an edge that passes a vertex is cut there); only then are the remaining crossings computed. What is
/// left between two vertices lies wholly inside or outside everything else, so its middle decides, or it is the same stretch.
/// </remarks>
internal sealed class Arrangement
{
    private readonly Outline _live;
    private readonly IReadOnlyList<ContactPlacement> _contacts;
    private readonly List<PlacementProblem> _problems = [];
    private readonly VertexSet _vertices;
    private readonly CutRim _rim;
    private readonly List<PadOutline> _pads = [];
    private readonly int[] _tips;
    private readonly List<DomainEdge> _edges;

    public Arrangement(Outline live, IReadOnlyList<ContactPlacement> contacts, IReadOnlyList<Point2> tips)
    {
        _live = live;
        _contacts = contacts;
        _vertices = new(live.Tolerance, new(live.Bounds.X0, live.Bounds.Y0));
        _rim = new(live, _vertices);

        List<SpanCheck.Placed> spans = SpanCheck.Sound(live, contacts, _problems);
        SpanCheck.AddMeetings(live, spans, _problems);
        foreach (RimSpan span in spans.Select(s => s.Span).Where(s => s.Length < live.LoopLength(s.Loop)))
        {
            CutAt(span.Loop, span.From);
            CutAt(span.Loop, span.From + span.Length);
        }

        PlacePads();
        PadCheck.AddMeetings([.. _pads.Select(p => (p.Contact, p.Outline))], live.Tolerance, _problems);
        _tips = PlaceTips(tips); // before the crossings: a pad's edge along the rim must be cut where a tip cuts the rim
        foreach (PadOutline pad in _pads)
        {
            CrossRim(pad);
        }

        _edges = new SheetEdges(live, _vertices, _rim, _pads, spans, _problems).All;
        if (_edges.Count == 0)
        {
            int pad = _pads.Find(p => p.IsIdeal)?.Contact ?? 0;
            _problems.Add(new(pad, -1, -1, PlacementFault.NothingLeft, live.Pieces[0].Start));
        }

        AddTipsBetweenPadAndRim(tips);
    }

    /// <summary>Contacts before tips, by index.</summary>
    public IReadOnlyList<PlacementProblem> Problems =>
        [.. _problems.OrderBy(p => p.Contact < 0).ThenBy(p => p.Contact).ThenBy(p => p.Tip).ThenBy(p => p.OtherContact).ThenBy(p => p.Fault)];

    /// <summary>The domain, with the vertices in use alone. Only without problems.</summary>
    public Domain Domain()
    {
        var used = new bool[_vertices.Count];
        foreach (DomainEdge e in _edges)
        {
            used[e.From] = used[e.To] = true;
        }

        foreach (int tip in _tips)
        {
            used[tip] = true;
        }

        var number = new int[used.Length];
        var points = new List<Point2>();
        for (int v = 0; v < used.Length; v++)
        {
            number[v] = points.Count;
            if (used[v])
            {
                points.Add(_vertices[v]);
            }
        }

        return new(
            points,
            [.. _edges.Select(e => e with { From = number[e.From], To = number[e.To] })],
            [.. _pads.Where(p => !p.IsIdeal).Select(p => new DomainRegion(p.Contact, p.Corners))],
            [.. _tips.Select(t => number[t])]);
    }

    // A tip on the edge of an ideal pad where that edge is not in the sheet but runs along rim that the pad covers.
    private void AddTipsBetweenPadAndRim(IReadOnlyList<Point2> tips)
    {
        HashSet<int> used = [.. _edges.SelectMany(e => new[] { e.From, e.To })];
        for (int i = 0; i < tips.Count; i++)
        {
            if (_tips[i] >= 0 && !used.Contains(_tips[i])
                && _pads.Find(p => p.IsIdeal && p.Outline.SignedDistance(tips[i]) >= -_live.Tolerance) is { } metal)
            {
                _problems.Add(new(-1, i, metal.Contact, PlacementFault.TipInPad, tips[i]));
            }
        }
    }

    private void CutAt(int loop, double s)
    {
        (int piece, double t) = _live.PieceAt(loop, s);
        _rim.Cut(piece, t);
    }

    private void PlacePads()
    {
        for (int c = 0; c < _contacts.Count; c++)
        {
            if (_contacts[c].Pad is not { } given)
            {
                continue;
            }

            int[]? corners = null;
            if (PadCheck.IsSound(given, _live.Tolerance, out Point2 at))
            {
                IEnumerable<Point2> turned = Outline.SignedArea(OutlinePolygons.Segments(given)) < 0 ? given.Reverse() : given;
                int[] all = [.. turned.Select(p => OnRim(p) ?? _vertices.Add(p))];
                corners = [.. all.Where((v, i) => v != all[(i + all.Length - 1) % all.Length])];
            }

            if (corners is { Length: >= 3 })
            {
                _pads.Add(new(c, _contacts[c].IdealPad, corners, _vertices));
            }
            else
            {
                _problems.Add(new(c, -1, -1, PlacementFault.PadInvalid, at));
            }
        }
    }

    // The vertex of a point that lies on the rim, made if need be; null for other points.
    private int? OnRim(Point2 p)
    {
        int piece = _live.NearestPiece(p);
        double t = _live.Pieces[piece].NearestParameter(p);
        return Point2.Distance(_live.Pieces[piece].At(t), p) <= _live.Tolerance ? _rim.Cut(piece, t) : null;
    }

    private void CrossRim(PadOutline pad)
    {
        for (int e = 0; e < pad.Edges.Length; e++)
        {
            Curve edge = pad.Edges[e];
            foreach (int k in _live.PiecesNear(edge.Bounds().Grown(_live.Tolerance)))
            {
                int[] shared = [.. _rim.On(k).Where(v => edge.Distance(_vertices[v]) <= _live.Tolerance)];
                foreach (int v in shared)
                {
                    _rim.Need(v);
                    pad.Cut(e, v, _vertices[v]);
                }

                Curve piece = _live.Pieces[k];
                if (shared.Length > 0 && !piece.IsArc)
                {
                    continue; // two lines meet once
                }

                foreach (Point2 p in CurveMeasures.Crossings(edge, piece, _live.Tolerance))
                {
                    // As good as met already where the two run together from the shared vertex on.
                    if (!shared.Any(v => piece.Distance(0.5 * (_vertices[v] + p)) <= 2 * _live.Tolerance))
                    {
                        pad.Cut(e, _rim.Cut(k, piece.Nearest(p)), p);
                    }
                }
            }
        }
    }

    private int[] PlaceTips(IReadOnlyList<Point2> tips)
    {
        (int Pad, int Edge)[] edges = [.. _pads.SelectMany((p, i) => p.Edges.Select((_, e) => (i, e)))];
        var edgeTree = new BoxTree([.. edges.Select(x => _pads[x.Pad].Edges[x.Edge].Bounds())]);
        var padTree = new BoxTree([.. _pads.Select(p => p.Outline.Bounds)]);
        var vertices = new int[tips.Count];
        for (int i = 0; i < tips.Count; i++)
        {
            Point2 p = tips[i];
            vertices[i] = -1;
            bool finite = double.IsFinite(p.X) && double.IsFinite(p.Y);
            PadOutline? metal = !finite ? null : padTree.Query(Box.Of(p)).Select(k => _pads[k])
                .FirstOrDefault(pad => pad.IsIdeal && pad.Outline.SignedDistance(p) > _live.Tolerance);
            if (!finite || !_live.Contains(p))
            {
                _problems.Add(new(-1, i, -1, PlacementFault.TipOutside, p));
            }
            else if (metal is not null)
            {
                _problems.Add(new(-1, i, metal.Contact, PlacementFault.TipInPad, p));
            }
            else
            {
                vertices[i] = PlaceTip(p);
            }
        }

        return vertices;

        int PlaceTip(Point2 p)
        {
            int known = _vertices.Find(p);
            if (known >= 0)
            {
                _rim.Need(known);
                return known;
            }

            if (OnRim(p) is { } onRim)
            {
                return onRim;
            }

            int e = edgeTree.Nearest(p, k => Edge(k).Distance(p));
            if (e < 0 || Edge(e).Distance(p) > _live.Tolerance)
            {
                return _vertices.Add(p);
            }

            int onEdge = _vertices.Add(Edge(e).At(Edge(e).Nearest(p)));
            _pads[edges[e].Pad].Cut(edges[e].Edge, onEdge, _vertices[onEdge]);
            return onEdge;
        }

        Curve Edge(int k) => _pads[edges[k].Pad].Edges[edges[k].Edge];
    }
}
