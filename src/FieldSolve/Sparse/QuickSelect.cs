namespace FieldSolve.Sparse;

/// <summary>Order statistics without sorting.</summary>
internal static class QuickSelect
{
    /// <summary>The k-th smallest value (from 0); the values are reordered. C. A. R. Hoare, Comm. ACM 4 (1961) 321-322.</summary>
    public static double Of(Span<double> values, int k)
    {
        int low = 0, high = values.Length - 1;
        while (low < high)
        {
            double a = values[low], b = values[(low + high) >> 1], c = values[high];
            double pivot = Math.Max(Math.Min(a, b), Math.Min(Math.Max(a, b), c));
            int i = low, j = high;
            while (i <= j)
            {
                while (values[i] < pivot)
                {
                    i++;
                }
                while (pivot < values[j])
                {
                    j--;
                }
                if (i <= j)
                {
                    (values[i], values[j]) = (values[j], values[i]);
                    i++;
                    j--;
                }
            }
            if (k <= j)
            {
                high = j;
            }
            else if (k >= i)
            {
                low = i;
            }
            else
            {
                break;
            }
        }
        return values[k];
    }
}
