namespace StreamLogit.Engine.Definition;

/// <summary>How the times of records are written.</summary>
public enum TimeFormat
{
    /// <summary>RFC 3339 date-time with an offset, as in <c>2026-03-01T08:15:30.120Z</c>.</summary>
    Rfc3339,

    /// <summary>Seconds since 1970-01-01T00:00:00Z, whole or with a fraction.</summary>
    UnixSeconds,

    /// <summary>Milliseconds since 1970-01-01T00:00:00Z, whole or with a fraction.</summary>
    UnixMilliseconds,
}
