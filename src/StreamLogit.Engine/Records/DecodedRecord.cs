namespace StreamLogit.Engine.Records;

/// <summary>One record of a batch: its bytes, where it came from, and what was read from it.</summary>
public struct DecodedRecord
{
    /// <summary>In place of a time that is not given.</summary>
    public const long NoTime = long.MinValue;

    /// <summary>Where its bytes start in the batch's bytes.</summary>
    public int Start;

    /// <summary>How many bytes it has. Of a record that is too long, only the first are kept.</summary>
    public int Length;

    /// <summary>Its number in its origin: the line of a file from 1, the offset in a queue.</summary>
    public long Position;

    /// <summary>Where it comes from, if not from the batch's origin.</summary>
    public string? Origin;

    /// <summary>What it is.</summary>
    public RecordKind Kind;

    /// <summary>Why it cannot be used, where it is a reject.</summary>
    public RejectReason Reason;

    /// <summary>What exactly is wrong, for people; null where the reason says it all.</summary>
    public string? Detail;

    /// <summary>Where the text of its id starts in the batch's bytes, unescaped.</summary>
    public int IdStart;

    /// <summary>The length of its id in bytes.</summary>
    public int IdLength;

    /// <summary>The hash of its id.</summary>
    public ulong IdHash;

    /// <summary>Its time in microseconds since 1970-01-01T00:00:00Z.</summary>
    public long TimeMicroseconds;

    /// <summary>Its label, 0 or 1; meaningless in an event without one.</summary>
    public int Label;

    /// <summary>
    /// When the label that stands in an event became known, in microseconds since 1970-01-01T00:00:00Z, or <see cref="NoTime"/> where it does not say.
    /// </summary>
    public long LabelTimeMicroseconds;

    /// <summary>Its importance weight, 0 to 1e6, or NaN where it gives none.</summary>
    public double Weight;
}
