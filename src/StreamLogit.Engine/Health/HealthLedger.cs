using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Health.Alarms;
using StreamLogit.Engine.Health.Cohorts;
using StreamLogit.Engine.Health.Detection;
using StreamLogit.Engine.Health.Drift;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Health.Slices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Counts what happens and keeps the sums from which health is told, always of the probabilities that were published. Labels are counted in short runs; what is counted, and
/// every bit of it, is the same however long the runs are, so anybody may look or save at any time.
/// </summary>
internal sealed class HealthLedger
{
    private const string Part = "health/counts";
    private const long MicrosecondsOfMinute = 60_000_000;
    private const long MinutesOfHour = 60;
    private const long MinutesOfDay = 24 * MinutesOfHour;
    private const long MostMinutesTogether = 5;
    private const double FewRecords = 8;

    private readonly HealthOptions _options;
    private readonly ImmutableArray<string> _settingNames;
    private readonly HealthRow _row;
    private readonly RollUp _stream;
    private readonly double[] _open; // the numbers of the open minute
    private readonly Tally _openTally;
    private readonly SettingShares _settingShares;
    private readonly LastLabels _last;
    private readonly LabelRun _waiting = new(); // labels that are to be counted in one run
    private readonly SlicedField[] _slices;
    private readonly CohortLedger _cohorts;
    private readonly DriftLedger _drift;
    private readonly ChangeDetectors _detectors;
    private readonly AlarmWatch _alarms;
    private readonly AlarmMetrics _alarmMetrics;
    private readonly HealthReader _reader;
    private readonly long[] _rejects = new long[(int)Enum.GetValues<RejectReason>().Max() + 1];
    private BaseRate _baseRate;
    private long _labelled;
    private OpenMinutes _time = OpenMinutes.None;

    public HealthLedger(EngineDefinition definition, RecordSchema schema, ImmutableArray<string> settingNames)
    {
        _options = definition.Health;
        _settingNames = settingNames;
        var levels = HealthLevels.Of(_options);
        _row = new HealthRow(settingNames.Length);
        _stream = _row.CreateRollUp("health/stream", levels);
        _open = _stream.Levels[0].Numbers;
        _openTally = _stream.Levels[0].Tally;
        Settings = new SettingTotals(settingNames.Length);
        _settingShares = new SettingShares(Settings);
        _last = new LastLabels(_options.LastLabels);
        _slices = [.. _options.Slices.Select(path => new SlicedField(path, schema.IndexOf(path), _options.SliceValues, levels))];
        _cohorts = new CohortLedger(_options.History);
        _drift = new DriftLedger(definition, schema);
        _detectors = new ChangeDetectors(_options.LabelsPerFalseAlarm, _options.DetectAfterLabels);
        _alarms = new AlarmWatch(_options.Alarms);
        _alarmMetrics = new AlarmMetrics(_stream, _row, _slices, _drift, _detectors);
        _reader = new HealthReader(_options, settingNames, _row, _stream, _settingShares, _last, _slices, _drift);
    }

    /// <summary>Whether anything but the number of labels is counted. Off only to measure what counting costs.</summary>
    public bool IsOn { get; set; } = true;

    /// <summary>Labels learned.</summary>
    public long Labelled => _labelled;

    /// <summary>What the settings of the bank have come to. To be filled in before <see cref="StartMinute"/> and <see cref="Snapshot"/>.</summary>
    public SettingTotals Settings { get; }

    private double OpenRecords
    {
        get
        {
            ref var stream = ref HealthRow.Stream(_open);
            return stream.Events + stream.Rejects + HealthRow.Labels(_open).Count + _waiting.Count;
        }
    }

    /// <summary>Whether the clock has left the open minute, so that <see cref="TryKeepOpen"/> is to be asked, and then <see cref="StartMinute"/> is due.</summary>
    public bool IsMinuteOver(long clockMicroseconds) => clockMicroseconds >= _time.MinuteEnd && IsOn;

    /// <summary>
    /// Lets a minute with fewer than eight records stay open for those after it, up to five of the same hour, so that slow streams are not all bookkeeping.
    /// </summary>
    /// <returns>Whether the minute of the clock is open now together with those before it.</returns>
    public bool TryKeepOpen(long clockMicroseconds)
    {
        long minute = MinuteOf(clockMicroseconds);
        if (minute - _time.First >= MostMinutesTogether || minute >= _time.HourEnd || OpenRecords >= FewRecords) return false;
        Enter(minute);
        return true;
    }

