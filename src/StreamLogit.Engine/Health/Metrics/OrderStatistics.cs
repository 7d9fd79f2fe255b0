namespace StreamLogit.Engine.Health.Metrics;

/// <summary>The sorted probabilities behind score groups whose labels count once each: the i-th smallest, i from 1.</summary>
internal readonly ref struct OrderStatistics
{
    private readonly ReadOnlySpan<ScoreGroup> _groups;
    private readonly long[] _ends; // labels up to and including each group

    public OrderStatistics(ReadOnlySpan<ScoreGroup> groups)
    {
        _groups = groups;
        _ends = new long[groups.Length];
        for (int i = 0; i < groups.Length; i++)
        {
            Count += (int)groups[i].Weight;
            _ends[i] = Count;
        }
    }

    public int Count { get; }

    public double this[long rank]
    {
        get
        {
            int group = Array.BinarySearch(_ends, rank);
            return _groups[group < 0 ? ~group : group].MeanProbability;
        }
    }
}
