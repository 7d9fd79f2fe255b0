using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>
/// What is wrong with the JSON of one record. What breaks it (<see cref="Stop"/>, <see cref="StopTooDeep"/>) ends the reading;
/// a lone surrogate or a key given twice leaves it readable to its end, and the first of each is kept.
/// </summary>
internal sealed unsafe class JsonFault
{
    private const int LongestName = 60;

    private byte* _start;
    private byte* _end;
    private byte* _stoppedAt;
    private byte* _surrogateAt;
    private string? _wanted;

    /// <summary>Whether the reading ended before the record did.</summary>
    public bool IsStopped => _stoppedAt != null;

    /// <summary>Whether it ended because of the nesting.</summary>
    public bool IsTooDeep => IsStopped && _wanted is null;

    /// <summary>Whether some escape is half of a surrogate pair.</summary>
    public bool HasLoneSurrogate => _surrogateAt != null;

    /// <summary>The first key found twice in one object, or null.</summary>
    public string? DuplicateKey { get; private set; }

    /// <summary>Whether anything is wrong.</summary>
    public bool IsAny => _stoppedAt != null || _surrogateAt != null || DuplicateKey is not null;

    /// <summary>Forgets the last record.</summary>
    public void Begin(byte* start, byte* end)
    {
        _start = start;
        _end = end;
        _stoppedAt = null;
        _surrogateAt = null;
        DuplicateKey = null;
    }

    /// <summary>The record is not JSON: something else is wanted here. Returns null for the caller to return.</summary>
    public byte* Stop(byte* at, string wanted)
    {
        _stoppedAt = at;
        _wanted = wanted;
        return null;
    }

    /// <summary>An object or array opens here that is nested too deep. Returns null for the caller to return.</summary>
    public byte* StopTooDeep(byte* at)
    {
        _stoppedAt = at;
        _wanted = null;
        return null;
    }

    /// <summary>An escape here is half of a surrogate pair.</summary>
    public void AddLoneSurrogate(byte* at)
    {
        if (_surrogateAt == null) _surrogateAt = at;
    }

    /// <summary>A key stands twice in one object.</summary>
    public void AddDuplicate(ReadOnlySpan<byte> name) =>
        DuplicateKey ??= Encoding.UTF8.GetString(name[..Math.Min(name.Length, LongestName)]);

    /// <summary>What is wanted instead, and where, counting bytes from 1.</summary>
    public string DescribeStop() => _stoppedAt == _end
        ? $"the record ends after {_end - _start} bytes; {_wanted} is wanted"
        : $"at byte {_stoppedAt - _start + 1}: {_wanted} is wanted";

    /// <summary>Where the reading ended, counting bytes from 1.</summary>
    public long StopByte => _stoppedAt - _start + 1;

    /// <summary>Where the first lone surrogate stands, counting bytes from 1.</summary>
    public long SurrogateByte => _surrogateAt - _start + 1;
}
