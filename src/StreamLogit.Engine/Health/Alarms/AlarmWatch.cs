using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.Alarms;

/// <summary>
/// Looks at the alarms of the definition when a minute of the stream's clock closes. An alarm is raised when its metric was beyond the bound at every look for as long as it
/// says, and falls quiet at the first look at which it is not. Where the window holds too few labels it stays as it is.
/// </summary>
internal sealed class AlarmWatch(ImmutableArray<AlarmOptions> alarms)
{
    private const string Part = "health/alarms";
    private const int KeptChanges = 100;
    private const long MicrosecondsOfMinute = 60_000_000;

    private readonly AlarmState[] _states = [.. alarms.Select(alarm => new AlarmState(alarm))];
    private readonly List<AlarmChange> _changes = [];
    private long _number;

    public bool IsEmpty => _states.Length == 0;

    public ImmutableArray<AlarmFigures> Figures => [.. _states.Select(state => state.Figures)];

    /// <summary>The changes of alarms, the latest first.</summary>
    public ImmutableArray<AlarmChange> Changes => [.. Enumerable.Reverse(_changes)];

    /// <summary>Looks at every alarm that is due.</summary>
    /// <param name="lastMinute">The minute that closed last; windows end with it.</param>
    /// <param name="metrics">Reads metrics.</param>
    public void Look(long lastMinute, AlarmMetrics metrics)
    {
        foreach (var state in _states)
        {
            if (lastMinute - state.LookedAtMinute < state.MinutesBetweenLooks) continue;
            state.LookedAtMinute = lastMinute;
            Look(state, metrics.Read(state.Alarm, lastMinute), (lastMinute + 1) * MicrosecondsOfMinute);
        }
    }

    public void Save(StateBlocks changes)
    {
        if (IsEmpty) return;
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        writer.Write(_number);
        writer.Write(_states.Length);
        foreach (var state in _states) state.Save(writer);
        writer.Write(_changes.Count);
        foreach (var change in _changes)
        {
            writer.Write(change.Number);
            writer.Write(change.Name);
            writer.Write(change.AtMicroseconds);
            writer.Write(change.IsRaised);
            writer.Write(change.Value);
            writer.Write(change.Sentence);
        }
        changes.Put(Part, 0, bytes.ToArray());
    }

    /// <summary>Takes up the states of alarms that are still in the definition under their name.</summary>
    public void Load(StateBlocks saved)
    {
        if (saved.Find(Part, 0) is not { } bytes) return;
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _number = reader.ReadInt64();
        for (int count = reader.ReadInt32(); count > 0; count--)
        {
            string name = reader.ReadString();
            (_states.FirstOrDefault(state => state.Alarm.Name == name) ?? new AlarmState(Gone(name))).Load(reader);
        }
        for (int count = reader.ReadInt32(); count > 0; count--)
        {
            _changes.Add(new AlarmChange(
                reader.ReadInt64(), reader.ReadString(), reader.ReadInt64(), reader.ReadBoolean(), reader.ReadDouble(), reader.ReadString()));
        }
    }

    private static AlarmOptions Gone(string name) =>
        new() { Name = name, Metric = AlarmMetric.LogLoss, Window = new HealthWindow("", 0), Bound = 0 };

    private void Look(AlarmState state, AlarmReading reading, long clockMicroseconds)
    {
        var alarm = state.Alarm;
        state.Value = reading.Value;
        state.Count = reading.Count;
        state.SinceMicroseconds ??= clockMicroseconds;
        if (double.IsNaN(reading.Value) || reading.Count < alarm.Minimum)
        {
            state.BeyondSinceMicroseconds = null;
            state.Found(reading, isBeyond: false);
            return;
        }
        bool isBeyond = alarm.IsAbove ? reading.Value > alarm.Bound : reading.Value < alarm.Bound;
        state.BeyondSinceMicroseconds = isBeyond ? state.BeyondSinceMicroseconds ?? clockMicroseconds : null;
        bool isRaised = isBeyond && (state.IsRaised || clockMicroseconds - state.BeyondSinceMicroseconds >= alarm.ForMicroseconds);
        state.Found(reading, isBeyond);
        if (isRaised == state.IsRaised) return;
        state.IsRaised = isRaised;
        state.SinceMicroseconds = clockMicroseconds;
        if (_changes.Count == KeptChanges) _changes.RemoveAt(0);
        _changes.Add(new AlarmChange(++_number, alarm.Name, clockMicroseconds, isRaised, reading.Value, state.Sentence));
    }
}
