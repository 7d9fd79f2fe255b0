namespace StreamLogit.Engine.Features.Histories;

/// <summary>The decayed share of bad labels among all known ones, each decayed from the time of its event to that of the newest.</summary>
internal sealed class OverallRate(long halfLifeMicroseconds)
{
    private double _labels;
    private double _bad;
    private long _clockMicroseconds = long.MinValue;

    public long HalfLifeMicroseconds { get; } = halfLifeMicroseconds;

    /// <summary>The rate, with half a label of each kind added, so that it is never 0 or 1.</summary>
    public double Value => (_bad + 0.5) / (_labels + 1);

    public void Learn(long timeMicroseconds, int label, double weight)
    {
        if (_clockMicroseconds == long.MinValue) _clockMicroseconds = timeMicroseconds;
        double decay = Decay.Over(Math.Abs((double)timeMicroseconds - _clockMicroseconds), HalfLifeMicroseconds);
        if (timeMicroseconds > _clockMicroseconds)
        {
            _labels *= decay;
            _bad *= decay;
            _clockMicroseconds = timeMicroseconds;
        }
        else
        {
            weight *= decay;
        }
        _labels += weight;
        if (label == 1) _bad += weight;
    }

    public void Save(BinaryWriter writer)
    {
        writer.Write(_labels);
        writer.Write(_bad);
        writer.Write(_clockMicroseconds);
    }

    public void Load(BinaryReader reader)
    {
        _labels = reader.ReadDouble();
        _bad = reader.ReadDouble();
        _clockMicroseconds = reader.ReadInt64();
    }
}
