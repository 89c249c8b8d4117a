namespace FieldSolve.Sparse;

/// <summary>
/// Smallest set of vertices of a band whose removal parts the side before the band from the side behind it: maximum flow with
/// unit vertex capacities, by shortest augmenting paths in phases.
/// </summary>
/// <remarks>
/// K. Menger, Fund. Math. 10 (1927) 96-115 (smallest cut = most disjoint paths); E. A. Dinic, Soviet Math. Dokl. 11 (1970) 1277-1280
/// (phases); the flow through a geometric band follows A. Schild and C. Sommer, On balanced separators in road networks, SEA 2015.
/// A vertex b has the states 2b (entered) and 2b + 1 (left); since paths are disjoint, its flow is one predecessor and one successor.
/// </remarks>
internal sealed class VertexCut
{
    /// <summary>Sides of a band vertex after <see cref="Solve"/>.</summary>
    public const byte Before = 0, Behind = 1, Cut = 2;

    private const int None = -1, Source = -2, Sink = -3;

    private int[] next = [], previous = [], level = [], arc = [], queue = [], path = [];
    private int[] backLevel = [];

    /// <summary>First neighbour of each band vertex in <see cref="Neighbour"/>; the caller fills it, with one entry more at the end.</summary>
    public int[] Start { get; private set; } = [];

    /// <summary>Neighbours inside the band.</summary>
    public int[] Neighbour { get; private set; } = [];

    /// <summary>Bit 0: touches the side before; bit 1: touches the side behind.</summary>
    public byte[] Touches { get; private set; } = [];

    /// <summary>Result: side of each band vertex.</summary>
    public byte[] Side { get; private set; } = [];

    /// <summary>Makes room for a band.</summary>
    public void Reserve(int vertices, int edges)
    {
        if (Start.Length < vertices + 1)
        {
            int size = vertices + vertices / 2 + 16;
            Start = new int[size + 1];
            Touches = new byte[size];
            Side = new byte[size];
            next = new int[size];
            previous = new int[size];
            level = new int[2 * size];
            backLevel = new int[2 * size];
            arc = new int[2 * size];
            queue = new int[2 * size];
            path = new int[2 * size];
        }
        if (Neighbour.Length < edges)
        {
            Neighbour = new int[edges + edges / 2 + 16];
        }
    }

    /// <summary>Finds the cut of a band of <paramref name="count"/> vertices and sets <see cref="Side"/>.</summary>
    /// <param name="count">Vertices of the band.</param>
    /// <param name="before">Vertices on the side before the band, for the balance of the two parts.</param>
    /// <param name="behind">Vertices on the side behind the band.</param>
    /// <returns>Number of vertices cut.</returns>
    public int Solve(int count, int before, int behind)
    {
        next.AsSpan(0, count).Fill(None);
        previous.AsSpan(0, count).Fill(None);
        int flow = 0;
        while (SetLevels(count))
        {
            Start.AsSpan(0, count).CopyTo(arc);
            for (int b = 0; b < count; b++)
            {
                if ((Touches[b] & 1) != 0 && previous[b] != Source && level[2 * b] == 0 && Augment(b))
                {
                    flow++;
                }
            }
        }
        // Of the two extreme smallest cuts take the one that balances better.
        SetBackLevels(count);
        int nearBefore = before, nearBehind = behind, farBefore = before, farBehind = behind;
        for (int b = 0; b < count; b++)
        {
            nearBefore += level[2 * b + 1] >= 0 ? 1 : 0;
            nearBehind += level[2 * b] < 0 ? 1 : 0;
            farBefore += backLevel[2 * b + 1] < 0 ? 1 : 0;
            farBehind += backLevel[2 * b] >= 0 ? 1 : 0;
        }
        bool near = Math.Min(nearBefore, nearBehind) >= Math.Min(farBefore, farBehind);
        for (int b = 0; b < count; b++)
        {
            Side[b] = near
                ? level[2 * b + 1] >= 0 ? Before : level[2 * b] >= 0 ? Cut : Behind
                : backLevel[2 * b] >= 0 ? Behind : backLevel[2 * b + 1] >= 0 ? Cut : Before;
        }
        return flow;
    }

