namespace StreamLogit.Engine.Awaiting;

/// <summary>A run of events in the order in which they were scored. Bytes are only ever added; what is taken is marked beside them.</summary>
internal sealed class AwaitingSegment(byte[] bytes)
{
    private bool[] _isTaken = new bool[64];

    public byte[] Bytes { get; } = bytes;

    /// <summary>Bytes in use.</summary>
    public int Length { get; private set; }

    /// <summary>Events, taken ones included.</summary>
    public int Count { get; private set; }

    /// <summary>Whether events were added since the last save.</summary>
    public bool HasNewEvents { get; set; }

    /// <summary>Whether events were taken since the last save.</summary>
    public bool HasNewlyTaken { get; set; }

    public ReadOnlySpan<bool> IsTaken => _isTaken.AsSpan(0, Count);

    public bool HasRoom(int size) => Bytes.Length - Length >= size;

    /// <summary>Makes room for one more event and returns where it is to be written.</summary>
    public int Append(int size)
    {
        if (Count == _isTaken.Length) Array.Resize(ref _isTaken, Count * 2);
        _isTaken[Count++] = false;
        HasNewEvents = true;
        int offset = Length;
        Length += size;
        return offset;
    }

    public void Take(int ordinal)
    {
        _isTaken[ordinal] = true;
        HasNewlyTaken = true;
    }

    /// <summary>Empties it for new events.</summary>
    public void Clear()
    {
        Length = Count = 0;
        HasNewEvents = HasNewlyTaken = false;
    }
}
