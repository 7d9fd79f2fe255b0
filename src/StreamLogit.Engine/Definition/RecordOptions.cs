using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>Where the parts that every record has stand in it. A path names nested fields with dots: <c>payment.amount</c>.</summary>
public sealed record RecordOptions
{
    /// <summary>The path of the event's id. Default <c>id</c>.</summary>
    public string Id { get; init; } = "id";

    /// <summary>The path of the time. Default <c>time</c>.</summary>
    public string Time { get; init; } = "time";

    /// <summary>How the time is written. Default <see cref="Definition.TimeFormat.Rfc3339"/>.</summary>
    public TimeFormat TimeFormat { get; init; } = TimeFormat.Rfc3339;

    /// <summary>The path of the label. Default <c>label</c>.</summary>
    public string Label { get; init; } = "label";

    /// <summary>
    /// The path of the time at which the label that stands in an event became known, written as <see cref="TimeFormat"/> says, or null where events do
    /// not tell it. Such a label teaches only when the stream's clock reaches that time. Default null.
    /// </summary>
    public string? LabelTime { get; init; }

    /// <summary>The path of the importance weight of the event, which is 1 where the field is absent. Default <c>weight</c>.</summary>
    public string Weight { get; init; } = "weight";

    /// <summary>
    /// What the label field may hold, and the label that each value means. A number is compared by value, a string by its characters,
    /// a boolean by <c>true</c> and <c>false</c>. Default: 0 and 1.
    /// </summary>
    public ImmutableDictionary<string, int> LabelValues { get; init; } =
        ImmutableDictionary<string, int>.Empty.Add("0", 0).Add("1", 1);

    /// <summary>The longest record, in bytes; a longer one is a reject. Default 1 MiB.</summary>
    public int MaximumBytes { get; init; } = 1 << 20;

    /// <summary>The deepest nesting of objects and arrays; a deeper one is a reject. Default 32.</summary>
    public int MaximumDepth { get; init; } = 32;

    /// <summary>
    /// How far, in microseconds, the time of a record may lie beyond the stream's clock; one that lies further ahead is a reject. Default 1 day.
    /// </summary>
    public long AheadMicroseconds { get; init; } = 24L * 3600 * 1_000_000;
}
