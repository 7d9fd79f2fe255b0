namespace StreamLogit.Engine.Features;

/// <summary>Searches and merges of sorted numbers.</summary>
internal static class SortedNumbers
{
    /// <summary>How many numbers are below a number.</summary>
    public static int Below(ReadOnlySpan<double> sorted, double number)
    {
        int low = 0, high = sorted.Length;
        while (low < high)
        {
            int middle = (low + high) >>> 1;
            if (sorted[middle] < number) low = middle + 1;
            else high = middle;
        }
        return low;
    }

    /// <summary>How many numbers are not above a number.</summary>
    public static int NotAbove(ReadOnlySpan<double> sorted, double number)
    {
        int low = 0, high = sorted.Length;
        while (low < high)
        {
            int middle = (low + high) >>> 1;
            if (sorted[middle] <= number) low = middle + 1;
            else high = middle;
        }
        return low;
    }

    /// <summary>Merges two runs of sorted numbers.</summary>
    public static void Merge(ReadOnlySpan<double> a, ReadOnlySpan<double> b, Span<double> merged)
    {
        int i = 0, j = 0;
        for (int place = 0; place < merged.Length; place++)
            merged[place] = j == b.Length || (i < a.Length && a[i] <= b[j]) ? a[i++] : b[j++];
    }
}
