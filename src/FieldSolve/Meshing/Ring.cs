namespace FieldSolve.Meshing;

/// <summary>First in, first out, in one array.</summary>
internal sealed class Ring
{
    private int[] items = new int[1024];
    private int head;

    public int Count { get; private set; }

    public void Enqueue(int value)
    {
        if (Count == items.Length)
        {
            int[] larger = new int[2 * Count];
            for (int i = 0; i < Count; i++)
            {
                larger[i] = items[(head + i) & (Count - 1)];
            }

            (items, head) = (larger, 0);
        }

        items[(head + Count++) & (items.Length - 1)] = value;
    }

    public int Dequeue()
    {
        int value = items[head];
        head = (head + 1) & (items.Length - 1);
        Count--;
        return value;
    }
}
