namespace StreamLogit.Engine.Records;

/// <summary>
/// The keys of all objects that are open, to find those that stand twice in one object. Exact: names are compared wherever fingerprints
/// are equal. Few keys are compared each with each; many are sorted, so that no record, however it was made up, takes quadratic time.
/// </summary>
internal sealed unsafe class OpenKeys
{
    private const int MostCompared = 24;

    private readonly JsonFault _fault;
    private readonly Comparison<KeyMark> _order;
    private KeyMark[] _marks = new KeyMark[64];
    private byte[] _unescaped = new byte[256];
    private int _unescapedCount;

    /// <summary>No keys.</summary>
    /// <param name="fault">Told of keys that stand twice.</param>
    public OpenKeys(JsonFault fault)
    {
        _fault = fault;
        // Kept, as every new delegate would be an allocation.
        _order = Compare;
    }

    /// <summary>How many keys there are. An object's keys are those added since it was opened.</summary>
    public int Count { get; private set; }

    /// <summary>Forgets the last record.</summary>
    public void Begin()
    {
        Count = 0;
        _unescapedCount = 0;
    }

    /// <summary>Adds a key of the innermost object.</summary>
    public void Add(byte* raw, int length, bool isEscaped)
    {
        if (Count == _marks.Length) Array.Resize(ref _marks, Count * 2);
        ref var mark = ref _marks[Count++];
        mark.Raw = raw;
        mark.Length = length;
        if (isEscaped)
        {
            mark.Raw = null;
            mark.UnescapedStart = _unescapedCount;
            mark.Length = Unescape(new ReadOnlySpan<byte>(raw, length)).Length;
            _unescapedCount += mark.Length;
        }
        mark.Fingerprint = KeyFingerprint.Of(Name(mark));
    }

    /// <summary>A name unescaped, valid until the next call.</summary>
    public ReadOnlySpan<byte> Unescape(ReadOnlySpan<byte> escaped)
    {
        int wanted = _unescapedCount + escaped.Length;
        if (_unescaped.Length < wanted) Array.Resize(ref _unescaped, Math.Max(wanted, _unescaped.Length * 2));
        int length = JsonEscapes.Unescape(escaped, _unescaped.AsSpan(_unescapedCount));
        return _unescaped.AsSpan(_unescapedCount, length);
    }

    /// <summary>The innermost object ends: tells the fault if a key stands twice in it, and forgets its keys.</summary>
    /// <param name="first">How many keys there were when it was opened.</param>
    public void Close(int first)
    {
        int count = Count - first;
        if (count > MostCompared) CompareSorted(first);
        else if (count > 1) CompareEach(first);
        Count = first;
    }

    private void CompareEach(int first)
    {
        for (int i = first + 1; i < Count; i++)
        {
            ulong fingerprint = _marks[i].Fingerprint;
            for (int j = first; j < i; j++)
            {
                if (_marks[j].Fingerprint == fingerprint && Name(_marks[j]).SequenceEqual(Name(_marks[i]))) _fault.AddDuplicate(Name(_marks[i]));
            }
        }
    }

    private void CompareSorted(int first)
    {
        _marks.AsSpan(first, Count - first).Sort(_order);
        for (int i = first + 1; i < Count; i++)
        {
            if (Name(_marks[i]).SequenceEqual(Name(_marks[i - 1]))) _fault.AddDuplicate(Name(_marks[i]));
        }
    }

    private int Compare(KeyMark x, KeyMark y)
    {
        int order = x.Fingerprint.CompareTo(y.Fingerprint);
        return order != 0 ? order : Name(x).SequenceCompareTo(Name(y));
    }

    private ReadOnlySpan<byte> Name(in KeyMark mark) =>
        mark.Raw != null ? new ReadOnlySpan<byte>(mark.Raw, mark.Length) : _unescaped.AsSpan(mark.UnescapedStart, mark.Length);
}
