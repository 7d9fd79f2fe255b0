namespace StreamLogit.Engine.Features.Text;

/// <summary>The different n-grams of one text, in the order in which they were found. Emptied without being cleared.</summary>
internal sealed class NGramSet(int maximum)
{
    private readonly (ulong Hash, int Round)[] _seen = new (ulong, int)[4 * (int)System.Numerics.BitOperations.RoundUpToPowerOf2((uint)maximum)];
    private readonly NGram[] _nGrams = new NGram[maximum];
    private int _round;

    public int Count { get; private set; }

    public ReadOnlySpan<NGram> NGrams => _nGrams.AsSpan(0, Count);

    public bool IsFull => Count == _nGrams.Length;

    public void Clear()
    {
        Count = 0;
        _round++;
    }

    /// <summary>Adds an n-gram that is not there yet. Not when it is full.</summary>
    public void Add(ulong hash, int start, int length)
    {
        int mask = _seen.Length - 1;
        int place = (int)hash & mask;
        for (; _seen[place].Round == _round; place = (place + 1) & mask)
            if (_seen[place].Hash == hash) return;
        _seen[place] = (hash, _round);
        _nGrams[Count++] = new NGram(hash, start, length);
    }
}
