namespace StreamLogit.Pipeline.Definition;

/// <summary>Finds the name that somebody meant who wrote another.</summary>
internal static class NearestName
{
    /// <summary><c>; did you mean "scale"?</c>, or nothing where no known name is near.</summary>
    public static string Hint(string written, IEnumerable<string> known)
    {
        string? nearest = known
            .Select(name => (Name: name, Distance: Distance(written.ToUpperInvariant(), name.ToUpperInvariant())))
            .Where(candidate => candidate.Distance <= Math.Max(1, candidate.Name.Length / 3))
            .OrderBy(candidate => candidate.Distance)
            .Select(candidate => candidate.Name)
            .FirstOrDefault();
        return nearest is null ? "" : $"; did you mean {Quoted.Text(nearest)}?";
    }

    /// <summary>Insertions, deletions, replacements and swaps of neighbours that turn one text into the other (optimal string alignment).</summary>
    internal static int Distance(string left, string right)
    {
        // A text much longer than any name is near to none, and must not cost its length squared.
        if (Math.Abs(left.Length - right.Length) > right.Length) return Math.Max(left.Length, right.Length);
        var distances = new int[left.Length + 1, right.Length + 1];
        for (int i = 0; i <= left.Length; i++) distances[i, 0] = i;
        for (int j = 0; j <= right.Length; j++) distances[0, j] = j;
        for (int i = 1; i <= left.Length; i++)
        {
            for (int j = 1; j <= right.Length; j++)
            {
                int replaced = distances[i - 1, j - 1] + (left[i - 1] == right[j - 1] ? 0 : 1);
                int best = Math.Min(replaced, Math.Min(distances[i - 1, j], distances[i, j - 1]) + 1);
                if (i > 1 && j > 1 && left[i - 1] == right[j - 2] && left[i - 2] == right[j - 1]) best = Math.Min(best, distances[i - 2, j - 2] + 1);
                distances[i, j] = best;
            }
        }
        return distances[left.Length, right.Length];
    }
}
