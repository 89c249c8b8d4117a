namespace FieldSolve.Meshing;

/// <summary>A growing array of integers without the checks of the general list; used as list and as stack.</summary>
internal sealed class IntList
{
    private int[] items = new int[64];

    public int Count { get; private set; }

    public int this[int i] => items[i];

    public void Add(int value)
    {
        if (Count == items.Length)
        {
            Array.Resize(ref items, 2 * Count);
        }

        items[Count++] = value;
    }

    public int Pop() => items[--Count];

    public void Clear() => Count = 0;
}
