namespace StreamLogit.Engine.Decisions;

/// <summary>The scores that the engine gave to the events of a record batch, in their order.</summary>
public sealed class ScoreBatch(int reasonsPerScore)
{
    private Score[] _scores = new Score[1024];
    private Reason[] _reasons = new Reason[1024 * reasonsPerScore];

    /// <summary>How many scores it holds.</summary>
    public int Count { get; private set; }

    /// <summary>The scores.</summary>
    public ReadOnlySpan<Score> Scores => _scores.AsSpan(0, Count);

    /// <summary>The reasons of a score, the largest contribution (by magnitude) first.</summary>
    public ReadOnlySpan<Reason> Reasons(int score) =>
        _reasons.AsSpan(score * reasonsPerScore, _scores[score].ReasonCount);

    /// <summary>Empties the batch and keeps its memory.</summary>
    public void Clear() => Count = 0;

    /// <summary>Adds a score to be filled in, with room for its reasons.</summary>
    internal ref Score Add(out Span<Reason> reasons)
    {
        if (Count == _scores.Length)
        {
            Array.Resize(ref _scores, Count * 2);
            Array.Resize(ref _reasons, Count * 2 * reasonsPerScore);
        }
        reasons = _reasons.AsSpan(Count * reasonsPerScore, reasonsPerScore);
        return ref _scores[Count++];
    }
}
