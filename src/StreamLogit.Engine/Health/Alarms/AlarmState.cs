using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Health.Alarms;

/// <summary>How an alarm stands, as it changes.</summary>
/// <param name="alarm">The alarm.</param>
internal sealed class AlarmState(AlarmOptions alarm)
{
    private const int LooksPerWindow = 60;
    private const long MostMinutesBetweenLooks = 60;
    private const long MicrosecondsOfMinute = 60_000_000;

    private string? _sentence = AlarmSentence.NotLookedAt(alarm);
    private AlarmReading _reading;
    private bool _isBeyond;

    public AlarmOptions Alarm => alarm;

    /// <summary>How many minutes pass between two looks: a sixtieth of the window, from a minute to an hour.</summary>
    public long MinutesBetweenLooks => Math.Clamp(alarm.Window.LengthMicroseconds / MicrosecondsOfMinute / LooksPerWindow, 1, MostMinutesBetweenLooks);

    public long? LookedAtMinute { get; set; }

    public bool IsRaised { get; set; }

    public long? SinceMicroseconds { get; set; }

    /// <summary>Since when the metric has been beyond the bound at every look.</summary>
    public long? BeyondSinceMicroseconds { get; set; }

    public double Value { get; set; } = double.NaN;

    public long Count { get; set; }

    /// <summary>What is wrong, or that nothing is. Written when somebody reads it, as most looks change nothing and nobody does.</summary>
    public string Sentence => _sentence ??= IsTold ? AlarmSentence.Of(alarm, _reading, _isBeyond) : AlarmSentence.TooFew(alarm, _reading, IsRaised);

    public AlarmFigures Figures => new(alarm, IsRaised, SinceMicroseconds, Value, Count, Sentence);

    private bool IsTold => !double.IsNaN(_reading.Value) && _reading.Count >= alarm.Minimum;

    /// <summary>Takes note of what a look found.</summary>
    /// <param name="reading">The metric.</param>
    /// <param name="isBeyond">Whether it is beyond the bound.</param>
    public void Found(AlarmReading reading, bool isBeyond) => (_reading, _isBeyond, _sentence) = (reading, isBeyond, null);

    public void Save(BinaryWriter writer)
    {
        writer.Write(alarm.Name);
        writer.Write(LookedAtMinute ?? long.MinValue);
        writer.Write(IsRaised);
        writer.Write(SinceMicroseconds ?? long.MinValue);
        writer.Write(BeyondSinceMicroseconds ?? long.MinValue);
        writer.Write(Value);
        writer.Write(Count);
        writer.Write(Sentence);
    }

    /// <summary>Reads what follows the name.</summary>
    public void Load(BinaryReader reader)
    {
        LookedAtMinute = Optional(reader.ReadInt64());
        IsRaised = reader.ReadBoolean();
        SinceMicroseconds = Optional(reader.ReadInt64());
        BeyondSinceMicroseconds = Optional(reader.ReadInt64());
        Value = reader.ReadDouble();
        Count = reader.ReadInt64();
        _sentence = reader.ReadString();

        static long? Optional(long value) => value == long.MinValue ? null : value;
    }
}
