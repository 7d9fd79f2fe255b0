namespace StreamLogit.Engine.Health;

/// <summary>The minutes of the stream's clock that are open together, and when the next minute, hour and day begin.</summary>
internal struct OpenMinutes
{
    /// <summary>The first minute of them, counted from 1970.</summary>
    public long First;

    /// <summary>That of the clock.</summary>
    public long Present;

    /// <summary>When it ends, in microseconds since 1970.</summary>
    public long MinuteEnd;

    /// <summary>The first minute of the next hour.</summary>
    public long HourEnd;

    /// <summary>The first minute of the next day.</summary>
    public long DayEnd;

    /// <summary>Before the first time, when every minute is over.</summary>
    public static OpenMinutes None => new() { MinuteEnd = long.MinValue, HourEnd = long.MinValue, DayEnd = long.MinValue };

    public static OpenMinutes Read(BinaryReader reader) => new()
    {
        First = reader.ReadInt64(),
        Present = reader.ReadInt64(),
        MinuteEnd = reader.ReadInt64(),
        HourEnd = reader.ReadInt64(),
        DayEnd = reader.ReadInt64(),
    };

    public readonly void Save(BinaryWriter writer)
    {
        writer.Write(First);
        writer.Write(Present);
        writer.Write(MinuteEnd);
        writer.Write(HourEnd);
        writer.Write(DayEnd);
    }
}