    /// <summary>Closes the minutes that are open and opens that of the clock.</summary>
    public void StartMinute(long clockMicroseconds)
    {
        long minute = MinuteOf(clockMicroseconds);
        bool isFirst = _time.MinuteEnd == long.MinValue;
        Enter(minute);

        CountWaiting();
        _cohorts.CountEvents(HealthRow.Stream(_open).Events);
        if (!isFirst && !_stream.Levels[0].IsOpenEmpty)
        {
            _settingShares.AddTo(_open, Math.Min(minute - _time.First, MostMinutesTogether));
            _settingShares.Close();
        }
        bool isNewHour = minute >= _time.HourEnd, isNewDay = minute >= _time.DayEnd;
        if (isNewHour) _time.HourEnd = (WholeDivision.Floor(minute, MinutesOfHour) + 1) * MinutesOfHour;
        if (isNewDay) _time.DayEnd = (WholeDivision.Floor(minute, MinutesOfDay) + 1) * MinutesOfDay;
        _stream.MoveTo(minute);
        foreach (var field in _slices) field.MoveTo(minute, isNewDay && !isFirst);
        if (isNewHour)
        {
            _cohorts.MoveTo(WholeDivision.Floor(minute, MinutesOfHour));
            _drift.StartHour(minute);
        }
        _time.First = minute;
        if (!isFirst && !_alarms.IsEmpty) _alarms.Look(minute - 1, _alarmMetrics);
    }

    /// <summary>Counts an event that was scored.</summary>
    /// <returns>The codes of its slices, to be kept until its label comes.</returns>
    public ulong CountEvent(RecordBatch records, int record, VectorBuilder vector, double logOdds, double probability, bool isAlert, long clockMicroseconds)
    {
        if (!IsOn) return 0;
        ref var sums = ref HealthRow.Stream(_open);
        sums.Events++;
        sums.Probability += probability;
        if (isAlert) sums.Alerts++;
        if (vector.UnseenFeatures.Length > 0) _drift.CountUnseen(vector, clockMicroseconds);
        if (_drift.IsNextCounted()) _drift.Count(records, record, vector, logOdds, clockMicroseconds);
        ulong codes = 0;
        for (int i = 0; i < _slices.Length; i++) codes |= (ulong)_slices[i].CodeOf(records, record) << (16 * i);
        return codes;
    }

    public void CountReject(RejectReason reason)
    {
        _rejects[(int)reason]++;
        if (_time.MinuteEnd == long.MinValue) return; // there is no time yet to count it at
        HealthRow.Stream(_open).Rejects++;
        _openTally.Use(HealthRow.FirstRejectCell + (int)reason)++;
    }

    /// <summary>Counts events whose wait ended without a label.</summary>
    public void CountExpired(int events) => HealthRow.Stream(_open).Expired += events;

    /// <summary>Counts a label against the log-odds that were published for its event, at the clock, whose minute is open.</summary>
    /// <returns>Where it was counted.</returns>
    public LabelCount CountLabel(in CountedLabel label)
    {
        double baseRate = _baseRate.Probability;
        _baseRate.Learn(label.Label, label.Weight);
        var count = new LabelCount((int)_time.Present, (uint)_labelled, baseRate, (float)label.Weight);
        _labelled++;
        if (!IsOn) return count;
        _waiting.Add(label, baseRate);
        if (_waiting.Count == LabelRun.Capacity) CountWaiting();
        return count;
    }

    /// <summary>Counts a label as its opposite, in all sums that still hold its time. The change detectors stay as they are.</summary>
    /// <param name="counted">Where it was counted.</param>
    /// <param name="label">What it is now; the clock and the delay do not matter.</param>
    /// <returns>How it is counted now.</returns>
    public LabelCount CorrectLabel(in LabelCount counted, in CountedLabel label)
    {
        CountWaiting();
        var wrong = label;
        wrong.Label = 1 - label.Label;
        wrong.Weight = counted.Weight;
        _baseRate.Ones += label.Weight * label.Label - wrong.Weight * wrong.Label;
        _baseRate.Labels += label.Weight - wrong.Weight;
        var correction = new LabelCorrection(wrong, label, counted.BaseRate);
        _stream.Change(counted.Minute, correction.Sums, correction.Bin, correction.Cell);
        for (int i = 0; i < _slices.Length; i++)
            _slices[i].At((ushort)(label.Slices >> (16 * i))).RollUp.Change(counted.Minute, correction.Sums, correction.Bin, correction.Cell);
        _last.Replace(_labelled - (uint)((uint)_labelled - counted.Sequence), correction.Right);
        _cohorts.Change(label.ScoredAtMicroseconds, correction.OfCohort);
        HealthRow.Stream(_open).Corrections++;
        return counted with { Weight = (float)label.Weight };
    }

    /// <summary>Says that a label has come of an event whose label was only assumed, whatever it says.</summary>
    /// <param name="scoredAtMicroseconds">When its event was scored.</param>
    /// <param name="standsFor">How many events it stands for.</param>
    public void CountConfirmed(long scoredAtMicroseconds, int standsFor)
    {
        if (IsOn) _cohorts.Change(scoredAtMicroseconds, new CohortSums { Labelled = standsFor });
    }

