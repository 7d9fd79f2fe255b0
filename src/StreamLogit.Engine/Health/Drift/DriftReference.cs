using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>The period that drift is measured against, and what was counted in it.</summary>
internal sealed class DriftReference(HealthReferenceOptions options, int numbers, int cells)
{
    private const long MicrosecondsOfMinute = 60_000_000;
    private long _end = options.FromMicroseconds + options.LengthMicroseconds ?? long.MaxValue;

    /// <summary>When it starts, or null before the first event where that is the start.</summary>
    public long? FromMicroseconds { get; private set; } = options.FromMicroseconds;

    public long? ToMicroseconds => FromMicroseconds + options.LengthMicroseconds;

    public double[] Numbers { get; } = new double[numbers];

    public double[] Cells { get; } = new double[cells];

    /// <summary>The sum of the weights of the labels that came in it.</summary>
    public double LabelWeight { get; set; }

    /// <summary>The sum of the weights of those that are 1.</summary>
    public double LabelPositive { get; set; }

    /// <summary>Whether the stream's clock has passed it and something was counted.</summary>
    public bool IsComplete(long clockMicroseconds) => clockMicroseconds >= ToMicroseconds && Numbers[DriftCounts.Weight] > 0;

    /// <summary>Whether an event at this time belongs to it.</summary>
    public bool Contains(long clockMicroseconds)
    {
        if (clockMicroseconds >= _end) return false;
        if (FromMicroseconds is null)
        {
            FromMicroseconds = MinuteStart(clockMicroseconds);
            _end = FromMicroseconds.Value + options.LengthMicroseconds;
        }
        return clockMicroseconds >= FromMicroseconds;
    }

    /// <summary>Full minutes, so that the labels of a minute are all in it or all out of it.</summary>
    private static long MinuteStart(long microseconds)
    {
        long into = microseconds % MicrosecondsOfMinute;
        return microseconds - (into < 0 ? into + MicrosecondsOfMinute : into);
    }

    public DriftCounts Copy() => new([.. Numbers], [.. Cells]);

    public void Save(BinaryWriter writer)
    {
        writer.Write(options.FromMicroseconds is null);
        writer.Write(options.LengthMicroseconds);
        writer.Write(FromMicroseconds ?? long.MinValue);
        writer.Write(LabelWeight);
        writer.Write(LabelPositive);
        foreach (double value in Numbers) writer.Write(value);
        foreach (double value in Cells) writer.Write(value);
    }

    /// <summary>Takes up what was counted, unless the definition has another period now.</summary>
    public void Load(BinaryReader reader)
    {
        bool startsWithStream = reader.ReadBoolean();
        long length = reader.ReadInt64();
        long from = reader.ReadInt64();
        double labelWeight = reader.ReadDouble(), labelPositive = reader.ReadDouble();
        var numbers = new double[Numbers.Length];
        var cells = new double[Cells.Length];
        foreach (ref double value in numbers.AsSpan()) value = reader.ReadDouble();
        foreach (ref double value in cells.AsSpan()) value = reader.ReadDouble();
        bool isSame = length == options.LengthMicroseconds && startsWithStream == options.FromMicroseconds is null
            && (startsWithStream || from == options.FromMicroseconds);
        if (!isSame) return;
        FromMicroseconds = from == long.MinValue ? null : from;
        _end = ToMicroseconds ?? long.MaxValue;
        (LabelWeight, LabelPositive) = (labelWeight, labelPositive);
        numbers.CopyTo(Numbers, 0);
        cells.CopyTo(Cells, 0);
    }
}
