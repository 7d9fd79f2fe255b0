using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline;

/// <summary>A span of a recording. A record whose time cannot be read belongs where the one before it does.</summary>
/// <param name="FromMicroseconds">The first time within, in microseconds since 1970-01-01T00:00:00Z.</param>
/// <param name="ToMicroseconds">The first time behind it.</param>
public sealed record RecordSpan(long FromMicroseconds, long ToMicroseconds)
{
    /// <summary>Everything.</summary>
    public static RecordSpan All { get; } = new(long.MinValue, long.MaxValue);

    /// <summary>Takes what lies outside out of decoded batches, one after the other.</summary>
    internal Action<RecordBatch> Cutter()
    {
        bool isWithin = FromMicroseconds == long.MinValue;
        return batch => batch.Keep(record =>
        {
            if (record.Kind != RecordKind.Reject) isWithin = record.TimeMicroseconds >= FromMicroseconds && record.TimeMicroseconds < ToMicroseconds;
            return isWithin;
        });
    }
}
