using System.Runtime.InteropServices;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>
/// Finds, for the labels that the first of several engines learned in a batch, what the others had published for the same event. Engines whose
/// definitions treat labels differently may learn a label at another time or not at all; it is then missing.
/// </summary>
internal sealed class LabelMatch(IReadOnlyList<Lane> lanes)
{
    private readonly Dictionary<ulong, int>?[] _places = new Dictionary<ulong, int>?[lanes.Count];

    /// <summary>Looks at a batch that all have run.</summary>
    public void Begin()
    {
        var first = CollectionsMarshal.AsSpan(lanes[0].Labels);
        for (int lane = 1; lane < lanes.Count; lane++)
        {
            var other = CollectionsMarshal.AsSpan(lanes[lane].Labels);
            _places[lane] = IsInStep(first, other) ? null : PlacesOf(other);
        }
    }

    /// <summary>The log-odds of all engines for a label of the first; false where one has none.</summary>
    public bool TryFind(int label, Span<double> logOdds)
    {
        var sought = lanes[0].Labels[label];
        logOdds[0] = sought.LogOdds;
        for (int lane = 1; lane < lanes.Count; lane++)
        {
            int place = label;
            if (_places[lane] is { } places && !places.TryGetValue(sought.IdHash, out place)) return false;
            var found = lanes[lane].Labels[place];
            if (found.Label != sought.Label) return false;
            logOdds[lane] = found.LogOdds;
        }
        return true;
    }

    private static bool IsInStep(ReadOnlySpan<TapedLabel> first, ReadOnlySpan<TapedLabel> other)
    {
        if (first.Length != other.Length) return false;
        for (int i = 0; i < first.Length; i++)
            if (first[i].IdHash != other[i].IdHash) return false;
        return true;
    }

    private static Dictionary<ulong, int> PlacesOf(ReadOnlySpan<TapedLabel> labels)
    {
        var places = new Dictionary<ulong, int>(labels.Length);
        for (int i = 0; i < labels.Length; i++) places[labels[i].IdHash] = i;
        return places;
    }
}
