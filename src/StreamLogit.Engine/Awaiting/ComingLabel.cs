namespace StreamLogit.Engine.Awaiting;

/// <summary>A label that came with its event and becomes known later. Without gaps between its fields, as its bytes are saved.</summary>
/// <param name="KnownAtMicroseconds">When.</param>
/// <param name="Segment">The segment of its event.</param>
/// <param name="Offset">The event's first byte there.</param>
/// <param name="Label">0 or 1.</param>
internal readonly record struct ComingLabel(long KnownAtMicroseconds, int Segment, int Offset, long Label)
{
    public EventPlace Place => new(Segment, Offset);

    /// <summary>Whether it is taken before another: known earlier, or at the same time and its event was scored earlier.</summary>
    public bool IsBefore(in ComingLabel other) =>
        KnownAtMicroseconds != other.KnownAtMicroseconds ? KnownAtMicroseconds < other.KnownAtMicroseconds
        : Segment != other.Segment ? Segment < other.Segment
        : Offset < other.Offset;
}
