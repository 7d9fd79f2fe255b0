using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>What is wrong with the parts of one record. Of several faults the one of the part with the lowest rank is kept.</summary>
internal sealed class RecordFault
{
    private const int LongestQuotation = 40;

    private int _rank;

    /// <summary>The reason, or None.</summary>
    public RejectReason Reason { get; private set; }

    /// <summary>What exactly is wrong, for people.</summary>
    public string? Detail { get; private set; }

    /// <summary>Forgets the last record.</summary>
    public void Begin()
    {
        _rank = int.MaxValue;
        Reason = RejectReason.None;
        Detail = null;
    }

    /// <summary>A part holds something that it should not.</summary>
    public void Add(RecordPart part, RejectReason reason, in JsonToken token, string wanted)
    {
        if (part.Rank < _rank) Set(part, reason, $"{part} holds {Describe(token)}; {wanted} is wanted");
    }

    /// <summary>A part has no value.</summary>
    public void AddMissing(RecordPart part, RejectReason reason)
    {
        if (part.Rank < _rank) Set(part, reason, $"{part} is absent or null");
    }

    /// <summary>A key that should hold the object in which a part is holds something else.</summary>
    public void AddNoObject(RecordPart part, KnownKey key, in JsonToken token)
    {
        if (part.Rank < _rank) Set(part, part.Unreadable, $"'{key}' on the way to {part} holds {Describe(token)}; an object is wanted");
    }

    private void Set(RecordPart part, RejectReason reason, string detail)
    {
        _rank = part.Rank;
        Reason = reason;
        Detail = detail;
    }

    private static string Describe(in JsonToken token) => token.Kind switch
    {
        JsonKind.Null => "null",
        JsonKind.False => "false",
        JsonKind.True => "true",
        JsonKind.Number => "the number " + Quote(token.Raw),
        JsonKind.String => $"the string \"{Quote(token.Raw)}\"",
        JsonKind.Object => "an object",
        _ => "an array",
    };

    private static string Quote(ReadOnlySpan<byte> text) => text.Length <= LongestQuotation
        ? Encoding.UTF8.GetString(text)
        : Encoding.UTF8.GetString(text[..LongestQuotation]).TrimEnd('\uFFFD') + "...";
}