    /// <summary>The figures of now.</summary>
    public HealthSnapshot Snapshot(long? clockMicroseconds)
    {
        CountWaiting();
        long clock = clockMicroseconds ?? 0;
        return _reader.Read(MinuteOf(clock), clock, Math.Clamp(MinuteOf(clock) - _time.First + 1, 1, MostMinutesTogether)) with
        {
            ClockMicroseconds = clockMicroseconds,
            Labelled = Labelled,
            Rejected = _rejects.Sum(),
            RejectsByReason = Enumerable.Range(0, _rejects.Length).Where(r => _rejects[r] > 0)
                .ToImmutableSortedDictionary(r => ((RejectReason)r).Code(), r => _rejects[r], StringComparer.Ordinal),
            Cohorts = _cohorts.Figures(clock, HealthRow.Stream(_open).Events),
            Detectors = _detectors.Figures,
            Changes = _detectors.Changes,
            Alarms = _alarms.Figures,
            AlarmChanges = _alarms.Changes,
        };
    }

    public void Save(StateBlocks changes)
    {
        CountWaiting();
        using var bytes = new MemoryStream();
        using var writer = new BinaryWriter(bytes);
        _time.Save(writer);
        writer.Write(_baseRate.Ones);
        writer.Write(_baseRate.Labels);
        writer.Write(_labelled);
        writer.Write(_rejects.Length);
        foreach (long count in _rejects) writer.Write(count);
        writer.Write(_settingNames.Length);
        foreach (string name in _settingNames) writer.Write(name);
        _settingShares.Save(writer);
        changes.Put(Part, 0, bytes.ToArray());
        _stream.Save(changes);
        _last.Save(changes);
        foreach (var field in _slices) field.Save(changes);
        _cohorts.Save(changes);
        _drift.Save(changes);
        _detectors.Save(changes);
        _alarms.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        byte[] bytes = state.Find(Part, 0) ?? throw new InvalidStateException($"the state has no {Part}");
        using var reader = new BinaryReader(new MemoryStream(bytes));
        _time = OpenMinutes.Read(reader);
        _baseRate.Ones = reader.ReadDouble();
        _baseRate.Labels = reader.ReadDouble();
        _labelled = reader.ReadInt64();
        int reasons = reader.ReadInt32();
        for (int i = 0; i < reasons; i++) _rejects[i] = reader.ReadInt64();
        var names = new string[reader.ReadInt32()];
        foreach (ref string name in names.AsSpan()) name = reader.ReadString();
        _settingShares.Load(reader, [.. names.Select(name => _settingNames.IndexOf(name))]);
        _stream.Load(state, HealthRow.PlacesOf(names, _settingNames.AsSpan()));
        _last.Load(state);
        foreach (var field in _slices) field.Load(state);
        _cohorts.Load(state);
        _drift.Load(state);
        _detectors.Load(state);
        _alarms.Load(state);
    }

    private void CountWaiting()
    {
        if (_waiting.Count == 0) return;
        _waiting.ComputeBaseRate();
        _waiting.ComputeLosses();
        _waiting.AddTo(ref HealthRow.Labels(_open), _openTally);
        _last.Add(_waiting);
        _detectors.Add(_waiting);
        CountDelays();
        for (int field = 0; field < _slices.Length; field++)
        {
            for (int i = 0; i < _waiting.Count; i++)
            {
                var slice = _slices[field].At((ushort)(_waiting.Slices[i] >> (16 * field))).RollUp;
                _waiting.AddTo(i, ref LabelSums.Of(slice.Numbers), slice.Tally);
            }
        }
        _cohorts.CountLabels(_waiting);
        _drift.CountLabels(_waiting);
        _waiting.Clear();
    }

    private void CountDelays()
    {
        ref var stream = ref HealthRow.Stream(_open);
        ReadOnlySpan<long> clocks = _waiting.Clocks, scoredAt = _waiting.ScoredAt;
        var standsFor = _waiting.StandsFor;
        for (int i = 0; i < clocks.Length; i++)
        {
            long delay = clocks[i] - scoredAt[i];
            if (delay <= 0 || standsFor[i] == 0) continue;
            stream.LateLabels++;
            stream.DelaySeconds += delay / 1e6;
            _openTally.Use(HealthRow.FirstDelayCell + DelayBins.Of(delay))++;
        }
    }

    private void Enter(long minute)
    {
        _time.Present = minute;
        _time.MinuteEnd = (minute + 1) * MicrosecondsOfMinute;
    }

    private static long MinuteOf(long microseconds) => WholeDivision.Floor(microseconds, MicrosecondsOfMinute);
}
