namespace StreamLogit.Engine.Records;

/// <summary>The times that a record may have, in microseconds since 1970-01-01T00:00:00Z: those of the years 0001 to 9999 in UTC.</summary>
internal static class TimeRange
{
    /// <summary>0001-01-01T00:00:00Z.</summary>
    public const long First = -62_135_596_800_000_000;

    /// <summary>9999-12-31T23:59:59.999999Z.</summary>
    public const long Last = 253_402_300_799_999_999;

    /// <summary>Whether a time lies within.</summary>
    public static bool Contains(long microseconds) => microseconds is >= First and <= Last;
}
