namespace StreamLogit.Engine.Definition;

/// <summary>The period that drift is measured against, on the stream's clock.</summary>
public sealed record HealthReferenceOptions
{
    /// <summary>When it starts, in microseconds since 1970, a full minute, or null for the minute of the first event of the stream.</summary>
    public long? FromMicroseconds { get; init; }

    /// <summary>How long it is, in microseconds, a whole number of minutes, at least an hour. Default 7 days.</summary>
    public long LengthMicroseconds { get; init; } = 7 * 24 * 3600L * 1_000_000;
}