    // Breadth-first levels from the side before; true when the side behind is reached.
    private bool SetLevels(int count)
    {
        Span<int> levels = level.AsSpan(0, 2 * count);
        ReadOnlySpan<int> start = Start.AsSpan(0, count + 1), neighbour = Neighbour.AsSpan(0, start[count]);
        ReadOnlySpan<int> previous = this.previous.AsSpan(0, count), next = this.next.AsSpan(0, count);
        ReadOnlySpan<byte> touches = Touches.AsSpan(0, count);
        Span<int> queue = this.queue.AsSpan(0, 2 * count);
        levels.Fill(-1);
        int head = 0, tail = 0;
        for (int b = 0; b < count; b++)
        {
            if ((touches[b] & 1) != 0)   // only vertices have a capacity, the ways between them have none
            {
                levels[2 * b] = 0;
                queue[tail++] = 2 * b;
            }
        }
        int last = int.MaxValue;
        while (head < tail)
        {
            int state = queue[head++], b = state >> 1, after = levels[state] + 1;
            if (after > last)
            {
                break;
            }
            if ((state & 1) == 0)
            {
                int other = previous[b] == None ? state + 1 : previous[b] >= 0 ? 2 * previous[b] + 1 : -1;
                if (other >= 0 && levels[other] < 0)
                {
                    levels[other] = after;
                    queue[tail++] = other;
                }
                continue;
            }
            if ((touches[b] & 2) != 0 && next[b] != Sink)
            {
                last = after;
                continue;
            }
            if (previous[b] != None && levels[2 * b] < 0)
            {
                levels[2 * b] = after;
                queue[tail++] = 2 * b;
            }
            foreach (int w in neighbour[start[b]..start[b + 1]])
            {
                if (levels[2 * w] < 0)
                {
                    levels[2 * w] = after;
                    queue[tail++] = 2 * w;
                }
            }
        }
        return last != int.MaxValue;
    }

    // Depth-first along rising levels; a state that leads nowhere loses its level for this phase.
    private bool Augment(int from)
    {
        int[] level = this.level, previous = this.previous, next = this.next, arc = this.arc, path = this.path;
        int[] start = Start, neighbour = Neighbour;
        byte[] touches = Touches;
        int depth = 0;
        path[0] = 2 * from;
        while (true)
        {
            int state = path[depth], b = state >> 1, wanted = level[state] + 1, step = -1;
            if ((state & 1) == 0)
            {
                int other = previous[b] == None ? state + 1 : previous[b] >= 0 ? 2 * previous[b] + 1 : -1;
                if (other >= 0 && level[other] == wanted)
                {
                    step = other;
                }
            }
            else if ((touches[b] & 2) != 0 && next[b] != Sink)
            {
                Apply(depth);
                return true;
            }
            else if (previous[b] != None && level[2 * b] == wanted)
            {
                step = 2 * b;
            }
            else
            {
                int k = arc[b], end = start[b + 1];
                for (; k < end; k++)
                {
                    int w = neighbour[k];
                    if (level[2 * w] == wanted)
                    {
                        step = 2 * w;
                        break;
                    }
                }
                arc[b] = k;
            }
            if (step >= 0)
            {
                path[++depth] = step;
                continue;
            }
            level[state] = -1;
            if (depth == 0)
            {
                return false;
            }
            depth--;
        }
    }

    private void Apply(int depth)
    {
        previous[path[0] >> 1] = Source;
        level[path[0]] = -1;
        for (int i = 0; i < depth; i++)
        {
            int a = path[i] >> 1, b = path[i + 1] >> 1;
            level[path[i + 1]] = -1;   // a state carries one path per phase
            if ((path[i] & 1) == 0)
            {
                continue;              // passing through a, or taking back the arc b to a: set where b is left
            }
            if (a == b)
            {
                next[a] = None;        // the vertex carries no path any more
                previous[a] = None;
            }
            else
            {
                next[a] = b;
                previous[b] = a;
            }
        }
        next[path[depth] >> 1] = Sink;
    }

    // States from which the side behind can still be reached.
    private void SetBackLevels(int count)
    {
        Span<int> levels = backLevel.AsSpan(0, 2 * count);
        ReadOnlySpan<int> start = Start.AsSpan(0, count + 1), neighbour = Neighbour.AsSpan(0, start[count]);
        ReadOnlySpan<int> previous = this.previous.AsSpan(0, count), next = this.next.AsSpan(0, count);
        Span<int> queue = this.queue.AsSpan(0, 2 * count);
        levels.Fill(-1);
        int head = 0, tail = 0;
        for (int b = 0; b < count; b++)
        {
            if ((Touches[b] & 2) != 0)
            {
                levels[2 * b + 1] = 0;
                queue[tail++] = 2 * b + 1;
            }
        }
        while (head < tail)
        {
            int state = queue[head++], b = state >> 1;
            if ((state & 1) != 0)
            {
                int other = previous[b] == None ? state - 1 : next[b] >= 0 ? 2 * next[b] : -1;
                if (other >= 0 && levels[other] < 0)
                {
                    levels[other] = 0;
                    queue[tail++] = other;
                }
                continue;
            }
            if (previous[b] != None && levels[2 * b + 1] < 0)
            {
                levels[2 * b + 1] = 0;
                queue[tail++] = 2 * b + 1;
            }
            foreach (int w in neighbour[start[b]..start[b + 1]])
            {
                if (levels[2 * w + 1] < 0)
                {
                    levels[2 * w + 1] = 0;
                    queue[tail++] = 2 * w + 1;
                }
            }
        }
    }
}
